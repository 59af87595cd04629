package exact

import (
	"fmt"
	"math"
	"math/big"
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// Kind is a family of terms or a tracked operator: a set of instances, one per
// cell or, for an operator with an extent, one per transverse position.
type Kind struct {
	Name  string
	Group string
	// Energy is the energy of an instance by level; nil for a tracked operator.
	// Where couplings vary from term to term it is that of the common coupling,
	// and Instance.Energy counts.
	Energy []float64
	shape  []float64 // energy over -J by level, as given
	Order  bool      // its sum is the magnetization
	// Line tells an operator with an extent from one that is local to a cell.
	Line bool
	// Index counts families (energy families with J != 0, then local tracked
	// operators) or, for a line, lines, as kinetic.Generator does.
	Index     int
	Positions int // cells, or transverse positions
	First     int // its instances are First .. First+Count-1
	Count     int // how many exist on this lattice
	extent    [lattice.MaxAxes]bool
}

// Instance is one term of the Hamiltonian or one tracked operator.
type Instance struct {
	Kind     int // index into System.Kinds
	Position int // cell, or transverse position
	Factors  []Factor
	// Energy is its energy by level; nil for a tracked operator.
	Energy []float64
	exact  []*big.Rat
}

// Factor is X^X Z^Z on one site of the lattice; site = cell*Sites + site of the
// cell.
type Factor struct {
	Site, X, Z int
}

// enumerate lists the kinds and their instances: energy families with a
// coupling, local tracked operators, lines.
func (s *System) enumerate() error {
	add := func(k Kind, op pauli.Operator, cut kinetic.Cut, energies func(cell int) []*big.Rat) {
		k.First, k.extent = len(s.Instances), op.Extent
		positions := transverse(s.Spec.Lattice, op.Extent)
		k.Positions = len(positions)
		for p, at := range positions {
			if f, ok := s.fold(op, at, cut); ok {
				exact := energies(p)
				s.Instances = append(s.Instances, Instance{len(s.Kinds), p, f, floats(exact), exact})
			}
		}
		k.Count = len(s.Instances) - k.First
		s.Kinds = append(s.Kinds, k)
	}
	families := 0
	for i, f := range s.Spec.Families {
		if f.Coupling == 0 && f.Couplings == nil {
			continue
		}
		k := Kind{Name: f.Name, Group: f.Group, Index: families, shape: f.Shape}
		families++
		energies, err := termEnergies(f, s.Spec)
		if err != nil {
			return fmt.Errorf("family %d (%s): %w", i, f.Name, err)
		}
		levels, err := levelEnergies(f.Coupling, f.Shape, s.Spec.Levels)
		if err != nil {
			return fmt.Errorf("family %d (%s): %w", i, f.Name, err)
		}
		k.Energy = floats(levels)
		add(k, f.Operator, f.Cut, energies)
	}
	none := func(int) []*big.Rat { return nil }
	for _, t := range s.Spec.Tracked {
		if !t.Operator.Extended() {
			add(Kind{Name: t.Name, Order: t.Order, Index: families}, t.Operator, kinetic.Drop, none)
			families++
		}
	}
	lines := 0
	for _, t := range s.Spec.Tracked {
		if t.Operator.Extended() {
			add(Kind{Name: t.Name, Order: t.Order, Index: lines, Line: true}, t.Operator, kinetic.Drop, none)
			lines++
		}
	}
	return nil
}

// termEnergies returns a function that gives the energies by level of the term
// at a cell. Terms of one coupling share them.
func termEnergies(f kinetic.FamilySpec, spec kinetic.Spec) (func(cell int) []*big.Rat, error) {
	if f.Couplings == nil {
		levels, err := levelEnergies(f.Coupling, f.Shape, spec.Levels)
		return func(int) []*big.Rat { return levels }, err
	}
	if spec.Levels != 2 || len(f.Couplings) != spec.Lattice.Cells() {
		return nil, fmt.Errorf("%d couplings for %d cells of %d levels", len(f.Couplings), spec.Lattice.Cells(), spec.Levels)
	}
	by := map[float64][]*big.Rat{}
	for _, j := range f.Couplings {
		if math.IsNaN(j) || math.IsInf(j, 0) {
			return nil, fmt.Errorf("the coupling %v", j)
		}
		levels, err := levelEnergies(j, f.Shape, spec.Levels)
		if err != nil {
			return nil, err
		}
		by[j] = levels
	}
	return func(cell int) []*big.Rat { return by[f.Couplings[cell]] }, nil
}

// levelEnergies returns E(s), s = 0..q-1, as exact rationals.
func levelEnergies(coupling float64, shape []float64, q int) ([]*big.Rat, error) {
	j := bath.Exact(coupling)
	if shape == nil {
		if q != 2 {
			return nil, fmt.Errorf("%d levels need a shape", q)
		}
		return []*big.Rat{new(big.Rat).Neg(j), j}, nil
	}
	if len(shape) != q {
		return nil, fmt.Errorf("a shape of %d entries for %d levels", len(shape), q)
	}
	out := make([]*big.Rat, q)
	for l, x := range shape {
		out[l] = new(big.Rat).Mul(j, bath.Exact(x))
		out[l].Neg(out[l])
	}
	return out, nil
}

func floats(r []*big.Rat) []float64 {
	if r == nil {
		return nil
	}
	out := make([]float64, len(r))
	for i := range r {
		out[i], _ = r[i].Float64()
	}
	return out
}

// transverse lists the positions of an operator with the given extent: the
// cells whose coordinates along extended axes are 0, axis 0 fastest.
func transverse(l lattice.Lattice, extent [lattice.MaxAxes]bool) []lattice.Offset {
	var out []lattice.Offset
	for i := range l.Cells() {
		c := l.Coord(i)
		inside := true
		for a, e := range extent {
			inside = inside && !(e && c[a] != 0)
		}
		if inside {
			out = append(out, c)
		}
	}
	return out
}

// fold places an operator at a cell: factors that fall on one site multiply,
// and an operator with an extent is the product of its translates along it. ok
// is false for an operator that the lattice does not have: one that would
// leave it, or meet an absent site, at an edge where it is not truncated, or of
// which truncation leaves nothing.
func (s *System) fold(op pauli.Operator, at lattice.Offset, cut kinetic.Cut) (f []Factor, ok bool) {
	l, q := s.Spec.Lattice, s.Spec.Levels
	factors := op.Factors()
	if len(factors) == 0 {
		return nil, true // the constant 1
	}
	powers := map[int]Factor{}
	for i := range l.Cells() {
		shift := l.Coord(i)
		skip := false
		for a, e := range op.Extent {
			skip = skip || !e && shift[a] != 0
		}
		if skip {
			continue
		}
		for _, m := range factors {
			missing := s.missing(m.Site, at.Add(shift).Add(m.Exp))
			if slices.ContainsFunc(missing, func(axis int) bool { return cut.Along(axis) != kinetic.Truncate }) {
				return nil, false
			}
			if len(missing) > 0 {
				continue
			}
			cell, _ := l.Wrap(at.Add(shift), m.Exp)
			n := l.Index(cell)*s.Spec.Sites + m.Site
			p := powers[n]
			powers[n] = Factor{Site: n, X: p.X + m.X, Z: p.Z + m.Z}
		}
	}
	if len(powers) == 0 {
		return nil, false
	}
	for _, p := range powers {
		p.X, p.Z = mod(p.X, q), mod(p.Z, q)
		if p.X != 0 || p.Z != 0 {
			f = append(f, p)
		}
	}
	slices.SortFunc(f, func(a, b Factor) int { return a.Site - b.Site })
	return f, true
}

// missing lists the open axes along which a site of the cell at a position
// does not exist: beyond the edge, or at an edge that lacks the site.
func (s *System) missing(site int, at lattice.Offset) []int {
	var out []int
	for a, open := range s.Spec.Lattice.Open {
		x, last := at[a], s.Spec.Lattice.Size[a]-1
		gone := x < 0 || x > last
		for _, r := range s.Spec.Absent {
			edge := 0
			if r.Last {
				edge = last
			}
			gone = gone || r.Site == site && r.Axis == a && x == edge
		}
		if open && gone {
			out = append(out, a)
		}
	}
	return out
}

func mod(a, q int) int { return ((a % q) + q) % q }
