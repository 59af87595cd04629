package kinetic

import (
	"math"
	"slices"
)

// MaxRate is the largest rate of one bath operator on one site: the inverse of
// the shortest time on which anything happens. Where couplings vary in size it
// is a bound.
func (g *Generator) MaxRate() float64 {
	best := 0.0
	for _, r := range g.MaxRates() {
		best = math.Max(best, r)
	}
	return best
}

// MaxRates is the largest rate of each bath operator on one site, by index into
// Spec.Bath; bounds where couplings vary in size.
func (g *Generator) MaxRates() []float64 {
	if g.Couplings != nil {
		return newSeatRates(g).maxMoves()
	}
	if g.Wide != nil {
		return slices.Clone(g.Wide.most)
	}
	best := make([]float64, len(g.Spec.Bath))
	g.eachRate(func(s *Shape, m, _ int, r float64) {
		b := g.Seats[s.Seat].Moves[m].Bath
		best[b] = math.Max(best[b], r)
	})
	return best
}

// EnergyRange bounds the energies of states: the sums of the lowest and of the
// highest energies of all terms.
func (g *Generator) EnergyRange() (low, high float64) {
	for f, fam := range g.Families {
		if fam.Energy == nil {
			continue
		}
		if g.Couplings == nil {
			least, most := fam.Energy[0], fam.Energy[0]
			for _, e := range fam.Energy {
				least, most = math.Min(least, e), math.Max(most, e)
			}
			low += float64(fam.Terms) * least
			high += float64(fam.Terms) * most
			continue
		}
		sum := int64(0)
		for c, j := range g.Couplings.J[f] {
			if g.TermExists(f, c) {
				sum += max(int64(j), -int64(j))
			}
		}
		low -= float64(sum) * g.Couplings.Unit
		high += float64(sum) * g.Couplings.Unit
	}
	return low, high
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
// possible. Where couplings vary in size it lists none: energies are then hardly
// ever exactly 0.
func (g *Generator) Frozen() []FrozenJumps {
	if g.Couplings != nil {
		return nil
	}
	out := make([]FrozenJumps, len(g.Spec.Bath))
	for b := range out {
		out[b].Bath = b
	}
	if g.Wide != nil {
		copy(out, g.Wide.frozen)
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
		if g.Wide == nil {
			n += len(g.Shapes[i].Delta) + (17*len(g.Shapes[i].Rate)+1)<<g.Bits
		}
	}
	if g.Wide != nil {
		n += 12*len(g.Wide.adds) + 2*len(g.Wide.slots)
		for _, l := range g.Wide.rates {
			n += 16 * len(l.keys)
		}
	}
	for _, l := range g.Lines {
		n += l.Positions + 4*len(g.Row) + 4*len(g.Col)
	}
	return int64(n)
}
