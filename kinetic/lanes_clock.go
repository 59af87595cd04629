package kinetic

import "math"

// setChances finds the clocks of the moves and the chances of their attempts.
func (p *lanePlan) setChances() error {
	rates := p.ratesOfMoves()
	var clocks []float64
	var union [][]float64 // of the rates of the moves of a set
	for i, list := range rates {
		clock := chanceClock(list)
		set := -1
		for k, other := range clocks {
			if math.Abs(clock-other) <= 1e-14*other {
				set = k
			}
		}
		if set < 0 {
			set = len(clocks)
			clocks = append(clocks, clock)
			union = append(union, nil)
		}
		clocks[set] = math.Max(clocks[set], clock)
		union[set] = append(union[set], list...)
		p.moves[i].set = set
	}
	p.columns = 2
	for k, clock := range clocks {
		set := newChanceSet(clock, distinct(union[k]))
		p.columns = max(p.columns, set.columns())
		p.sets = append(p.sets, set)
	}
	if p.columns > maxColumns {
		return &LaneLimit{"probabilities of an attempt", p.columns - 2, maxColumns - 2}
	}
	p.setRest()
	var weights []float64
	for i := range p.moves {
		weights = append(weights, clocks[p.moves[i].set])
	}
	if len(weights) > 0 {
		p.choice.set(weights)
		p.clock = p.choice.sum * float64(p.g.Cells())
	}
	return nil
}

// setRest finds how densely points are strewn for the chances of all sets.
func (p *lanePlan) setRest() {
	for _, set := range p.sets {
		for _, c := range set.direct {
			p.rest = math.Max(p.rest, c.rest)
		}
	}
	if p.rest == 0 {
		return
	}
	p.extra = newPoisson(p.rest * attemptsAhead * lanesPerWord)
	for k := range p.sets {
		for d := range p.sets[k].direct {
			c := &p.sets[k].direct[d]
			c.heeds = uint64(c.rest / p.rest * (1 << 51))
		}
	}
}

// ratesOfMoves lists the distinct rates of every move of the cell, increasing.
func (p *lanePlan) ratesOfMoves() [][]float64 {
	rates := make([][]float64, len(p.moves))
	for i := range p.g.Shapes {
		s := &p.g.Shapes[i]
		for m, list := range s.Rate {
			at := p.first[s.Seat] + m
			for pattern, r := range list {
				if s.possible(p.g, pattern) {
					rates[at] = append(rates[at], r)
				}
			}
			rates[at] = distinct(rates[at])
		}
	}
	return rates
}
