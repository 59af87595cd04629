package kinetic

import (
	"fmt"
	"math"
	"math/bits"
)

// CompositionEngine is the name of the composition engine.
const CompositionEngine = "composition"

// composition draws trajectories where rates form a continuum, by composition
// and rejection (A. Slepoy, A. P. Thompson, S. J. Plimpton, J. Chem. Phys. 128,
// 205101 (2008)): seats are listed by the octave, or rather half octave, of a
// bound of their rate, a seat of an octave is drawn uniformly and kept with
// probability rate/(top of the octave). The bound comes from the pattern and
// the couplings by integers and a table, the rate is computed when a seat is
// drawn, and no sum of rates is kept, so nothing drifts. Energies are integers.
type composition struct {
	listing
	tally
	hot    hot
	rate   *seatRates
	tags   []uint64 // by seat: its position in the arena, its octave and its pattern
	octave octaves
	heat   int64  // the energy, in units of Couplings.Unit
	seen   uint64 // of what was read ahead
}

// A tag holds the position from bit tagAt, the octave from bit tagOctave and the
// pattern in the bits below.
const (
	tagOctave = MaxBits
	tagAt     = 32
)

// octaves maps bounds of rates to classes. Class 0 is rate 0. The first is for
// all rates up to its top; each further one reaches from the top of the one
// before it to its own, which is 3/2 or 4/3 of that: a power of 2, or half as
// much again.
type octaves struct {
	base, count int
}

// octaveShift leaves exponent and first bit of a double.
const octaveShift = 51

// octaveCount bounds the number of classes. Rates more than 2^-60 below the
// fastest share the lowest, which is then hardly ever drawn.
const octaveCount = 120

// newOctaves covers rates from least to most.
func newOctaves(most, least float64) octaves {
	low, high := int(math.Float64bits(least)>>octaveShift), int(math.Float64bits(most)>>octaveShift)
	count := min(max(high-low+1, 1), octaveCount)
	return octaves{high - count, count}
}

// of returns the class of a bound.
func (o *octaves) of(rate float64) uint32 {
	if rate == 0 {
		return 0
	}
	return uint32(max(int(math.Float64bits(rate)>>octaveShift)-o.base, 1))
}

// tops lists the largest rate of each class.
func (o *octaves) tops() []float64 {
	tops := make([]float64, o.count+1)
	for k := 1; k < len(tops); k++ {
		tops[k] = math.Float64frombits(uint64(o.base+k+1) << octaveShift)
	}
	return tops
}

// NewComposition returns the composition engine, for couplings that vary from
// term to term (q = 2) and for what tables do not hold (q > 2, Generator.Wide). It
// needs about 13 bytes per seat and 4 for each of its terms.
func NewComposition(g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	if err := checkComposition(g); err != nil {
		return nil, err
	}
	if g.Wide != nil {
		return newWideEngine(g, seed, unit, start)
	}
	src := newSource(seed, unit, "start "+string(start))
	s, err := newState(g, start, &src)
	if err != nil {
		return nil, err
	}
	e := &composition{hot: newHot(g), rate: newSeatRates(g), tags: make([]uint64, len(s.patterns))}
	e.rate.findBins()
	most, least := e.rate.most()
	if math.IsInf(most, 0) || math.IsNaN(most) {
		return nil, fmt.Errorf("the rates reach beyond the largest number at beta = %v", g.Spec.Beta)
	}
	e.octave = newOctaves(most, least)
	for _, c := range e.rate.bins {
		for i, x := range c.bounds {
			c.octave[i] = uint8(e.octave.of(x.ceiling))
		}
	}
	e.listing = listing{
		rates: e.octave.tops(), seats: len(e.tags), touches: e.hot.touches,
		src: newSource(seed, unit, "jumps"),
	}
	for a, p := range s.patterns {
		e.tags[a] = uint64(p)
	}
	e.fill()
	e.tally = newTally(g, s.patterns, s.lines, e.hot.words)
	e.heat = e.sumEnergy(s.patterns)
	e.refresh()
	e.next = e.src.exponential() * e.scale
	return e, nil
}

