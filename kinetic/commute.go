package kinetic

import (
	"fmt"

	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// NotCommuting says which two operators do not commute, and where.
type NotCommuting struct {
	A, B     string         // names
	Tracked  bool           // B is a tracked operator
	Offset   lattice.Offset // from A's cell to B's
	Boundary bool           // only as cut at an open edge
}

func (e *NotCommuting) Error() string {
	what, where := "family", ""
	if e.Tracked {
		what = "tracked operator"
	}
	if e.Boundary {
		where = " as cut at an open edge"
	}
	if e.A == e.B {
		return fmt.Sprintf("the translates of %s %q do not all commute%s: at offset %v they do not", what, e.A, where, e.Offset)
	}
	return fmt.Sprintf("family %q and %s %q do not commute%s: at offset %v they do not", e.A, what, e.B, where, e.Offset)
}

// party is an operator whose commutation is checked.
type party struct {
	name    string
	op      pauli.Operator
	cut     Cut
	tracked bool
}

// checkCommutation checks that every term commutes with every term and every
// tracked operator, and that the translates of a local tracked operator commute
// with each other. The polynomial test holds for every periodic lattice and for
// whole terms on open ones; what it cannot settle (small lattices on which
// terms fold, cut terms, operators with an extent) is checked term by term on a
// lattice with the same edges and folds.
func (k *compiler) checkCommutation() error {
	var parties []party
	for _, f := range k.spec.Families {
		parties = append(parties, party{f.Name, f.Operator, f.Cut, false})
	}
	for _, t := range k.spec.Tracked {
		parties = append(parties, party{t.Name, t.Operator, Drop, true})
	}
	var doubtful [][2]party
	for i, a := range parties {
		for j, b := range parties[i:] {
			if a.tracked && (j > 0 || a.op.Extended()) {
				continue // tracked operators need not commute with each other
			}
			if !a.op.Extended() && !b.op.Extended() && !(k.cuts(a) || k.cuts(b)) {
				if _, ok := pauli.Commute(a.op, b.op, k.spec.Levels); ok {
					continue
				}
			}
			doubtful = append(doubtful, [2]party{a, b})
		}
	}
	if len(doubtful) == 0 {
		return nil
	}
	small := k.spec
	small.Lattice = k.reduced(parties)
	for _, pair := range doubtful {
		if err := checkPair(small, pair[0], pair[1]); err != nil {
			return err
		}
	}
	return nil
}

func (k *compiler) cuts(p party) bool { return p.cut.Truncates(k.spec.Lattice) }

// reduced returns a lattice on which operators meet as they do on the real one:
// long axes are shortened to where an operator can neither meet itself around
// the lattice nor reach from one edge to the other, keeping parity, so that
// lines which wrap keep their self-commutation.
func (k *compiler) reduced(parties []party) lattice.Lattice {
	l := k.spec.Lattice
	for a, n := range l.Size {
		lo, hi := 0, 0
		for _, p := range parties {
			for _, f := range p.op.Factors() {
				lo, hi = min(lo, f.Exp[a]), max(hi, f.Exp[a])
			}
		}
		enough := 4*(hi-lo) + 3
		if k.spec.Absent != nil {
			enough += 2
		}
		if n > enough+1 {
			l.Size[a] = enough + (n-enough)%2
		}
	}
	return l
}

// checkPair compares every instance of a with every instance of b.
func checkPair(s Spec, a, b party) error {
	meets := map[int][]int{} // site -> instances of b
	terms := make([][]SiteFactor, s.Positions(b.op))
	for p := range terms {
		factors, ok := s.Term(b.op, b.cut, s.PositionCell(b.op, p))
		if !ok {
			continue
		}
		terms[p] = factors
		for _, f := range factors {
			meets[f.Site] = append(meets[f.Site], p)
		}
	}
	for p := range s.Positions(a.op) {
		cell := s.PositionCell(a.op, p)
		factors, ok := s.Term(a.op, a.cut, cell)
		if !ok {
			continue
		}
		for _, f := range factors {
			for _, other := range meets[f.Site] {
				if Commutator(factors, terms[other], s.Levels) == 0 {
					continue
				}
				from, to := s.Lattice.Coord(cell), s.Lattice.Coord(s.PositionCell(b.op, other))
				return &NotCommuting{
					A: a.name, B: b.name, Tracked: b.tracked, Offset: to.Add(from.Neg()),
					Boundary: a.cut.Truncates(s.Lattice) || b.cut.Truncates(s.Lattice),
				}
			}
		}
	}
	return nil
}
