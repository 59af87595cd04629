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
// 205101 (2008)): seats are listed by the octave of their rate, a seat of an
// octave is drawn uniformly and kept with probability rate/(top of the octave),
// which is at least 1/2. Each seat's rate is computed afresh from its pattern
// and couplings whenever the pattern changes, and no sum of rates is kept, so
// nothing drifts. Energies are integers.
type composition struct {
	listing
	tally
	hot    hot
	rate   *seatRates
	seat   []ratedSeat
	octave octaves
	heat   int64 // the energy, in units of Couplings.Unit
}

// ratedSeat is what the engine keeps of a seat: its position in the arena,
// shifted, with its pattern, and its rate.
type ratedSeat struct {
	tag  uint64
	rate float64
}

// octaves maps rates to classes: class 0 is rate 0, class 1 all rates below
// 2^(base+1), class k > 1 those in [2^(base+k-1), 2^(base+k)).
type octaves struct{ base int }

// octaveCount is how many octaves are told apart. Rates more than 2^-62 below
// the fastest share the lowest, which is then hardly ever drawn.
const octaveCount = 63

func newOctaves(maxRate float64) (octaves, []float64) {
	_, e := math.Frexp(maxRate)
	o := octaves{base: e + 1 - octaveCount} // maxRate < 2^e, and rounding must not pass the top
	tops := make([]float64, octaveCount+1)
	for k := 1; k < len(tops); k++ {
		tops[k] = math.Ldexp(1, o.base+k)
	}
	return o, tops
}

func (o octaves) class(rate float64) uint32 {
	if rate == 0 {
		return 0
	}
	// The biased exponent x says 2^(x-1023) <= rate < 2^(x-1022).
	k := int(math.Float64bits(rate)>>52) - 1022 - o.base
	return uint32(max(k, 1))
}

// NewComposition returns the composition engine, for couplings that vary from
// term to term (q = 2). It needs about 21 bytes per seat and 4 for each of its
// slots.
func NewComposition(g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	if err := checkComposition(g); err != nil {
		return nil, err
	}
	src := newSource(seed, unit, "start "+string(start))
	s, err := newState(g, start, &src)
	if err != nil {
		return nil, err
	}
	e := &composition{hot: newHot(g), rate: newSeatRates(g), seat: make([]ratedSeat, len(s.patterns))}
	most := e.rate.maxSeat()
	if math.IsInf(most, 0) || math.IsNaN(most) {
		return nil, fmt.Errorf("the rates reach beyond the largest number at beta = %v", g.Spec.Beta)
	}
	var tops []float64
	e.octave, tops = newOctaves(most)
	e.listing = listing{
		rates: tops, seats: len(e.seat), touches: e.hot.touches,
		src: newSource(seed, unit, "jumps"),
	}
	for a, p := range s.patterns {
		e.seat[a].tag = uint64(p)
	}
	e.computeRates()
	e.fill()
	e.tally = newTally(g, s.patterns, s.lines, e.hot.words)
	e.heat = e.sumEnergy(s.patterns)
	e.refresh()
	e.next = e.src.exponential() * e.scale
	return e, nil
}

// CompositionBytes estimates the memory of one composition engine.
func CompositionBytes(g *Generator) int64 {
	slots := 0
	for _, s := range g.Seats {
		slots = max(slots, len(s.Slots))
	}
	n := int64(g.Addresses())
	return n*(16+4*int64(slots)) + 4*int64(arenaSize(g.Addresses(), octaveCount+1)) + g.tableBytes()
}

func (e *composition) pattern(a int) uint32 { return uint32(e.seat[a].tag) & e.hot.mask }

func (e *composition) patterns() []uint16 {
	p := make([]uint16, len(e.seat))
	e.Patterns(0, p)
	return p
}

func (e *composition) computeRates() {
	e.rate.each(func(a int, shape uint16) { e.seat[a].rate = e.rate.total(a, shape, e.pattern(a)) })
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
	for a := range e.seat {
		counts[e.octave.class(e.seat[a].rate)]++
	}
	e.layOut(&counts)
	for a := range e.seat {
		k := e.octave.class(e.seat[a].rate)
		e.arena[e.end[k]] = uint32(a)
		e.seat[a].tag = uint64(e.end[k])<<e.hot.bits | uint64(e.pattern(a))
		e.end[k]++
	}
}

