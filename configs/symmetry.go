package configs

import (
	"fmt"
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// checkAverages refuses averages over places whose means differ from place to
// place, since one mean would be taken for all.
func (r *reading) checkAverages(p *Point, list []requested) {
	const remedy = "%s, and so averages over the lattice mix different means; kind = \"terms\" is their sum"
	for _, o := range list {
		if o.scalar() {
			continue
		}
		key, name := "family", o.Family
		if o.Tracked != "" {
			key, name = "tracked", o.Tracked
		}
		if why := r.uneven(p, o.tracked, o.operators); why != "" {
			o.refuse(r, key, "with random couplings "+remedy, name+" "+why)
		}
	}
	if c := p.Covariance; c != nil {
		t, tracked := r.model.tracked(c.Of)
		if why := r.uneven(p, tracked, []pauli.Operator{t.Operator}); why != "" {
			r.section("covariance").fault("of", "with random couplings %s %s, and its covariance in space would include the differences", c.Of, why)
		}
	}
}

// refuse reports an observable, at its key or, if it was not asked for, at the
// disorder.
func (o requested) refuse(r *reading, key, format string, a ...any) {
	if o.at == nowhere {
		tables := r.section("hamiltonian").items("disorder")
		tables[0].faultAt(tables[0].at, "", format, a...)
		return
	}
	o.view.fault(key, format, a...)
}

// uneven says why the means of operators differ from place to place if couplings
// are random; "" if they are all 0.
func (r *reading) uneven(p *Point, tracked bool, operators []pauli.Operator) string {
	if !tracked {
		return "has another mean at every place"
	}
	s := p.nominalSpec()
	s.Beta = 0 // symmetry does not depend on it
	key := fmt.Sprint(s, operators)
	turned, known := r.d.turned[key]
	if !known {
		turned = turnedBySymmetry(s, operators)
		r.d.turned[key] = turned
	}
	if !turned {
		return "can have another mean at every place, since no symmetry turns its sign"
	}
	return ""
}

// turnedBySymmetry reports whether for every place of some operators there is a
// set of jumps that together change the operator's sign and no term of the
// Hamiltonian, whatever the couplings: its mean is then 0. The sets tried are
// one bath operator on all sites, or all of one kind, of the lattice or of the
// cells along some of its axes. q = 2.
func turnedBySymmetry(s kinetic.Spec, operators []pauli.Operator) bool {
	type position struct{ operator, cell int }
	left := map[position]bool{}
	for i, op := range operators {
		for n := range s.Positions(op) {
			cell := s.PositionCell(op, n)
			if _, ok := s.Term(op, kinetic.Drop, cell); ok {
				left[position{i, cell}] = true
			}
		}
	}
	for _, set := range jumpSets(s) {
		if len(left) == 0 || !set.keeps(s) {
			continue
		}
		for at := range left {
			factors, _ := s.Term(operators[at.operator], kinetic.Drop, at.cell)
			if slices.Contains(set.turns(s, factors), true) {
				delete(left, at)
			}
		}
	}
	return len(left) == 0
}

// jumpSet is one bath operator on all sites, or one, of the cells of a lattice
// that have the same coordinates but along some axes: one set of jumps for each
// of the other coordinates.
type jumpSet struct {
	bath  kinetic.BathOperator
	site  int // -1 for all on which it acts
	along [lattice.MaxAxes]bool
}

func jumpSets(s kinetic.Spec) []jumpSet {
	var out []jumpSet
	for axes := range 1 << s.Lattice.Axes {
		for _, b := range s.Bath {
			for site := -1; site < s.Sites; site++ {
				set := jumpSet{bath: b, site: site}
				for a := range s.Lattice.Axes {
					set.along[a] = axes>>a&1 != 0
				}
				out = append(out, set)
			}
		}
	}
	return out
}

// turns tells, for every set that meets an operator with these factors, whether
// it changes the sign of the operator.
func (j jumpSet) turns(s kinetic.Spec, factors []kinetic.SiteFactor) []bool {
	var where []lattice.Offset
	var odd []bool
	for _, f := range factors {
		site := f.Site % s.Sites
		if j.site >= 0 && site != j.site || j.bath.Sites != nil && !slices.Contains(j.bath.Sites, site) {
			continue
		}
		if (j.bath.X*f.Z+j.bath.Z*f.X)%2 == 0 {
			continue
		}
		at := s.Lattice.Coord(f.Site / s.Sites)
		for a := range at {
			if j.along[a] {
				at[a] = 0
			}
		}
		k := slices.Index(where, at)
		if k < 0 {
			k = len(where)
			where, odd = append(where, at), append(odd, false)
		}
		odd[k] = !odd[k]
	}
	return odd
}

// keeps reports whether no set changes the sign of any term.
func (j jumpSet) keeps(s kinetic.Spec) bool {
	var factors []kinetic.SiteFactor
	for _, f := range s.Families {
		if f.Coupling == 0 && f.Couplings == nil {
			continue
		}
		for cell := range s.Lattice.Cells() {
			var ok bool
			if factors, ok = s.AppendTerm(factors[:0], f.Operator, f.Cut, cell); ok && slices.Contains(j.turns(s, factors), true) {
				return false
			}
		}
	}
	return true
}