// CompositionBytes estimates the memory of one composition engine.
func CompositionBytes(g *Generator) int64 {
	if g.Wide != nil {
		return wideBytes(g)
	}
	n := int64(g.Addresses())
	return n*(8+4*int64(g.energySlots())) + 4*int64(arenaSize(g.Addresses(), octaveCount+1)) + g.tableBytes()
}

func (e *composition) pattern(a int) uint32 { return uint32(e.tags[a]) & e.hot.mask }

// class is the octave of a seat, as its tag says.
func (e *composition) class(a int) uint32 { return uint32(e.tags[a]>>tagOctave) & 0xffff }

func (e *composition) patterns() []uint16 {
	p := make([]uint16, len(e.tags))
	e.Patterns(0, p)
	return p
}

// sumEnergy adds up the energy of all terms.
func (e *composition) sumEnergy(patterns []uint16) int64 {
	g := e.g
	levels := make([]uint8, g.Cells())
	sum := int64(0)
	for f, j := range g.Couplings.J {
		if j == nil {
			continue
		}
		readTerms(g, f, patterns, levels)
		for c, s := range levels {
			if s != Absent {
				sum += int64(j[c]) * (2*int64(s) - 1)
			}
		}
	}
	return sum
}

func (e *composition) fill() {
	var counts [256]int
	e.rate.each(func(a int, shape uint16) {
		k := e.rate.octave(a, shape, e.pattern(a), &e.octave)
		e.tags[a] = uint64(k)<<tagOctave | uint64(e.pattern(a))
		counts[k]++
	})
	e.layOut(&counts)
	for a := range e.tags {
		k := e.class(a)
		e.arena[e.end[k]] = uint32(a)
		e.tags[a] |= uint64(e.end[k]) << tagAt
		e.end[k]++
	}
}

func (e *composition) refresh() {
	for !e.setBounds() {
		moved := e.widen()
		for a := range e.tags {
			e.tags[a] += uint64(moved[e.class(a)]) << tagAt // mod 2^32
		}
	}
	e.newStretch()
}

// Advance runs the trajectory to time t.
func (e *composition) Advance(t float64) {
	if t < e.now {
		panic("kinetic: Advance to an earlier time")
	}
	for e.next <= t {
		var tk token
		if e.hot.far == nil {
			tk = e.redraw()
		} else {
			var filled bool
			if tk, filled = e.take(); filled {
				e.lookAhead()
			}
		}
		over := e.attempt(tk)
		e.left--
		at := e.next
		if over || e.left == 0 {
			e.refresh()
		}
		e.next = at + e.src.exponential()*e.scale
	}
	e.now = t
}

// lookAhead reads what the queue's jumps will read, so that their waits for
// memory overlap. It changes nothing.
func (e *composition) lookAhead() {
	var seats [window]uint32
	for i := range e.queue {
		seats[i] = e.arena[e.queue[i].at]
	}
	for _, a := range seats {
		e.seen ^= e.tags[a] ^ uint64(e.rate.j[int(a)*e.rate.slots])
		for _, d := range e.hot.far {
			if b := uint32(int32(a) + d); int(b) < len(e.tags) {
				e.seen ^= e.tags[b] ^ uint64(e.rate.j[int(b)*e.rate.slots])
			}
		}
	}
}

