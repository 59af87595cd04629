package exact

import (
	"fmt"

	"sojourn/kinetic"
)

// Relations between commuting operators can forbid that all levels are 0: the
// product of XX, ZZ and YY on two sites is -1. The reference state therefore
// takes the instances in order and gives each the level 0 unless those before
// it decide otherwise.
//
// Phases are counted in units of exp(i pi/q). An instance with powers x, z on
// its sites stands for
//
//	T = exp(i pi/q)^p  prod X^x Z^z,   p = sum x z for even q, (q+1) sum x z for odd q,
//
// which makes T^q = 1; for q = 2 it is the Pauli operator with Y = i X Z, and
// for odd q the product of commuting operators has no phase.

// row is a product of instances with the exponent of its eigenvalue in the
// reference state, R = exp(2 pi i/q)^level there.
type row struct {
	x, z  []int
	phase int // mod 2q
	level int // mod q
	pivot int // index into x, then z
}

// findReference fills s.Reference: the state just described, whose levels are
// then counted from the other side where a family turns signs.
func (s *System) findReference() error {
	s.Reference = make([]uint8, len(s.Instances))
	if err := s.relate(); err != nil {
		return err
	}
	for f, spec := range s.coupled() {
		if spec.Signs == nil {
			continue
		}
		if s.Spec.Levels != 2 || len(spec.Signs) != s.Spec.Lattice.Cells() {
			return fmt.Errorf("%s has %d signs for %d cells of %d levels", spec.Name, len(spec.Signs), s.Spec.Lattice.Cells(), s.Spec.Levels)
		}
		k := s.Kinds[f]
		for i := k.First; i < k.First+k.Count; i++ {
			s.Reference[i] ^= spec.Signs[s.Instances[i].Position]
		}
	}
	return nil
}

// coupled lists the families that have a coupling, in the order of their kinds.
func (s *System) coupled() []kinetic.FamilySpec {
	var out []kinetic.FamilySpec
	for _, f := range s.Spec.Families {
		if f.Coupling != 0 || f.Couplings != nil {
			out = append(out, f)
		}
	}
	return out
}

// relate gives the instances in s.Reference the levels that relations demand.
func (s *System) relate() error {
	if s.unmixed() {
		return nil // products of X alone, or of Z alone, have no phases
	}
	if !prime(s.Spec.Levels) {
		return fmt.Errorf("terms that mix X and Z need a prime number of levels, not %d", s.Spec.Levels)
	}
	var terms []row
	for _, k := range s.Kinds {
		basis := terms
		if k.Energy == nil {
			basis = append([]row(nil), terms...)
		}
		for i := k.First; i < k.First+k.Count; i++ {
			r, err := s.reduce(i, basis)
			if err != nil {
				return err
			}
			if r != nil {
				basis = append(basis, *r)
			}
		}
		if k.Energy != nil {
			terms = basis
		}
	}
	return nil
}

// unmixed reports whether every instance is a product of X alone or of Z alone.
func (s *System) unmixed() bool {
	for _, t := range s.Instances {
		var x, z bool
		for _, f := range t.Factors {
			x = x || f.X != 0
			z = z || f.Z != 0
		}
		if x && z {
			return false
		}
	}
	return true
}

// reduce divides instance i by the basis. If nothing is left, its level is
// decided and nil returned; otherwise the level is 0 and the rest is a new row.
// Rows that do not commute with the instance decide nothing about it.
func (s *System) reduce(i int, basis []row) (*row, error) {
	q, n := s.Spec.Levels, s.Sites()
	r := row{x: make([]int, n), z: make([]int, n)}
	for _, f := range s.Instances[i].Factors {
		r.x[f.Site], r.z[f.Site] = f.X, f.Z
		if q%2 == 0 {
			r.phase += f.X * f.Z
		} else {
			r.phase += (q + 1) * f.X * f.Z
		}
	}
	for _, b := range basis {
		c := r.at(b.pivot)
		if c == 0 || r.commutator(b, q) != 0 {
			continue
		}
		for range mod(-c*inverse(b.at(b.pivot), q), q) {
			r.multiply(b, q)
		}
	}
	for p := range 2 * n {
		if r.at(p) != 0 {
			r.pivot = p
			return &r, nil
		}
	}
	// T times the rows of total level r.level is exp(i pi/q)^phase.
	twice := mod(r.phase-2*r.level, 2*q)
	if twice%2 != 0 {
		return nil, fmt.Errorf("%s at cell %v has no eigenvalue exp(2 pi i s/q) next to the terms before it",
			s.Kinds[s.Instances[i].Kind].Name, s.cell(i))
	}
	s.Reference[i] = uint8(twice / 2)
	return nil, nil
}

func (r *row) at(p int) int {
	if p < len(r.x) {
		return r.x[p]
	}
	return r.z[p-len(r.x)]
}

// multiply replaces r by r b.
func (r *row) multiply(b row, q int) {
	for n := range r.x {
		r.phase += 2 * r.z[n] * b.x[n]
		r.x[n] = (r.x[n] + b.x[n]) % q
		r.z[n] = (r.z[n] + b.z[n]) % q
	}
	r.phase = mod(r.phase+b.phase, 2*q)
	r.level = (r.level + b.level) % q
}

func (r *row) commutator(b row, q int) int {
	c := 0
	for n := range r.x {
		c += r.z[n]*b.x[n] - r.x[n]*b.z[n]
	}
	return mod(c, q)
}

func prime(q int) bool {
	for d := 2; d*d <= q; d++ {
		if q%d == 0 {
			return false
		}
	}
	return true
}

// inverse returns 1/a mod the prime q.
func inverse(a, q int) int {
	for b := 1; b < q; b++ {
		if a*b%q == 1 {
			return b
		}
	}
	panic("exact: no inverse")
}
