package kinetic

import (
	"math"
	"sort"
)

// maxColumns is the largest number of words of acceptance that an attempt may
// have. The first is 0, the second all ones: for what never or always happens.
const maxColumns = 64

// chanceSet holds the distinct probabilities with which attempts of some moves
// are accepted. Behind the two constants stand the words of direct, then the
// complements of the first of them, then perhaps an even chance.
type chanceSet struct {
	clock  float64 // rate of the attempts, at least every rate of the moves
	direct []chance
	small  []float64 // probabilities of direct, before inversion
	turned int       // complements that follow: of direct[:turned]
	even   bool      // a word of probability 1/2 follows
}

// columns returns how many words an attempt has.
func (c *chanceSet) columns() int {
	n := 2 + len(c.direct) + c.turned
	if c.even {
		n++
	}
	return n
}

// sameChance is how far two probabilities near 1 may differ and be the same: one
// is then within an ulp of 1 of the other, as exact as a number near 1 is.
const sameChance = 0x1p-52

// chanceClock chooses the rate of attempts at a move with the given distinct
// rates, increasing. The lowest is the largest rate. With a somewhat faster one
// the probabilities may be complements of each other (heat-bath rates add up to
// Gamma), and a word with its complement costs little more than one word.
func chanceClock(rates []float64) float64 {
	if len(rates) == 0 {
		return 0
	}
	top := rates[len(rates)-1]
	if paired := top + rates[0]; rates[0] > 0 && len(rates) > 1 {
		slow, fast := newChanceSet(top, rates), newChanceSet(paired, rates)
		if fast.cost() < slow.cost() {
			return paired
		}
	}
	return top
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

// newChanceSet sorts the probabilities rate/clock of distinct rates, increasing,
// into those made directly, those that are complements, and 1/2.
func newChanceSet(clock float64, rates []float64) chanceSet {
	set := chanceSet{clock: clock}
	if clock == 0 {
		return set
	}
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

// column returns which word has the probability of a rate.
func (c *chanceSet) column(rate float64) uint8 {
	if rate <= 0 || c.clock == 0 {
		return 0
	}
	p := rate / c.clock
	switch {
	case p >= 1:
		return 1
	case math.Abs(p-0.5) <= sameChance:
		return uint8(2 + len(c.direct) + c.turned)
	}
	for i := range c.direct {
		d := c.small[i]
		switch {
		case p < 0.5 && !c.direct[i].inverted && d == p, p > 0.5 && c.direct[i].inverted && d == 1-p:
			return uint8(2 + i)
		case p > 0.5 && i < c.turned && math.Abs(1-p-d) <= sameChance:
			return uint8(2 + len(c.direct) + i)
		}
	}
	panic("kinetic: a rate without a chance")
}
