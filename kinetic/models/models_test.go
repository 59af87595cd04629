package models

import (
	"fmt"
	"strings"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
)

func specOf(t testing.TB, name string, size []int, open []bool, p Values) kinetic.Spec {
	t.Helper()
	m, ok := Find(name)
	if !ok {
		t.Fatalf("no model %q", name)
	}
	l, err := lattice.New(size, open)
	if err != nil {
		t.Fatal(err)
	}
	h, err := m.Build(l, p)
	if err != nil {
		t.Fatal(err)
	}
	s := kinetic.Spec{
		Lattice: l, Levels: h.Levels, Sites: h.Sites, Families: h.Families, Tracked: h.Tracked, Absent: h.Absent, Beta: 0.5}
	law := bath.Law{Kind: bath.HeatBath, Rate: 1}
	add := func(name string, x, z int) {
		s.Bath = append(s.Bath, kinetic.BathOperator{Name: name, X: x, Z: z, Law: law}.Powers(h.Powers, h.Levels)...)
	}
	add("X", 1, 0)
	if !m.Classical {
		add("Y", 1, 1)
		add("Z", 0, 1)
	}
	return s
}

// edgesOf returns open axes by the bits of mask; ok is false if the model needs
// others.
func edgesOf(m Model, axes, mask int) (open []bool, ok bool) {
	open = make([]bool, axes)
	for a := range open {
		open[a] = mask>>a&1 == 1
	}
	return open, !m.Open || mask == 1<<axes-1
}

// sizesOf lists small lattices of n axes, lengths 1, 2, odd and even.
func sizesOf(n int) [][]int {
	return map[int][][]int{
		1: {{1}, {2}, {3}, {4}, {7}},
		2: {{1, 1}, {1, 3}, {2, 2}, {3, 2}, {3, 4}, {5, 5}},
		3: {{1, 1, 1}, {2, 2, 2}, {2, 1, 3}, {3, 4, 2}, {3, 3, 3}},
		4: {{1, 1, 1, 1}, {2, 2, 2, 2}, {3, 2, 1, 3}, {3, 3, 3, 2}},
	}[n]
}

// instance is a term or an instance of a tracked operator.
type instance struct {
	name    string
	tracked bool
	factors []kinetic.SiteFactor
}

func instances(s kinetic.Spec) []instance {
	var out []instance
	for _, f := range s.Families {
		for cell := range s.Lattice.Cells() {
			if factors, ok := s.Term(f.Operator, f.Cut, cell); ok {
				out = append(out, instance{f.Name, false, factors})
			}
		}
	}
	for _, tr := range s.Tracked {
		for p := range s.Positions(tr.Operator) {
			if factors, ok := s.Term(tr.Operator, kinetic.Drop, s.PositionCell(tr.Operator, p)); ok {
				out = append(out, instance{tr.Name, true, factors})
			}
		}
	}
	return out
}

// TestCommutation checks every pair of terms, and every tracked operator with
// every term and with its own translates, as folded and cut, on tori and with
// some or all axes open.
func TestCommutation(t *testing.T) {
	for _, m := range All() {
		for axes := m.MinAxes; axes <= m.MaxAxes; axes++ {
			for _, size := range sizesOf(axes) {
				for mask := range 1 << axes {
					open, ok := edgesOf(m, axes, mask)
					if !ok {
						continue
					}
					s := specOf(t, m.Name, size, open, Values{"next": 0.5, "field": 0.25})
					checkCommutation(t, fmt.Sprintf("%s %v open %v", m.Name, size, open), s)
					for q := 2; hasLevels(m) && q <= 7; q++ {
						s := specOf(t, m.Name, size, open, Values{"levels": float64(q), "field": 0.25})
						checkCommutation(t, fmt.Sprintf("%s %v open %v, %d levels", m.Name, size, open, q), s)
					}
				}
			}
		}
	}
}

func hasLevels(m Model) bool {
	for _, p := range m.Parameters {
		if p.Name == "levels" {
			return true
		}
	}
	return false
}

func checkCommutation(t *testing.T, where string, s kinetic.Spec) {
	t.Helper()
	list := instances(s)
	meets := make([][]int, s.Lattice.Cells()*s.Sites)
	for i, a := range list {
		for _, f := range a.factors {
			for _, j := range meets[f.Site] {
				b := list[j]
				if a.tracked && b.tracked && a.name != b.name {
					continue
				}
				if kinetic.Commutator(a.factors, b.factors, s.Levels) != 0 {
					t.Errorf("%s: %s and %s do not commute", where, a.name, b.name)
					return
				}
			}
			meets[f.Site] = append(meets[f.Site], i)
		}
	}
}

