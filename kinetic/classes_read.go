package kinetic

import "fmt"

func (e *classes[T]) Sums(dst []int64) []int64 { return e.appendSums(dst) }

func (e *classes[T]) Energy(int) float64 { return e.energy() }

func (e *classes[T]) Census(dst []int64) { census(e.g, e.tags, dst) }

// census counts seats by shape and pattern.
func census[T tag](g *Generator, tags []T, dst []int64) {
	mask := T(1)<<g.Bits - 1
	a := 0
	for _, first := range g.Row {
		for _, col := range g.Col {
			shape := int(g.Places[first+uint32(col)].Shape)
			dst[shape<<g.Bits|int(tags[a]&mask)]++
			a++
		}
	}
}

func (e *classes[T]) Terms(family, _ int, dst []uint8) {
	if l := family - len(e.g.Families); l >= 0 {
		e.readLine(l, dst)
		return
	}
	readTerms(e.g, family, e.tags, dst)
}

func (e *classes[T]) Patterns(_ int, dst []uint16) {
	for a, tag := range e.tags {
		dst[a] = uint16(uint32(tag) & e.hot.mask)
	}
}

// Audit checks that the lists and tags point at each other, that the seats
// around each term agree on its level, and that the sums are what the levels
// add up to.
func (e *classes[T]) Audit() error {
	g := e.g
	listed := uint64(0)
	for k := range g.Rates {
		listed += uint64(e.end[k] - e.first[k])
	}
	if listed != uint64(len(e.tags)) {
		return fmt.Errorf("the classes list %d of %d seats", listed, len(e.tags))
	}
	for a := range e.tags {
		k := e.class(a)
		i := uint64(e.tags[a] >> e.hot.bits)
		if i < uint64(e.first[k]) || i >= uint64(e.end[k]) || e.arena[i] != uint32(a) {
			return fmt.Errorf("seat %d is not where its tag says, at %d of class %d", a, i, k)
		}
	}
	if err := agree(g, e.tags); err != nil {
		return err
	}
	return auditTally(&e.tally, e.tags)
}

// agree checks that all seats around a term hold the same level of it.
func agree[T tag](g *Generator, tags []T) error {
	levels := make([]uint8, g.Cells())
	for f := range g.Families {
		readTerms(g, f, tags, levels)
		for a := range g.Addresses() {
			shape := &g.Shapes[g.Places[g.PlaceOf(a)].Shape]
			for b, slot := range g.Seats[shape.Seat].Slots {
				if slot.Family != f || shape.Present>>b&1 == 0 {
					continue
				}
				t, _ := g.Lattice.Wrap(g.Lattice.Coord(a/len(g.Seats)), slot.Offset)
				s := tags[a] >> (b * g.SlotBits) & (1<<g.SlotBits - 1)
				if want := levels[g.Lattice.Index(t)]; T(want) != s {
					return fmt.Errorf("seat %d holds level %d for the term of %q at cell %v, another seat %d", a, s, g.Families[f].Name, t, want)
				}
			}
		}
	}
	return nil
}
