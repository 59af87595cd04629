package kinetic

import "sojourn/kinetic/lattice"

// tag is what an engine keeps per seat, with the pattern in its low bits.
type tag interface {
	~uint8 | ~uint16 | ~uint32 | ~uint64
}

// readTerms writes the levels of a family's terms by cell, Absent where there
// is none, from the patterns in the low g.Bits bits of tags.
func readTerms[T tag](g *Generator, f int, tags []T, dst []uint8) {
	for i := range dst {
		dst[i] = Absent
	}
	fam := &g.Families[f]
	left := fam.Terms
	for _, ref := range fam.Slots {
		if left == 0 {
			return
		}
		left -= readSlot(g, ref, tags, dst)
	}
	if left == 0 {
		return
	}
	// What no move changes stands as in the reference state.
	for c := range dst {
		if dst[c] == Absent && g.TermExists(f, c) {
			dst[c] = 0
			if g.Reference != nil && g.Reference[f] != nil {
				dst[c] = g.Reference[f][c]
			}
		}
	}
}

// readSlot fills in the terms that one slot shows, where still Absent, and
// returns how many. Rows are read in up to two runs, around the wrap.
func readSlot[T tag](g *Generator, ref SlotRef, tags []T, dst []uint8) int {
	n := 0
	lx := g.Lattice.Size[0]
	across := ref.Offset
	across[0] = 0
	for row := range g.Row {
		to, ok := g.Lattice.Wrap(g.Lattice.Coord(row*lx), across)
		if !ok {
			continue
		}
		from := g.Lattice.Index(to) / lx
		out := dst[row*lx : (row+1)*lx]
		for x := 0; x < lx; {
			at, ok := g.Lattice.Wrap(lattice.Offset{x}, lattice.Offset{ref.Offset[0]})
			if !ok {
				x++
				continue
			}
			run := min(lx-x, lx-at[0])
			n += readRun(g, ref, tags, from, at[0], out[x:x+run])
			x += run
		}
	}
	return n
}

// readRun fills in a run of terms from a run of seats that begins at x in a row.
func readRun[T tag](g *Generator, ref SlotRef, tags []T, row, x int, out []uint8) int {
	n := 0
	seats := len(g.Seats)
	shift := ref.Slot * g.SlotBits
	level := T(1)<<g.SlotBits - 1
	col := x*seats + ref.Seat
	first := row * len(g.Col)
	for i := range out {
		if out[i] == Absent && (g.everywhere>>ref.Slot&1 != 0 || g.present(row, col)>>ref.Slot&1 != 0) {
			out[i] = uint8(tags[first+col] >> shift & level)
			n++
		}
		col += seats
	}
	return n
}

// present returns the slots that exist at a seat.
func (g *Generator) present(row, col int) uint16 {
	return g.Shapes[g.Places[g.Row[row]+uint32(g.Col[col])].Shape].Present
}

// TermExists reports whether the lattice has the term of family f at a cell.
func (g *Generator) TermExists(f, cell int) bool {
	return g.Families[f].terms.exists(g.Lattice, g.Lattice.Coord(cell))
}
