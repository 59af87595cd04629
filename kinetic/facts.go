package kinetic

import "math"

// MaxRate is the largest rate of one bath operator on one site: the inverse of
// the shortest time on which anything happens.
func (g *Generator) MaxRate() float64 {
	best := 0.0
	if g.Couplings != nil {
		return newSeatRates(g).maxMove()
	}
	g.eachRate(func(_ *Shape, _, _ int, r float64) { best = math.Max(best, r) })
	return best
}

// eachRate calls f for every shape, move and pattern that can occur. Moves that
// change nothing are left out.
func (g *Generator) eachRate(f func(s *Shape, move, pattern int, rate float64)) {
	for i := range g.Shapes {
		s := &g.Shapes[i]
		for m := range s.Rate {
			if !s.acts[m] {
				continue
			}
			for p, r := range s.Rate[m] {
				if s.possible(g, p) {
					f(s, m, p, r)
				}
			}
		}
	}
}

// possible reports whether a pattern gives each existing slot a level and each
// other slot 0.
func (s *Shape) possible(g *Generator, p int) bool {
	for b := range MaxBits / g.SlotBits {
		v := p >> (b * g.SlotBits) & (1<<g.SlotBits - 1)
		if v >= g.Levels || (v != 0 && s.Present>>b&1 == 0) {
			return false
		}
	}
	return true
}

// Frozen lists the bath operators that have jumps of rate 0, by index into
// Spec.Bath, with the number of (surroundings, pattern) pairs frozen and
// possible.
func (g *Generator) Frozen() []FrozenJumps {
	out := make([]FrozenJumps, len(g.Spec.Bath))
	for b := range out {
		out[b].Bath = b
	}
	g.eachRate(func(s *Shape, m, _ int, r float64) {
		f := &out[g.Seats[s.Seat].Moves[m].Bath]
		f.Possible++
		if r == 0 {
			f.Frozen++
		}
	})
	kept := out[:0]
	for _, f := range out {
		if f.Frozen > 0 {
			kept = append(kept, f)
		}
	}
	return kept
}

// FrozenJumps counts the jumps of one bath operator that never happen.
type FrozenJumps struct {
	Bath             int
	Frozen, Possible int
}

// tableBytes is the size of what all engines share.
func (g *Generator) tableBytes() int64 {
	n := 4*len(g.Tables) + 8*len(g.Touch) + 20*len(g.Moves) + 2*len(g.Col) + 4*len(g.Row)
	for i := range g.Shapes {
		n += len(g.Shapes[i].Delta) + (17*len(g.Shapes[i].Rate)+1)<<g.Bits
	}
	for _, l := range g.Lines {
		n += l.Positions + 4*len(g.Row) + 4*len(g.Col)
	}
	return int64(n)
}
