package kinetic

import (
	"fmt"

	"sojourn/kinetic/pauli"
)

// referenceLevels returns the levels of the terms in the reference state, in
// which every level is 0 as far as the relations between the terms allow (the
// product of XX, ZZ and YY on two sites is -1). Relations among energy terms are
// settled first; a tracked operator that is a product of terms, or of terms and
// others of its kind, follows them.
//
// families is indexed like Generator.Families and by cell, lines like
// Generator.Lines and by position; entries of instances that do not exist are 0.
// A nil slice stands for zeros. It fails if the lattice is too large to find
// out, which can happen only if terms mix X and Z, or if two terms do not
// commute.
func referenceLevels(s Spec) (families, lines [][]uint8, err error) {
	s = withoutZeroCouplings(s)
	if s.Levels%2 == 1 {
		return nil, nil, nil // products of commuting terms carry no phase
	}
	var operators []pauli.Operator
	for _, f := range s.Families {
		operators = append(operators, f.Operator)
	}
	terms := make([][]uint8, len(s.Families))
	if mixesXZ(operators) {
		if terms, err = settleTerms(s); err != nil {
			return nil, nil, err
		}
	}
	families = terms
	for _, t := range s.Tracked {
		var levels []uint8
		if mixesXZ(append(operators[:len(operators):len(operators)], t.Operator)) {
			if levels, err = settleTracked(s, terms, t); err != nil {
				return nil, nil, err
			}
		}
		if t.Operator.Extended() {
			lines = append(lines, levels)
		} else {
			families = append(families, levels)
		}
	}
	return orNil(families), orNil(lines), nil
}

// mixesXZ reports whether an operator has both X and Z factors. Without that,
// products of X alone and products of Z alone never make a phase.
func mixesXZ(operators []pauli.Operator) bool {
	for _, o := range operators {
		x, z := false, false
		for _, f := range o.Factors() {
			x = x || f.X != 0
			z = z || f.Z != 0
		}
		if x && z {
			return true
		}
	}
	return false
}

// settleTerms returns the levels of the energy terms.
func settleTerms(s Spec) ([][]uint8, error) {
	r, err := relationsOfTerms(s, nil)
	if err != nil {
		return nil, err
	}
	levels, err := r.solve("the terms")
	if err != nil {
		return nil, err
	}
	out := make([][]uint8, len(s.Families))
	for i, f := range s.Families {
		out[i], levels = s.spread(f.Operator, f.Cut, levels)
	}
	return out, nil
}

// settleTracked returns the levels of the instances of a tracked operator, the
// terms having theirs.
func settleTracked(s Spec, terms [][]uint8, t TrackedSpec) ([]uint8, error) {
	r, err := relationsOfTerms(s, terms)
	if err != nil {
		return nil, err
	}
	r.system.NextStage()
	before := r.system.Rows()
	r.add(t.Operator, Drop, 0)
	levels, err := r.solve(fmt.Sprintf("the terms and the tracked operator %q", t.Name))
	if levels == nil || err != nil {
		return nil, err
	}
	out, _ := s.spread(t.Operator, Drop, levels[before:])
	return out, nil
}

// relationsOfTerms lists the energy terms, wanted at the given levels.
func relationsOfTerms(s Spec, levels [][]uint8) (*relations, error) {
	if n := s.factors(s.Families); n > maxRelationFactors {
		return nil, fmt.Errorf("terms that mix X and Z have %d factors on this lattice; their common eigenvalues can be determined for up to %d",
			n, maxRelationFactors)
	}
	r := newRelations(s)
	for i, f := range s.Families {
		first := len(r.want)
		r.add(f.Operator, f.Cut, 0)
		if levels == nil || levels[i] == nil {
			continue
		}
		k := first
		for cell := range s.Lattice.Cells() {
			if _, ok := s.Term(f.Operator, f.Cut, cell); ok {
				r.want[k] = levels[i][cell]
				k++
			}
		}
	}
	return r, nil
}

// solve returns possible levels by row, nil if all can be as wanted.
func (r *relations) solve(what string) ([]uint8, error) {
	sol, ok := r.system.Solve(r.want, relationBudget)
	switch {
	case !ok:
		return nil, fmt.Errorf("%s mix X and Z, and their common eigenvalues on this lattice take too long to find; a smaller lattice is needed", what)
	case sol.Clash:
		return nil, fmt.Errorf("%s do not commute", what)
	case sol.Consistent:
		return nil, nil
	case sol.Levels == nil:
		return nil, fmt.Errorf("%s mix X and Z and cannot all have eigenvalue 1; a reference state for this is found for a prime number of levels, not for %d",
			what, r.spec.Levels)
	}
	return sol.Levels, nil
}

// spread distributes levels by existing instance over all positions, and
// returns those it did not use. Nil levels, and levels that are all 0, give nil.
func (s Spec) spread(o pauli.Operator, cut Cut, levels []uint8) (out, rest []uint8) {
	if levels == nil {
		return nil, nil
	}
	out = make([]uint8, s.Positions(o))
	zero := true
	for p := range out {
		if _, ok := s.Term(o, cut, s.PositionCell(o, p)); ok {
			out[p] = levels[0]
			levels = levels[1:]
			zero = zero && out[p] == 0
		}
	}
	if zero {
		out = nil
	}
	return out, levels
}

// orNil returns nil if every entry is.
func orNil(list [][]uint8) [][]uint8 {
	for _, l := range list {
		if l != nil {
			return list
		}
	}
	return nil
}
