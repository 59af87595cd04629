package exact_test

import (
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"

	"sojourn/kinetic"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/kinetictest"
)

// The energies of the listed states against the eigenvalues of the Hamiltonian
// itself, as a matrix on the whole Hilbert space: which values terms can have
// together, phases of their products and all.
func TestHamiltonian(t *testing.T) {
	tried, frustrated := 0, 0
	for seed := uint64(0); tried < 300; seed++ {
		spec := kinetictest.RandomSpec(seed, kinetictest.Size{MinStates: 2, MaxStates: 1 << 12, MaxCells: 5})
		if seed%3 == 0 {
			spec = kinetictest.RandomSigns(seed, kinetictest.Size{MinStates: 2, MaxStates: 1 << 12, MaxCells: 5})
		}
		if spec.Lattice.Cells()*spec.Sites > 5 {
			continue
		}
		// All Pauli operators, so that nothing is out of reach.
		spec.Bath = kinetictest.Paulis("XYZ", kinetictest.HeatBath)
		spec.Beta = 0.1
		s := newSystem(t, spec)
		st, err := s.Orbit(1 << 12)
		if err != nil {
			continue
		}
		tried++
		if seed%3 != 0 && slices.Contains(s.Reference, 1) {
			frustrated++
		}
		got, want := distinct(st.Energy), distinct(eigenvalues(t, s))
		same := len(got) == len(want)
		for i := range got {
			same = same && math.Abs(got[i]-want[i]) < 1e-9
		}
		if !same {
			t.Errorf("seed %d: energies %v, eigenvalues of the Hamiltonian %v\n%+v", seed, got, want, spec)
		}
	}
	if frustrated < 5 {
		t.Errorf("only %d models whose terms cannot all be at level 0", frustrated)
	}
}

func distinct(x []float64) []float64 {
	x = slices.Sorted(slices.Values(x))
	return slices.CompactFunc(x, func(a, b float64) bool { return math.Abs(a-b) < 1e-9 })
}

// eigenvalues diagonalises sum_k E_k(s_k), an operator with the eigenvalue
// (-1)^s contributing (E(0)+E(1))/2 + (E(0)-E(1))/2 times itself. The complex
// matrix A + iB stands as the real one ((A, -B), (B, A)).
func eigenvalues(t *testing.T, s *exact.System) []float64 {
	t.Helper()
	n := 1 << s.Sites()
	h := mat.NewSymDense(2*n, nil)
	add := func(i, j int, v complex128) {
		for _, e := range []struct {
			i, j int
			v    float64
		}{{i, j, real(v)}, {n + i, n + j, real(v)}, {n + i, j, imag(v)}} {
			if e.i >= e.j {
				h.SetSym(e.i, e.j, h.At(e.i, e.j)+e.v)
			}
		}
	}
	for i, term := range s.Instances {
		if term.Energy == nil {
			continue
		}
		half := complex((term.Energy[0]-term.Energy[1])/2, 0)
		if signed(s, i) {
			half = -half
		}
		for column := range n {
			add(column, column, complex((term.Energy[0]+term.Energy[1])/2, 0))
			row, value := column, half
			for _, f := range term.Factors {
				down := column>>f.Site&1 == 1
				if f.Z == 1 && down {
					value = -value
				}
				if f.X == 1 && f.Z == 1 {
					value *= 1i // Y = i X Z
				}
				row ^= f.X << f.Site
			}
			add(row, column, value)
		}
	}
	var e mat.EigenSym
	if !e.Factorize(h, false) {
		t.Fatal("no eigenvalues")
	}
	return e.Values(nil)
}

// signed reports whether the level of an instance is that of -1 times the
// operator.
func signed(s *exact.System, instance int) bool {
	k := s.Kinds[s.Instances[instance].Kind]
	present := slices.DeleteFunc(slices.Clone(s.Spec.Families), func(f kinetic.FamilySpec) bool { return f.Coupling == 0 && f.Couplings == nil })
	signs := present[k.Index].Signs
	return signs != nil && signs[s.Instances[instance].Position] == 1
}
