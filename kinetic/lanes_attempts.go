package kinetic

import (
	"math"
	"math/bits"
)

// attempt is a move of a seat that all lanes try.
type attempt struct {
	base uint32 // first word of the cell
	move uint32 // in lanes.moves
}

// attempts are the next attempts of a trajectory. Nothing in them depends on
// the state: which moves are tried, the words of acceptance, and the time at
// which the last is made. The times of the others are drawn only when a span
// ends among them.
type attempts struct {
	plan *lanePlan
	src  source
	bulk bulk

	list    [attemptsAhead]attempt
	columns []wordColumn // of acceptance words
	hits    []uint32     // attempt, hit: words of lines

	raw   [chanceBits]wordColumn
	cells wordColumn
	which wordColumn // only if there are several moves
	extra []uint64

	begin, end float64 // the last is made at end
	key        uint64  // of the times in between
	times      [attemptsAhead - 1]float64
	timed      bool
}

// lanePosition is what the attempts that follow depend on.
type lanePosition struct {
	src  source
	bulk bulk
}

func (a *attempts) position() lanePosition { return lanePosition{a.src, a.bulk} }

func newAttempts(p *lanePlan, src source) attempts {
	a := attempts{plan: p, src: src}
	a.bulk = newBulk(&a.src)
	a.columns = make([]wordColumn, p.columns)
	for i := range a.columns[1] {
		a.columns[1][i] = math.MaxUint64
	}
	a.hits = make([]uint32, attemptsAhead*p.hits)
	a.extra = make([]uint64, p.extra.most())
	return a
}

// draw draws the attempts that follow time begin.
func (a *attempts) draw(begin float64) {
	a.begin, a.end = begin, math.Inf(1)
	a.timed = false
	if a.plan.clock == 0 {
		return
	}
	a.end = begin + a.gamma()/a.plan.clock
	a.key = a.src.next()
	for k := range a.raw {
		a.bulk.fill(a.raw[k][:])
	}
	a.drawPlaces()
	if len(a.plan.sets) == 1 {
		a.drawWords(&a.plan.sets[0])
	} else {
		a.drawMixedWords()
	}
	a.strew()
}

// drawPlaces draws the cells, uniformly, and the moves, by their clocks.
func (a *attempts) drawPlaces() {
	p := a.plan
	a.bulk.fill(a.cells[:])
	moves := uint32(len(p.moves))
	if moves > 1 {
		a.bulk.fill(a.which[:])
	}
	planes := uint32(p.layout.planes)
	for i := range a.list {
		row, rest := bits.Mul64(a.cells[i], p.rows)
		col, _ := bits.Mul64(rest, p.cols)
		move := (p.zoneRow[row] + p.zoneCol[col]) * moves
		if moves > 1 {
			move += p.choice.draw(a.which[i])
		}
		a.list[i] = attempt{uint32(row*p.cols+col) * planes, move}
		if p.hits > 0 {
			a.findHits(i, int(row), int(col))
		}
	}
}

// findHits notes which words of lines an attempt changes; the spare word fills
// up the list.
func (a *attempts) findHits(i, row, col int) {
	p := a.plan
	hits := a.hits[i*p.hits:][:p.hits]
	for h := range hits {
		hits[h] = p.layout.spare
	}
	mv := &p.zoned[a.list[i].move]
	for h := mv.firstHit; h < mv.lastHit; h++ {
		hits[h-mv.firstHit] = p.hitWord(h, row, col)
	}
}

// drawWords makes the words of acceptance, all attempts having the same chances.
func (a *attempts) drawWords(set *chanceSet) {
	n := 2 + len(set.direct)
	for d := range set.direct {
		var turned *wordColumn
		if d < set.turned {
			turned = &a.columns[n+d]
		}
		set.direct[d].fill(&a.raw, &a.columns[2+d], turned)
	}
	if set.even {
		a.columns[n+set.turned] = a.raw[0]
	}
}

// drawMixedWords makes the words of acceptance attempt by attempt.
func (a *attempts) drawMixedWords() {
	for i := range a.list {
		set := a.set(i)
		n := 2 + len(set.direct)
		for d := range set.direct {
			y := set.direct[d].word(&a.raw, i)
			a.columns[2+d][i] = y
			if d < set.turned {
				a.columns[n+d][i] = ^y
			}
		}
		if set.even {
			a.columns[n+set.turned][i] = a.raw[0][i]
		}
	}
}

// set returns the chances of attempt i.
func (a *attempts) set(i int) *chanceSet {
	move := a.list[i].move % uint32(len(a.plan.moves))
	return &a.plan.sets[a.plan.moves[move].set]
}

// strew turns on the bits that the words of acceptance still lack. Points fall on
// the bits of all attempts, as many as plan.rest to a bit on average, and a
// chance heeds those that its own rest allows.
func (a *attempts) strew() {
	p := a.plan
	if p.rest == 0 {
		return
	}
	points := a.extra[:p.extra.draw(a.src.next())]
	a.bulk.fill(points)
	const lowBits = 7 + 6 // which attempt, and which lane
	set := &p.sets[0]
	for _, u := range points {
		i, bit := u>>6%attemptsAhead, uint64(1)<<(u%lanesPerWord)
		if len(p.sets) > 1 {
			set = a.set(int(i))
		}
		u >>= lowBits
		n := 2 + len(set.direct)
		for d := range set.direct {
			c := &set.direct[d]
			// All ones if u is below the share of points that the chance heeds.
			on := bit & uint64(int64(u-c.heeds)>>63)
			w := &a.columns[2+d][i]
			*w = (*w ^ c.flip | on) ^ c.flip
			if d < set.turned {
				a.columns[n+d][i] &^= on
			}
		}
	}
}

// gamma returns the sum of attemptsAhead exponential variates of mean 1: a gamma
// variate (G. Marsaglia, W. W. Tsang, ACM Trans. Math. Softw. 26, 363 (2000)).
func (a *attempts) gamma() float64 {
	const d = attemptsAhead - 1./3
	c := 1 / math.Sqrt(9*d)
	for {
		// A normal variate (G. E. P. Box, M. E. Muller, Ann. Math. Stat. 29, 610
		// (1958)).
		x := math.Sqrt(2*a.src.exponential()) * math.Cos(2*math.Pi*uniform(a.src.next()))
		v := 1 + c*x
		if v <= 0 {
			continue
		}
		v = v * v * v
		if -a.src.exponential() < 0.5*x*x+d*(1-v+math.Log(v)) {
			return d * v
		}
	}
}

// before returns how many of the attempts are made up to time t. Given the time
// of the last, the others are uniform and independent, so their number is that
// of uniform numbers below t; these come from key alone, so that it does not
// matter when they are asked for (splitmix64: G. L. Steele, D. Lea, C. H. Flood,
// OOPSLA 2014, 453).
func (a *attempts) before(t float64) int {
	if t >= a.end {
		return attemptsAhead
	}
	if a.plan.clock == 0 {
		return 0
	}
	if !a.timed {
		a.timed = true
		for i := range a.times {
			z := a.key + uint64(i+1)*0x9e3779b97f4a7c15
			z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
			z = (z ^ z>>27) * 0x94d049bb133111eb
			a.times[i] = uniform(z ^ z>>31)
		}
	}
	x := (t - a.begin) / (a.end - a.begin)
	n := 0
	for _, u := range &a.times {
		if u <= x {
			n++
		}
	}
	return n
}
