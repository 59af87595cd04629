package kinetic

import (
	"errors"
	"fmt"

	"sojourn/kinetic/lattice"
)

// stateOf is a configuration: the pattern of every seat, and the levels of the
// lines. Engines build it, then take from it what they keep.
type stateOf[P tag] struct {
	patterns []P
	lines    [][]uint8
}

// state holds patterns of any width.
type state = stateOf[uint16]

// ErrNoSpins says that a start needs spins and the model has none.
var ErrNoSpins = errors.New("starts up and down need a model with spins; use reference or random")

// newState returns the state in which a trajectory begins.
func newState(g *Generator, start Start, src *source) (*state, error) {
	return newStateOf[uint16](g, start, src)
}

func newStateOf[P tag](g *Generator, start Start, src *source) (*stateOf[P], error) {
	s := &stateOf[P]{patterns: make([]P, g.Addresses())}
	for l, line := range g.Lines {
		s.lines = append(s.lines, make([]uint8, line.Positions))
		if g.ReferenceLines != nil {
			copy(s.lines[l], g.ReferenceLines[l])
		}
	}
	if g.Reference != nil {
		s.setReference(g)
	}
	switch start {
	case StartReference:
	case StartRandom:
		s.randomise(g, src)
	case StartUp, StartDown:
		return s, s.align(g, start)
	default:
		return nil, fmt.Errorf("start %q is not one of reference, random, up, down", start)
	}
	return s, nil
}

func (s *stateOf[P]) setReference(g *Generator) {
	for a := range s.patterns {
		c := g.Lattice.Coord(a / len(g.Seats))
		shape := &g.Shapes[g.Places[g.PlaceOf(a)].Shape]
		for b, slot := range g.Seats[shape.Seat].Slots {
			if shape.Present>>b&1 == 0 || g.Reference[slot.Family] == nil {
				continue
			}
			t, _ := g.Lattice.Wrap(c, slot.Offset)
			s.patterns[a] |= P(g.Reference[slot.Family][g.Lattice.Index(t)]) << (b * g.SlotBits)
		}
	}
}

// randomise applies every move a random number of times, which makes every
// state that the moves connect to the reference equally likely.
func (s *stateOf[P]) randomise(g *Generator, src *source) {
	bits, left := uint64(0), 0
	for a := range s.patterns {
		p := g.Places[g.PlaceOf(a)]
		for m := range g.Seats[p.Seat].Moves {
			times := 0
			if g.Levels == 2 {
				if left == 0 {
					bits, left = src.next(), 64
				}
				times = int(bits & 1)
				bits >>= 1
				left--
			} else {
				n, _ := src.below(uint64(g.Levels))
				times = int(n)
			}
			for range times {
				s.apply(g, a, m)
			}
		}
	}
}

// align turns every spin to the given side, each by a move of its own site.
func (s *stateOf[P]) align(g *Generator, start Start) error {
	want := uint8(0)
	if start == StartDown {
		want = uint8(g.Levels / 2)
	}
	spins := false
	for f := range g.Families {
		if g.Families[f].Order {
			spins = true
			s.alignFamily(g, f, want)
		}
	}
	if !spins {
		return ErrNoSpins
	}
	levels := make([]uint8, g.Cells())
	for f := range g.Families {
		if !g.Families[f].Order {
			continue
		}
		readTerms(g, f, s.patterns, levels)
		for c, l := range levels {
			if l != want && l != Absent {
				return fmt.Errorf("the bath operators cannot turn the spin of cell %v to start %s; use reference or random", g.Lattice.Coord(c), start)
			}
		}
	}
	return nil
}

func (s *stateOf[P]) alignFamily(g *Generator, order int, want uint8) {
	for a := range s.patterns {
		b, m := orderMove(g, &g.Shapes[g.Places[g.PlaceOf(a)].Shape], order)
		if b < 0 {
			continue
		}
		for n := 0; n < g.Levels && s.level(g, a, b) != want; n++ {
			s.apply(g, a, m)
		}
	}
}

// orderMove returns the slot of the seat's own spin and a move that turns it.
func orderMove(g *Generator, shape *Shape, order int) (slot, move int) {
	for b, sl := range g.Seats[shape.Seat].Slots {
		if sl.Family != order || sl.Offset != (lattice.Offset{}) || shape.Present>>b&1 == 0 {
			continue
		}
		for m, mv := range g.Seats[shape.Seat].Moves {
			if mv.Change[b] != 0 {
				return b, m
			}
		}
	}
	return -1, -1
}

func (s *stateOf[P]) level(g *Generator, a, slot int) uint8 {
	return uint8(s.patterns[a] >> (slot * g.SlotBits) & (1<<g.SlotBits - 1))
}

// apply executes move m of the seat at address a.
func (s *stateOf[P]) apply(g *Generator, a, m int) {
	mv := &g.Moves[g.Places[g.PlaceOf(a)].First+uint32(m)]
	for _, t := range g.Touch[mv.First:mv.Last] {
		p := &s.patterns[a+int(t.Delta)]
		if g.Wide != nil {
			*p = P(g.Wide.after(uint64(*p), t.Table))
			continue
		}
		*p = P(g.Tables[t.Table+uint32(*p)])
	}
	row, col := a/len(g.Col), a%len(g.Col)
	for i := mv.FirstHit; i < mv.LastHit; i++ {
		h := &g.Hits[i]
		if at := h.Col[col] + h.Row[row]; int(at) < len(s.lines[h.Line]) {
			v := &s.lines[h.Line][at]
			*v = uint8((int(*v) + int(h.Change)) % g.Levels)
		}
	}
}
