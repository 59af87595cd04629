package kinetic

import "math"

// hot is what the inner loop reads of a generator.
type hot struct {
	bits    uint
	mask    uint32
	rowLen  uint32
	magic   uint64 // row = high half of address*magic, + address if rowLen is 1
	single  uint32
	places  []hotPlace
	moves   []hotMove
	splits  [][]uint64
	delta   []int64 // words per (move of a shape, pattern)
	words   uint32
	touches int // most seats that one jump changes
	// far lists where seats lie, as address differences, that a jump changes
	// and that are not in its own line of the cache; nil for small lattices.
	far []int32
}

type hotPlace struct {
	first uint32 // move
	shape uint16
	moves uint16
}

type hotMove struct {
	first, energy, last uint32
	firstHit, lastHit   uint32
	delta               uint32 // of its shape, in delta
}

func newHot(g *Generator) hot {
	h := hot{
		bits:   uint(g.Bits),
		mask:   1<<g.Bits - 1,
		rowLen: uint32(len(g.Col)),
		words:  uint32(max(1, (len(g.Families)*g.SumWidth()+fields-1)/fields)),
	}
	if h.rowLen == 1 {
		h.single = math.MaxUint32
	} else {
		h.magic = math.MaxUint64/uint64(h.rowLen) + 1
	}
	deltaOf := make([]uint32, len(g.Shapes))
	for i := range g.Shapes {
		s := &g.Shapes[i]
		deltaOf[i] = uint32(len(h.delta))
		sums := len(g.Families) * g.SumWidth()
		for e := 0; e < len(s.Delta); e += sums {
			h.delta = append(h.delta, pack(s.Delta[e:e+sums])...)
		}
		h.splits = append(h.splits, s.Split)
	}
	for _, p := range g.Places {
		h.places = append(h.places, hotPlace{p.First, p.Shape, uint16(len(g.Seats[p.Seat].Moves))})
		moves := len(g.Seats[p.Seat].Moves)
		for m := range moves {
			mv := g.Moves[int(p.First)+m]
			h.touches = max(h.touches, int(mv.Last-mv.First))
			h.moves = append(h.moves, hotMove{
				mv.First, mv.Energy, mv.Last, mv.FirstHit, mv.LastHit,
				deltaOf[p.Shape] + uint32(m)<<g.Bits*h.words,
			})
		}
	}
	h.far = farTouches(g)
	return h
}

// farSeats is how many seats outgrow the second-level cache.
const farSeats = 1 << 18

// farTouches looks at the middle of the lattice.
func farTouches(g *Generator) []int32 {
	if g.Addresses() < farSeats {
		return nil
	}
	far := []int32{}
	middle := g.Lattice.Size
	for a := range middle {
		middle[a] /= 2
	}
	const line = 16
	first := g.Lattice.Index(middle) * len(g.Seats)
	for s := range g.Seats {
		p := g.Places[g.PlaceOf(first+s)]
		for m := range g.Seats[s].Moves {
			mv := g.Moves[int(p.First)+m]
			for _, t := range g.Touch[mv.First:mv.Last] {
				near := t.Delta > -line && t.Delta < line
				for _, d := range far {
					near = near || (t.Delta-d > -line && t.Delta-d < line)
				}
				if !near {
					far = append(far, t.Delta)
				}
			}
		}
	}
	return far
}
