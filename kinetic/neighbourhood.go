package kinetic

import (
	"math/big"

	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// family is one set of terms during compilation.
type family struct {
	name    string
	group   string
	factors []pauli.Factor
	cut     Cut
	energy  []*big.Rat // nil for tracked operators
	order   bool
}

// exists reports whether the family has a term at cell t: with all its factors
// inside the lattice, or with at least one if it is truncated (see Spec.Term).
func (f *family) exists(l lattice.Lattice, t lattice.Offset) bool {
	truncate := f.cut == Truncate
	for _, factor := range f.factors {
		if _, inside := l.Wrap(t, factor.Exp); inside == truncate {
			return truncate
		}
	}
	return !truncate || len(f.factors) == 0
}

// at returns the powers with which the term at cell t acts on the given site of
// cell c, folded and cut.
func (f *family) at(l lattice.Lattice, t lattice.Offset, site int, c lattice.Offset, q int) (x, z int) {
	for _, factor := range f.factors {
		if factor.Site != site {
			continue
		}
		if d, ok := l.Wrap(t, factor.Exp); ok && d == c {
			x += factor.X
			z += factor.Z
		}
	}
	return x % q, z % q
}

// count returns how many terms exist.
func (f *family) count(l lattice.Lattice) int {
	n := 1
	if f.cut == Truncate && !l.Periodic() {
		n = 0
		for c := range l.Cells() {
			if f.exists(l, l.Coord(c)) {
				n++
			}
		}
		return n
	}
	for a, length := range l.Size {
		if l.Open[a] {
			lo, hi := 0, 0
			for _, factor := range f.factors {
				lo = min(lo, factor.Exp[a])
				hi = max(hi, factor.Exp[a])
			}
			length = max(0, length-(hi-lo))
		}
		n *= length
	}
	return n
}

// turn returns the amount by which the move X^a Z^b raises the level of a term
// X^x Z^z: with Z X = w X Z, (X^x Z^z)(X^a Z^b) = w^(za-bx) (X^a Z^b)(X^x Z^z).
func turn(a, b, x, z, q int) int { return ((z*a-b*x)%q + q) % q }

// neighbourhood is what a seat's moves do to the terms around it.
type neighbourhood struct {
	term   []lattice.Offset // by slot: the term's cell
	exists []bool           // by slot: it is the first slot of a term that some move changes
	change [][]int          // by move and slot
	slot   map[termAt]int   // slot of a term
}

type termAt struct {
	family int
	cell   lattice.Offset
}

// look finds the neighbourhood of a seat in cell c. On short axes several slots
// may be the same term; the first stands for it.
func (k *compiler) look(c lattice.Offset, seat int) *neighbourhood {
	key := seatAt{c, seat}
	if n, ok := k.seen[key]; ok {
		return n
	}
	s := &k.g.Seats[seat]
	n := &neighbourhood{
		term:   make([]lattice.Offset, len(s.Slots)),
		exists: make([]bool, len(s.Slots)),
		change: make([][]int, len(s.Moves)),
		slot:   map[termAt]int{},
	}
	for m := range s.Moves {
		n.change[m] = make([]int, len(s.Slots))
	}
	l, q := k.g.Lattice, k.g.Levels
	for b, slot := range s.Slots {
		t, ok := l.Wrap(c, slot.Offset)
		f := &k.families[slot.Family]
		if !ok || !f.exists(l, t) {
			continue
		}
		if _, twice := n.slot[termAt{slot.Family, t}]; twice {
			continue
		}
		x, z := f.at(l, t, s.Site, c, q)
		for m, move := range s.Moves {
			n.change[m][b] = turn(move.X, move.Z, x, z, q)
			n.exists[b] = n.exists[b] || n.change[m][b] != 0
		}
		if n.exists[b] {
			n.term[b] = t
			n.slot[termAt{slot.Family, t}] = b
		}
	}
	k.seen[key] = n
	return n
}

type seatAt struct {
	cell lattice.Offset
	seat int
}
