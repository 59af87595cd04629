package kinetic

import (
	"math"
	"sort"
)

// Words of acceptance are kept in rows, one row for each attempt, with the
// constants 0 and 1 in the last two places.
const maxRow = 64

// chanceSet holds the distinct probabilities with which attempts of one move are
// accepted. The row of an attempt begins with the words of direct, then
// the complements of the first of them, then perhaps an even chance.
type chanceSet struct {
	clock  float64 // rate of the attempts, at least every rate of the move
	direct []chance
	small  []float64 // probabilities of direct, before inversion
	turned int       // complements that follow: of direct[:turned]
	even   bool      // a word of probability 1/2 follows
}

// entries returns how many words of a row the set fills.
func (c *chanceSet) entries() int {
	n := len(c.direct) + c.turned
	if c.even {
		n++
	}
	return n
}

// sameChance is how far two probabilities near 1 may differ and be the same: one
// is then within an ulp of 1 of the other, as exact as a number near 1 is.
const sameChance = 0x1p-52

// newChanceSet chooses the clock for a move with the given rates. The lowest is
// the largest rate. A somewhat faster clock can make probabilities
// complements of each other (heat-bath rates add up to Gamma), and a word and
// its complement cost little more than one word.
func newChanceSet(rates []float64) chanceSet {
	rates = distinct(rates)
	n := len(rates)
	if n == 0 || rates[n-1] == 0 {
		return chanceSet{}
	}
	best := setAt(rates[n-1], rates)
	for i, r := range rates {
		for _, s := range rates[i:] {
			if clock := r + s; clock > rates[n-1] && clock <= 2*rates[n-1] {
				if other := setAt(clock, rates); other.cost() < best.cost()*(1-1e-9) {
					best = other
				}
			}
		}
	}
	return best
}

// cost estimates the work of a unit of time, in nanoseconds per cell: of
// attempts and of their words, as BenchmarkLanes shows them.
func (c *chanceSet) cost() float64 {
	return c.clock * (15 + 1.6*float64(len(c.direct)) + 0.4*float64(c.turned))
}

func distinct(rates []float64) []float64 {
	out := append([]float64(nil), rates...)
	sort.Float64s(out)
	n := 0
	for i, r := range out {
		if i == 0 || r != out[n-1] {
			out[n] = r
			n++
		}
	}
	return out[:n]
}

// setAt sorts the probabilities rate/clock into those made directly, those that
// are complements, and 1/2.
func setAt(clock float64, rates []float64) chanceSet {
	set := chanceSet{clock: clock}
	var low, high []float64 // high as distance from 1
	for _, r := range rates {
		p := r / clock
		switch {
		case p <= 0 || p >= 1:
		case math.Abs(p-0.5) <= sameChance:
			set.even = true
		case p < 0.5:
			low = append(low, p)
		default:
			high = append(high, 1-p)
		}
	}
	sort.Float64s(high)
	var both, single []chance
	var bothP, singleP []float64
	for _, p := range low {
		if i := nearest(high, p); i >= 0 {
			high = append(high[:i], high[i+1:]...)
			both, bothP = append(both, newChance(p, false)), append(bothP, p)
		} else {
			single, singleP = append(single, newChance(p, false)), append(singleP, p)
		}
	}
	for _, p := range high {
		single, singleP = append(single, newChance(p, true)), append(singleP, p)
	}
	set.direct, set.small, set.turned = append(both, single...), append(bothP, singleP...), len(both)
	return set
}

// nearest returns the index of the number equal to p within sameChance, or -1.
func nearest(list []float64, p float64) int {
	for i, v := range list {
		if math.Abs(v-p) <= sameChance {
			return i
		}
	}
	return -1
}

// place returns where the row has the word for a rate; the constants are in
// the last two of width places.
func (c *chanceSet) place(rate float64, width int) uint8 {
	p := rate / c.clock
	switch {
	case p <= 0:
		return uint8(width - 2)
	case p >= 1:
		return uint8(width - 1)
	case math.Abs(p-0.5) <= sameChance:
		return uint8(len(c.direct) + c.turned)
	}
	for i := range c.direct {
		d := c.small[i]
		switch {
		case p < 0.5 && !c.direct[i].inverted && d == p, p > 0.5 && c.direct[i].inverted && d == 1-p:
			return uint8(i)
		case p > 0.5 && i < c.turned && math.Abs(1-p-d) <= sameChance:
			return uint8(len(c.direct) + i)
		}
	}
	panic("kinetic: a rate without a chance")
}
