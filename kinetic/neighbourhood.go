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
	keep    [lattice.MaxAxes]bool // by axis: whether factors that leave along it are cut off
	absent  []Absence
	energy  []*big.Rat // nil for tracked operators
	order   bool
}

// exists reports whether the family has a term at cell t: one that no axis
// drops, with at least one of its factors inside the lattice (see Spec.Term).
func (f *family) exists(l lattice.Lattice, t lattice.Offset) bool {
	inside := len(f.factors) == 0
	for _, factor := range f.factors {
		_, outside, ok := wrapSite(l, f.absent, t, factor.Exp, factor.Site)
		if ok {
			inside = true
			continue
		}
		for a := range outside {
			if outside[a] && !f.keep[a] {
				return false
			}
		}
	}
	return inside
}

// at returns the powers with which the term at cell t acts on the given site of
// cell c, folded and cut.
func (f *family) at(l lattice.Lattice, t lattice.Offset, site int, c lattice.Offset, q int) (x, z int) {
	for _, factor := range f.factors {
		if factor.Site != site {
			continue
		}
		if d, _, ok := wrapSite(l, f.absent, t, factor.Exp, site); ok && d == c {
			x += factor.X
			z += factor.Z
		}
	}
	return x % q, z % q
}

// count returns how many terms exist.
func (f *family) count(l lattice.Lattice) int {
	n := 1
	for a, length := range l.Size {
		if l.Open[a] && f.keep[a] {
			n = 0
			for c := range l.Cells() {
				if f.exists(l, l.Coord(c)) {
					n++
				}
			}
			return n
		}
		if l.Open[a] {
			lo, hi := 0, length-1
			for _, factor := range f.factors {
				first, last := siteRange(l, f.absent, factor.Site, a)
				lo = max(lo, first-factor.Exp[a])
				hi = min(hi, last-factor.Exp[a])
			}
			length = max(0, hi-lo+1)
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
	if _, _, present := wrapSite(l, k.spec.Absent, c, lattice.Offset{}, s.Site); !present {
		k.seen[key] = n
		return n // nothing acts on a site that is not there
	}
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
