package kinetic

import (
	"math"
	"math/bits"
)

// attemptsAhead is how many attempts are drawn at a time.
const attemptsAhead = 128

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
	gap  uint64 // bits of the words of acceptance until the next odd one

	list [attemptsAhead]attempt
	rows []uint64 // attempt, place in a row
	hits []uint32 // attempt, hit: words of lines
	raw  []uint64 // random words

	begin, end float64 // the last is made at end
	key        uint64  // of the times in between
	times      [attemptsAhead - 1]float64
	timed      bool
}

// lanePosition is what the attempts that follow depend on.
type lanePosition struct {
	src  source
	bulk bulk
	gap  uint64
}

func (a *attempts) position() lanePosition { return lanePosition{a.src, a.bulk, a.gap} }

func newAttempts(p *lanePlan, src source) attempts {
	a := attempts{plan: p, src: src}
	a.bulk = newBulk(&a.src)
	a.gap = a.nextGap()
	a.rows = make([]uint64, attemptsAhead*p.width)
	for i := range attemptsAhead {
		a.rows[(i+1)*p.width-1] = math.MaxUint64
	}
	a.hits = make([]uint32, attemptsAhead*p.hits)
	a.raw = make([]uint64, attemptsAhead*(chanceBits+p.draws()))
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
	a.bulk.fill(a.raw)
	if len(a.plan.moves) > 1 {
		a.drawMoves()
	} else {
		a.drawCells()
	}
	a.drawRest()
}

// drawCells draws attempts of the only move of the cell.
func (a *attempts) drawCells() {
	p := a.plan
	set := &p.moves[0].chances
	for i := range a.list {
		raw := a.raw[i*(chanceBits+1):][:chanceBits+1]
		row, rest := bits.Mul64(raw[chanceBits], p.rows)
		col, _ := bits.Mul64(rest, p.cols)
		a.place(i, int(row), int(col), 0)
		a.words(i, set, (*[chanceBits]uint64)(raw))
	}
}

// drawMoves draws attempts of several moves, in proportion to their clocks.
func (a *attempts) drawMoves() {
	p := a.plan
	for i := range a.list {
		raw := a.raw[i*(chanceBits+2):][:chanceBits+2]
		row, rest := bits.Mul64(raw[chanceBits], p.rows)
		col, _ := bits.Mul64(rest, p.cols)
		move := int(p.choice.draw(raw[chanceBits+1]))
		a.place(i, int(row), int(col), move)
		a.words(i, &p.moves[move].chances, (*[chanceBits]uint64)(raw))
	}
}

// place notes that attempt i is the given move in the cell at row and col.
func (a *attempts) place(i, row, col, move int) {
	p := a.plan
	zone := p.zoneRow[row] + p.zoneCol[col]
	m := zone*uint32(len(p.moves)) + uint32(move)
	a.list[i] = attempt{uint32(row*int(p.cols)+col) * uint32(p.layout.planes), m}
	if p.hits == 0 {
		return
	}
	hits := a.hits[i*p.hits:][:p.hits]
	for h := range hits {
		hits[h] = p.layout.spare
	}
	mv := &p.zoned[m]
	for h := mv.firstHit; h < mv.lastHit; h++ {
		hits[h-mv.firstHit] = p.hitWord(h, row, col)
	}
}

// words fills the row of attempt i.
func (a *attempts) words(i int, set *chanceSet, raw *[chanceBits]uint64) {
	row := a.rows[i*a.plan.width:][:a.plan.width]
	for d := range set.direct {
		row[d] = set.direct[d].word(raw)
	}
	if set.turned > 0 {
		n := len(set.direct)
		for d, w := range row[:set.turned] {
			row[n+d] = ^w
		}
	}
	if set.even {
		row[len(set.direct)+set.turned] = raw[0]
	}
}

// drawRest turns on the bits that the words of acceptance lack. Bits to look at
// come with probability plan.rest among the bits of all attempts; such a bit is
// turned on in the words whose own rest allows it.
func (a *attempts) drawRest() {
	const all = attemptsAhead * lanesPerWord
	at := a.gap
	for at < all {
		i, bit := at/lanesPerWord, uint64(1)<<(at%lanesPerWord)
		move := a.list[i].move % uint32(len(a.plan.moves))
		set := &a.plan.moves[move].chances
		row := a.rows[int(i)*a.plan.width:][:a.plan.width]
		u := uniform(a.src.next()) * a.plan.rest
		for d := range set.direct {
			c := &set.direct[d]
			if u >= c.rest {
				continue
			}
			if c.inverted {
				row[d] &^= bit
			} else {
				row[d] |= bit
			}
			if d < set.turned {
				row[len(set.direct)+d] &^= bit
			}
		}
		at += 1 + a.nextGap()
	}
	a.gap = at - all
}

// nextGap returns how many bits are passed over: a geometric number.
func (a *attempts) nextGap() uint64 {
	if a.plan.rest == 0 {
		return math.MaxInt64
	}
	n := a.src.exponential() * a.plan.gapScale
	if n >= math.MaxInt64 {
		return math.MaxInt64
	}
	return uint64(n)
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