// TestCompile checks that the tables hold every model with every bath operator,
// and that what the models say of themselves is complete.
func TestCompile(t *testing.T) {
	names := map[string]bool{}
	for _, m := range All() {
		if m.Name == "" || m.Summary == "" || m.Formula == "" || m.Ground == "" || m.Paper == "" || names[m.Name] {
			t.Errorf("model %q is not described, or there twice", m.Name)
		}
		names[m.Name] = true
		for _, p := range m.Parameters {
			if p.Name == "" || p.Doc == "" {
				t.Errorf("%s: a parameter is not described", m.Name)
			}
		}
		for axes := m.MinAxes; axes <= m.MaxAxes; axes++ {
			for _, size := range sizesOf(axes) {
				for _, mask := range []int{0, 1<<axes - 1} {
					open, ok := edgesOf(m, axes, mask)
					if !ok {
						continue
					}
					s := specOf(t, m.Name, size, open, nil)
					if _, err := kinetic.Compile(s); err != nil {
						t.Errorf("%s %v open %v: %v", m.Name, size, open, err)
					}
					for _, f := range s.Families {
						for _, factor := range f.Operator.Factors() {
							if m.Classical && factor.X != 0 {
								t.Errorf("%s: family %s is not diagonal", m.Name, f.Name)
							}
						}
					}
				}
			}
		}
	}
}

// TestEncoded compares the number of encoded qubits, log2 of the ground states,
// with values from the literature.
func TestEncoded(t *testing.T) {
	for _, c := range []struct {
		name   string
		size   []int
		want   float64
		source string
	}{
		{"ising", []int{1}, 1, "elementary"},
		{"ising", []int{7}, 1, "elementary"},
		{"ising", []int{2, 2}, 1, "elementary"},
		{"ising", []int{4096, 4096}, 1, "elementary"},
		{"ising", []int{3, 4, 5}, 1, "elementary"},
		{"ising", []int{3, 2, 3, 3}, 1, "elementary"},
		{"toric-code", []int{1, 1}, 2, "Dennis et al., J. Math. Phys. 43, 4452 (2002)"},
		{"toric-code", []int{2, 2}, 2, "same"},
		{"toric-code", []int{3, 5}, 2, "same"},
		{"toric-code", []int{1000, 1000}, 2, "same"},
		{"toric-code", []int{2, 2, 2}, 3, "same"},
		{"toric-code", []int{3, 4, 5}, 3, "same"},
		{"toric-code", []int{24, 24, 24}, 3, "same"},
		{"toric-code", []int{2, 2, 2, 2}, 6, "same"},
		{"toric-code", []int{3, 3, 3, 3}, 6, "same"},
		{"toric-code", []int{4, 3, 2, 5}, 6, "same"},
		{"square-plaquette", []int{4, 4}, 7, "Lx + Ly - 1: a row and a column fix the rest, elementary"},
		{"square-plaquette", []int{5, 3}, 7, "same"},
		{"triangular-plaquette", []int{4, 4}, 0, "Newman, Moore, Phys. Rev. E 60, 5068 (1999): one ground state for powers of 2"},
		{"triangular-plaquette", []int{64, 64}, 0, "same"},
		{"triangular-plaquette", []int{3, 3}, 2, "same: L = 3 has 4"},
		{"ising-gauge", []int{3, 3}, 9 - 1 + 2, "cocycles: N - 1 corner flips and d across, elementary"},
		{"ising-gauge", []int{2, 3, 4}, 24 - 1 + 3, "same"},
		{"ising-gauge", []int{2, 2, 2, 2}, 16 - 1 + 4, "same"},
		{"colour-code", []int{1, 1}, 4, "Bombin, Martin-Delgado, Phys. Rev. Lett. 97, 180501 (2006)"},
		{"colour-code", []int{2, 2}, 4, "same"},
		{"colour-code", []int{3, 4}, 4, "same"},
		{"colour-code", []int{16, 16}, 4, "same"},
		{"x-cube", []int{2, 2, 2}, 9, "6L - 3: Vijay, Haah, Fu, Phys. Rev. B 94, 235157 (2016), from memory"},
		{"x-cube", []int{3, 3, 3}, 15, "same"},
		{"x-cube", []int{8, 8, 8}, 45, "same"},
		{"cubic-code", []int{2, 2, 2}, 6, "Haah, Commun. Math. Phys. 324, 351 (2013), from memory"},
		{"cubic-code", []int{3, 3, 3}, 2, "same"},
		{"cubic-code", []int{4, 4, 4}, 14, "same"},
		{"cubic-code", []int{5, 5, 5}, 2, "same"},
		{"cubic-code", []int{6, 6, 6}, 6, "same"},
		{"cubic-code", []int{7, 7, 7}, 2, "same"},
		{"cubic-code", []int{8, 8, 8}, 30, "same"},
		{"cluster", []int{5}, 0, "Briegel, Raussendorf, Phys. Rev. Lett. 86, 910 (2001): the cluster state is unique"},
		{"cluster", []int{4, 5}, 0, "same"},
		{"cluster", []int{1, 2}, 0, "same"},
		{"cluster", []int{64, 64}, 0, "same"},
		{"potts", []int{5}, 1, "log_q of the q uniform states, elementary"},
		{"potts", []int{3, 4}, 1, "same"},
		{"clock", []int{3, 4, 2}, 1, "same"},
		{"planar-code", []int{1, 1}, 1, "Bravyi, Kitaev, arXiv:quant-ph/9811052: one encoded qubit"},
		{"planar-code", []int{1, 4}, 1, "same"},
		{"planar-code", []int{2, 2}, 1, "same"},
		{"planar-code", []int{5, 3}, 1, "same"},
		{"planar-code", []int{40, 60}, 1, "same"},
	} {
		m, _ := Find(c.name)
		var open []bool
		if m.Open {
			open = []bool{true, true}
		}
		g, err := kinetic.GroundStates(specOf(t, c.name, c.size, open, nil))
		if err != nil || !g.Known || g.Encoded != c.want || !g.Satisfied || !g.Reference {
			t.Errorf("%s %v: %+v, %v; want %v (%s)", c.name, c.size, g, err, c.want, c.source)
		}
		if g.Classical != m.Classical {
			t.Errorf("%s: classical: %v", c.name, g.Classical)
		}
	}
}