func (e *composition) refresh() {
	for !e.setBounds() {
		moved := e.widen()
		for a := range e.seat {
			s := &e.seat[a]
			at := uint32(s.tag>>e.hot.bits) + moved[e.octave.class(s.rate)]
			s.tag = uint64(at)<<e.hot.bits | uint64(e.pattern(a))
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
		over := e.attempt(e.redraw())
		e.left--
		at := e.next
		if over || e.left == 0 {
			e.refresh()
		}
		e.next = at + e.src.exponential()*e.scale
	}
	e.now = t
}

// attempt executes the jump of a token, unless it is a null event; it returns
// true if a class has passed its bound.
func (e *composition) attempt(tk token) (over bool) {
	if tk.at >= e.end[tk.class&255] {
		e.nulls++
		return false
	}
	j := e.arena[tk.at]
	s := &e.seat[j]
	// A seat is kept if u*top < rate; the move is the one in whose share of the
	// rate u*top falls.
	x := uniform(tk.rest) * e.rates[tk.class]
	if x >= s.rate {
		e.nulls++
		return false
	}
	h := &e.hot
	hi, _ := bits.Mul64(uint64(j), h.magic)
	row := uint32(hi) + j&h.single
	col := j - row*h.rowLen
	place := &h.places[e.g.Row[row]+uint32(e.g.Col[col])]
	pattern := uint32(s.tag) & h.mask
	move, w := e.choose(int(j), place, pattern, x)
	mv := &h.moves[move]
	for i := range h.words {
		e.packed[i] += h.delta[mv.delta+pattern*h.words+i]
	}
	e.heat -= 2 * w
	mask := uint64(h.mask)
	for i := mv.first; i < mv.energy; i++ {
		touch := &e.g.Touch[i]
		a := uint32(int32(j) + touch.Delta)
		t := &e.seat[a]
		p := e.g.Tables[touch.Table+uint32(t.tag&mask)] & 0xffff
		rate := e.rate.total(int(a), e.g.tableShape[touch.Table>>h.bits], p)
		over = e.shift(a, t, rate, p) || over
	}
	for i := mv.energy; i < mv.last; i++ {
		touch := &e.g.Touch[i]
		t := &e.seat[uint32(int32(j)+touch.Delta)]
		t.tag = t.tag&^mask | uint64(e.g.Tables[touch.Table+uint32(t.tag&mask)]&0xffff)
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

// choose returns the move in whose share of the seat's rate x falls, and the
// energy that it hands to the bath.
func (e *composition) choose(a int, place *hotPlace, pattern uint32, x float64) (move uint32, w int64) {
	moves := e.rate.moves[place.shape]
	last, lastW := uint32(0), int64(0)
	for i := range moves {
		rate, w := e.rate.move(a, &moves[i], pattern)
		if rate > 0 {
			last, lastW = uint32(i), w
			if x < rate {
				break
			}
		}
		x -= rate
	}
	return place.first + last, lastW
}

// shift gives a seat a new rate and pattern; it returns true if the class it
// enters passes its bound.
func (e *composition) shift(a uint32, s *ratedSeat, rate float64, pattern uint32) bool {
	from, to := e.octave.class(s.rate)&255, e.octave.class(rate)&255
	s.rate = rate
	width := e.hot.bits
	if from == to {
		s.tag = s.tag>>width<<width | uint64(pattern)
		return false
	}
	last := e.end[from] - 1
	e.end[from] = last
	moved := e.arena[last]
	at := s.tag >> width
	e.arena[at] = moved
	e.seat[moved].tag = e.seat[moved].tag&uint64(e.hot.mask) | at<<width
	end := e.end[to]
	e.arena[end] = a
	e.end[to] = end + 1
	s.tag = uint64(end)<<width | uint64(pattern)
	return end >= e.bound[to]
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
	for a := range e.seat {
		dst[a] = uint16(e.pattern(a))
	}
}

// Audit checks lists, tags, rates, levels, sums and the energy.
func (e *composition) Audit() error {
	for a := range e.seat {
		s := &e.seat[a]
		k := e.octave.class(s.rate)
		at := uint32(s.tag >> e.hot.bits)
		if at < e.first[k] || at >= e.end[k] || e.arena[at] != uint32(a) {
			return fmt.Errorf("seat %d is not where its tag says, at %d of octave %d", a, at, k)
		}
		if want := e.rate.total(a, e.g.Places[e.g.PlaceOf(a)].Shape, e.pattern(a)); want != s.rate {
			return fmt.Errorf("seat %d has rate %v, its terms give %v", a, s.rate, want)
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
