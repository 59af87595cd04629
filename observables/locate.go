package observables

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// spot is where a term can be read: the bit at shift of the pattern at address.
type spot struct {
	address int32
	shift   uint8
}

// still marks a term that no move changes: its address is still, and its shift
// is its level.
const still = -1

// locator finds the terms of one family.
type locator struct {
	g      *kinetic.Generator
	family int
	slots  []kinetic.SlotRef // the one in the term's own cell first, if there is one
}

func newLocator(g *kinetic.Generator, family int) *locator {
	l := &locator{g: g, family: family}
	for _, own := range []bool{true, false} {
		for _, s := range g.Families[family].Slots {
			if own == (s.Offset == lattice.Offset{}) {
				l.slots = append(l.slots, s)
			}
		}
	}
	return l
}

// each calls visit with every seat that shows the term on a cell, until it
// returns false.
func (l *locator) each(cell int, visit func(address, slot int) bool) {
	from := l.g.Lattice.Coord(cell)
	for _, s := range l.slots {
		to, ok := l.g.Lattice.Wrap(from, s.Offset)
		if !ok {
			continue
		}
		a := l.g.Lattice.Index(to)*len(l.g.Seats) + s.Seat
		if l.g.Shapes[l.g.Places[l.g.PlaceOf(a)].Shape].Present>>s.Slot&1 == 1 && !visit(a, s.Slot) {
			return
		}
	}
}

// find returns where the term on a cell is read; ok is false if the lattice has
// no such term.
func (l *locator) find(cell int) (s spot, ok bool) {
	s.address = still
	l.each(cell, func(address, slot int) bool {
		s = spot{int32(address), uint8(slot * l.g.SlotBits)}
		return false
	})
	if s.address != still {
		return s, true
	}
	if !l.g.TermExists(l.family, cell) {
		return s, false
	}
	if r := l.g.Reference; r != nil && r[l.family] != nil {
		s.shift = r[l.family][cell]
	}
	return s, true
}

// level reads a term from the patterns of all addresses.
func (s spot) level(patterns []uint16) uint64 {
	if s.address == still {
		return uint64(s.shift)
	}
	return uint64(patterns[s.address]>>(s.shift&15)) & 1
}