// The ground states of the triangular plaquette model on an L x L torus are the
// rows that return under L steps of addition of neighbours: 2 to the degree of
// gcd((1 + x)^L + 1, x^L + 1) over two elements (M. E. J. Newman, C. Moore,
// Phys. Rev. E 60, 5068 (1999), section II).
func TestEncodedTriangular(t *testing.T) {
	for l := 1; l <= 21; l++ {
		power := uint64(1) // (1 + x)^L, bit i for x^i
		for range l {
			power ^= power << 1
		}
		a, b := power^1, uint64(1)<<l|1
		for b != 0 { // Euclid's algorithm over two elements
			for degree(a) >= degree(b) && a != 0 {
				a ^= b << (degree(a) - degree(b))
			}
			a, b = b, a
		}
		g, err := kinetic.GroundStates(specOf(t, "triangular-plaquette", []int{l, l}, nil, nil))
		if err != nil || g.Encoded != float64(degree(a)) {
			t.Errorf("L = %d: %+v, %v; want %d", l, g, err, degree(a))
		}
	}
}

func degree(p uint64) int {
	d := -1
	for ; p != 0; p >>= 1 {
		d++
	}
	return d
}

// TestLogicalOperators checks that the tracked operators of the codes are
// logical: at most as many independent ones of Z type, next to the terms, as
// there are encoded qubits, and each anticommuting with one of X type.
func TestLogicalOperators(t *testing.T) {
	for _, c := range []struct {
		name string
		size []int
		z, x int // independent tracked operators of each type
	}{
		{"toric-code", []int{3, 3}, 2, 2},
		{"toric-code", []int{2, 3, 3}, 3, 3},
		{"toric-code", []int{2, 2, 3, 2}, 6, 6},
		{"colour-code", []int{2, 3}, 4, 4},
		{"x-cube", []int{2, 2, 2}, 9, 9},
		{"x-cube", []int{3, 3, 3}, 15, 15},
		{"x-cube", []int{2, 3, 4}, 15, 15},
		{"planar-code", []int{2, 2}, 1, 1},
		{"planar-code", []int{3, 4}, 1, 1},
	} {
		m, _ := Find(c.name)
		var open []bool
		if m.Open {
			open = []bool{true, true}
		}
		s := specOf(t, c.name, c.size, open, nil)
		base, err := kinetic.GroundStates(s)
		if err != nil {
			t.Fatal(err)
		}
		counts := map[bool]float64{}
		for _, isX := range []bool{false, true} {
			with := s
			with.Families = append([]kinetic.FamilySpec(nil), s.Families...)
			for _, tr := range s.Tracked {
				if (tr.Operator.Factors()[0].X != 0) == isX {
					with.Families = append(with.Families, kinetic.FamilySpec{Name: tr.Name, Operator: tr.Operator, Coupling: 1})
				}
			}
			g, err := kinetic.GroundStates(with)
			if err != nil || !g.Known {
				t.Fatal(err, g)
			}
			counts[isX] = base.Encoded - g.Encoded
		}
		if counts[false] != float64(c.z) || counts[true] != float64(c.x) {
			t.Errorf("%s %v: %v independent of Z type, %v of X type, want %d and %d", c.name, c.size, counts[false], counts[true], c.z, c.x)
		}
		list := instances(s)
		for _, a := range list {
			if !a.tracked {
				continue
			}
			partner := false
			for _, b := range list {
				partner = partner || b.tracked && kinetic.Commutator(a.factors, b.factors, 2) != 0
			}
			if !partner {
				t.Errorf("%s %v: %s commutes with everything tracked", c.name, c.size, a.name)
			}
		}
	}
}