// attempt executes the jump of a token, unless it is a null event; it returns
// true if a class has passed its bound.
func (e *composition) attempt(tk token) (over bool) {
	if tk.at >= e.end[tk.class&255] {
		e.nulls++
		return false
	}
	j := e.arena[tk.at]
	h := &e.hot
	hi, _ := bits.Mul64(uint64(j), h.magic)
	row := uint32(hi) + j&h.single
	col := j - row*h.rowLen
	place := &h.places[e.g.Row[row]+uint32(e.g.Col[col])]
	pattern := uint32(e.tags[j]) & h.mask
	move, w := e.rate.choose(int(j), place.shape, pattern, uniform(tk.rest)*e.rates[tk.class])
	if move < 0 {
		e.nulls++
		return false
	}
	mv := &h.moves[place.first+uint32(move)]
	for i := range h.words {
		e.packed[i] += h.delta[mv.delta+pattern*h.words+i]
	}
	e.heat -= 2 * w
	for i := mv.first; i < mv.energy; i++ {
		touch := &e.g.Touch[i]
		a := uint32(int32(j) + touch.Delta)
		p := e.g.Tables[touch.Table+uint32(e.tags[a])&h.mask] & 0xffff
		to := e.rate.octave(int(a), e.g.tableShape[touch.Table>>h.bits], p, &e.octave)
		over = e.shift(a, to, p) || over
	}
	mask := uint64(h.mask)
	for i := mv.energy; i < mv.last; i++ {
		touch := &e.g.Touch[i]
		t := &e.tags[uint32(int32(j)+touch.Delta)]
		*t = *t&^mask | uint64(e.g.Tables[touch.Table+uint32(*t&mask)]&0xffff)
	}
	if mv.firstHit < mv.lastHit {
		e.hitLines(mv, row, col)
	}
	e.jumps++
	if e.since++; e.since == unpackEvery {
		e.unpack()
	}
	return over
}

// shift gives a seat a new octave and pattern; it returns true if the octave it
// enters passes its bound.
func (e *composition) shift(a uint32, to, pattern uint32) bool {
	tag := e.tags[a]
	from := uint32(tag>>tagOctave) & 255
	last := e.end[from] - 1
	e.end[from] = last
	moved := e.arena[last]
	at := tag >> tagAt
	e.arena[at] = moved
	e.tags[moved] = e.tags[moved]&(1<<tagAt-1) | at<<tagAt
	end := e.end[to&255]
	e.arena[end] = a
	e.end[to&255] = end + 1
	e.tags[a] = uint64(end)<<tagAt | uint64(to)<<tagOctave | uint64(pattern)
	return end >= e.bound[to&255]
}

func (e *composition) Sums(dst []int64) []int64 { return e.appendSums(dst) }
func (e *composition) Energy(int) float64       { return float64(e.heat) * e.g.Couplings.Unit }

func (e *composition) Census(dst []int64) {
	e.rate.each(func(a int, shape uint16) { dst[int(shape)<<e.g.Bits|int(e.pattern(a))]++ })
}

func (e *composition) Terms(family, _ int, dst []uint8) {
	if l := family - len(e.g.Families); l >= 0 {
		e.readLine(l, dst)
		return
	}
	readTerms(e.g, family, e.patterns(), dst)
}

func (e *composition) Patterns(_ int, dst []uint16) {
	for a := range e.tags {
		dst[a] = uint16(e.pattern(a))
	}
}

// Audit checks lists, tags, octaves, levels, sums and the energy.
func (e *composition) Audit() error {
	for a := range e.tags {
		k := e.class(a)
		at := uint32(e.tags[a] >> tagAt)
		if k > octaveCount || at < e.first[k] || at >= e.end[k] || e.arena[at] != uint32(a) {
			return fmt.Errorf("seat %d is not where its tag says, at %d of octave %d", a, at, k)
		}
		shape := e.g.Places[e.g.PlaceOf(a)].Shape
		if want := e.rate.octave(a, shape, e.pattern(a), &e.octave); want != k {
			return fmt.Errorf("seat %d is in octave %d, its terms put it in %d", a, k, want)
		}
		if rate := e.rate.total(a, shape, e.pattern(a)); rate > e.rates[k] {
			return fmt.Errorf("seat %d has rate %v, above the top %v of its octave", a, rate, e.rates[k])
		}
	}
	patterns := e.patterns()
	if err := agree(e.g, patterns); err != nil {
		return err
	}
	if want := e.sumEnergy(patterns); want != e.heat {
		return fmt.Errorf("the energy is %d units, the terms add up to %d", e.heat, want)
	}
	return auditTally(&e.tally, patterns)
}