// A membrane of the cubic code commutes with every term and is no product of
// terms.
func TestCubicCodeMembranes(t *testing.T) {
	for _, size := range [][]int{{2, 2, 2}, {3, 3, 3}, {4, 4, 4}} {
		s := specOf(t, "cubic-code", size, nil, nil)
		base, err := kinetic.GroundStates(s)
		if err != nil {
			t.Fatal(err)
		}
		for _, tr := range s.Tracked {
			with := s
			with.Families = append(s.Families[:2:2], kinetic.FamilySpec{Name: tr.Name, Operator: tr.Operator, Coupling: 1})
			if g, err := kinetic.GroundStates(with); err != nil || g.Encoded >= base.Encoded {
				t.Errorf("%v: %s is a product of terms: %v and %v encoded qubits, %v", size, tr.Name, g.Encoded, base.Encoded, err)
			}
		}
	}
}

func TestParameters(t *testing.T) {
	s := specOf(t, "toric-code", []int{3, 3}, nil, Values{"coupling": 2, "star": 0.5})
	got := map[string]float64{}
	for _, f := range s.Families {
		got[f.Name] = f.Coupling
	}
	if got["star"] != 0.5 || got["plaquette"] != 2 {
		t.Errorf("toric code couplings: %v", got)
	}
	s = specOf(t, "ising", []int{3, 3}, nil, Values{"coupling": 2, "coupling_y": -1})
	if s.Families[0].Coupling != 2 || s.Families[1].Coupling != -1 {
		t.Errorf("anisotropic couplings: %+v", s.Families)
	}
	m, _ := Find("ising")
	l, _ := lattice.New([]int{3, 3}, nil)
	if _, err := m.Build(l, Values{"coupling_z": 1}); err == nil || !strings.Contains(err.Error(), "coupling_z means nothing") {
		t.Errorf("coupling_z on two axes: %v", err)
	}
	m, _ = Find("x-cube")
	if _, err := m.Build(l, nil); err == nil || !strings.Contains(err.Error(), "needs a lattice of 3 axes, not 2") {
		t.Errorf("x-cube on two axes: %v", err)
	}
	m, _ = Find("planar-code")
	if _, err := m.Build(l, nil); err == nil || !strings.Contains(err.Error(), "every axis must be open") {
		t.Errorf("planar code on a torus: %v", err)
	}
	m, _ = Find("potts")
	for _, q := range []float64{1, 2.5, 17} {
		if _, err := m.Build(l, Values{"levels": q}); err == nil || !strings.Contains(err.Error(), "whole number from 2 to 16") {
			t.Errorf("potts with %v levels: %v", q, err)
		}
	}
	if _, ok := Find("no-such-model"); ok {
		t.Error("found a model that is not there")
	}
}
