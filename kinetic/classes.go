package kinetic

import (
	"fmt"
	"math"
	"math/bits"
)

// ClassEngine is the name of the class engine.
const ClassEngine = "classes"

// window is how many tokens are drawn ahead.
const window = 16

// token is an attempted jump drawn ahead: a position in the arena, within the
// bound of a class, and 64 random bits that choose among the seat's moves.
type token struct {
	class uint32
	at    uint32
	rest  uint64
}

// classes draws trajectories by classes of equal rate (A. B. Bortz, M. H. Kalos,
// J. L. Lebowitz, J. Comput. Phys. 17, 10 (1975)).
//
// The seats of class k are listed in the arena from first[k] up to end[k]. For a
// stretch of events, bounds at or above the ends stand in for them: events come
// at rate sum_k (bound[k]-first[k])*rate[k], each is a position below a bound,
// and a position at or above the end is a null event (thinning: P. A. W. Lewis,
// G. S. Shedler, Nav. Res. Logist. Q. 26, 403 (1979)), which is exact. So tokens
// do not depend on the state and are drawn ahead. When an end passes its bound,
// or the stretch is long, the unused tokens are dropped and new bounds set;
// exponential waiting times have no memory, so that is exact too.
//
// A tag is a seat's position in the arena, shifted, and its pattern.
type classes[T uint32 | uint64] struct {
	g     *Generator
	hot   hot
	src   source
	tags  []T
	arena []uint32
	first [256]uint32
	end   [256]uint32
	bound [256]uint32
	room  [256]uint32 // end of the class's share of the arena
	draw  aliases

	queue [window]token
	head  uint32  // of the next token
	left  int     // tokens left in this stretch
	scale float64 // mean waiting time in this stretch
	next  float64 // time of the next event
	now   float64
	jumps uint64
	nulls uint64

	sums     []int64 // by family
	packed   []int64 // changes of the sums since they were last unpacked
	since    int     // jumps since then
	lines    [][]uint8
	lineSums []int64
}

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

// fields is how many sums are packed in a word, and unpackEvery how many jumps
// may pass before a field could overflow: a jump changes a sum by at most
// 2*MaxBits.
const (
	fields      = 4
	unpackEvery = 1<<15/(2*MaxBits) - 1
)

// NewClasses returns the class engine for any generator, with one trajectory:
// the given unit of the stream that seed identifies. It needs 8 to 12 bytes
// per seat, or 12 to 16 where the pattern and the number of seats do not fit 32
// bits together.
func NewClasses(g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	if g.Levels != 2 {
		return nil, fmt.Errorf("the class engine runs 2 levels, not %d", g.Levels)
	}
	if g.Addresses() > math.MaxInt32 {
		return nil, fmt.Errorf("the lattice has %d sites; the class engine runs at most %d", g.Addresses(), math.MaxInt32)
	}
	src := newSource(seed, unit, "start "+string(start))
	s, err := newState(g, start, &src)
	if err != nil {
		return nil, err
	}
	src = newSource(seed, unit, "jumps")
	if g.narrow() {
		return newClasses[uint32](g, s, src), nil
	}
	return newClasses[uint64](g, s, src), nil
}

// narrow reports whether a tag fits 32 bits.
func (g *Generator) narrow() bool {
	return bits.Len64(uint64(arenaSize(g.Addresses(), len(g.Rates))))+g.Bits <= 32
}

// arenaSize is the length of the arena for n seats in the given number of
// classes: every class has room for its count, for an equal part of n/4 more,
// and for what a stretch and a jump add.
func arenaSize(n, classes int) int {
	return n + n/4 + n/256 + classes*(2+int(math.Sqrt(float64(n)))+maxTouches)
}

// maxTouches bounds how many seats a jump changes, for estimates.
const maxTouches = 1 << 10

// slack is how far the bound of a stretch lies above the count n: a few of its
// fluctuations in a stretch.
func slack(n uint32) uint32 { return n/256 + 2 + uint32(math.Sqrt(float64(n))) }

// ClassBytes estimates the memory of one class engine.
func ClassBytes(g *Generator) int64 {
	tag := int64(8)
	if g.narrow() {
		tag = 4
	}
	return int64(g.Addresses())*tag + 4*int64(arenaSize(g.Addresses(), len(g.Rates))) + g.tableBytes()
}

func newClasses[T uint32 | uint64](g *Generator, s *state, src source) *classes[T] {
	e := &classes[T]{g: g, src: src, hot: newHot(g), tags: make([]T, len(s.patterns)), lines: s.lines}
	for a, p := range s.patterns {
		e.tags[a] = T(p)
	}
	e.fill()
	e.initSums()
	e.refresh()
	e.next = e.src.exponential() * e.scale
	return e
}

// class returns the class of the seat at an address.
func (e *classes[T]) class(a int) uint8 {
	return e.g.Shapes[e.g.Places[e.g.PlaceOf(a)].Shape].Class[uint32(e.tags[a])&e.hot.mask]
}

// fill lists the seats of each class by address, and tags them.
func (e *classes[T]) fill() {
	var counts [256]int
	for a := range e.tags {
		counts[e.class(a)]++
	}
	e.layOut(counts)
	for a := range e.tags {
		k := e.class(a)
		e.arena[e.end[k]] = uint32(a)
		e.tags[a] = T(e.end[k])<<e.hot.bits | e.tags[a]&T(e.hot.mask)
		e.end[k]++
	}
}

// layOut makes an arena with room for the given counts and more. Classes are
// empty then.
func (e *classes[T]) layOut(counts [256]int) {
	at := uint32(0)
	for k := range e.g.Rates {
		e.first[k], e.end[k] = at, at
		at += uint32(counts[k]+len(e.tags)/4/len(e.g.Rates)+e.hot.touches) + slack(uint32(counts[k]))
		e.room[k] = at
	}
	e.arena = make([]uint32, at)
}

// makeRoom moves the classes apart when one has outgrown its share, keeping
// the order within each.
func (e *classes[T]) makeRoom() {
	old, first, end := e.arena, e.first, e.end
	var counts [256]int
	for k := range e.g.Rates {
		counts[k] = int(end[k] - first[k])
	}
	e.layOut(counts)
	for k := range e.g.Rates {
		e.end[k] += uint32(copy(e.arena[e.first[k]:], old[first[k]:end[k]]))
	}
	mask := T(e.hot.mask)
	for a, tag := range e.tags {
		k := e.class(a)
		e.tags[a] = (tag>>e.hot.bits+T(e.first[k])-T(first[k]))<<e.hot.bits | tag&mask
	}
}

func newHot(g *Generator) hot {
	h := hot{
		bits:   uint(g.Bits),
		mask:   1<<g.Bits - 1,
		rowLen: uint32(len(g.Col)),
		words:  uint32(max(1, (len(g.Families)+fields-1)/fields)),
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
		for e := 0; e < len(s.Delta); e += len(g.Families) {
			h.delta = append(h.delta, pack(s.Delta[e:e+len(g.Families)])...)
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
	return h
}

// pack adds small numbers into words of 16-bit fields; sums of such words are
// the words of the sums.
func pack(delta []int8) []int64 {
	words := make([]int64, (len(delta)+fields-1)/fields)
	for f, d := range delta {
		words[f/fields] += int64(d) << (16 * (f % fields))
	}
	return words
}

// unpack moves the packed changes to the sums.
func (e *classes[T]) unpack() {
	for w, word := range e.packed {
		for f := w * fields; f < min((w+1)*fields, len(e.sums)); f++ {
			d := int64(int16(word))
			e.sums[f] += d
			word = (word - d) >> 16
		}
		e.packed[w] = 0
	}
	e.since = 0
}

// refresh sets new bounds from the present counts and draws the tokens anew.
func (e *classes[T]) refresh() {
	for !e.setBounds() {
		e.makeRoom()
	}
	e.left = min(max(len(e.tags), 4096), 100000)
	e.scale = math.Inf(1)
	if e.draw.sum == 0 {
		return
	}
	e.scale = 1 / e.draw.sum
	e.head = 0
	for i := range e.queue {
		e.queue[i] = e.token()
	}
}

// setBounds sets the bounds and the weights of the classes; it returns false
// if a class has no room for its bound.
func (e *classes[T]) setBounds() bool {
	weights := e.draw.weights[:0]
	for k, rate := range e.g.Rates {
		n := e.end[k] - e.first[k]
		n = min(n+slack(n), uint32(len(e.tags)))
		e.bound[k] = e.first[k] + n
		if e.bound[k]+uint32(e.hot.touches) > e.room[k] {
			return false
		}
		weights = append(weights, float64(n)*rate)
	}
	e.draw.set(weights)
	return true
}

// token draws one attempt of the present stretch.
func (e *classes[T]) token() token {
	k := e.draw.draw(e.src.next())
	i, rest := e.src.below(uint64(e.bound[k] - e.first[k]))
	return token{k, e.first[k] + uint32(i), rest}
}

// Advance runs the trajectory to time t.
func (e *classes[T]) Advance(t float64) {
	if t < e.now {
		panic("kinetic: Advance to an earlier time")
	}
	for e.next <= t {
		if e.events(t) {
			at := e.next
			e.refresh()
			e.next = at + e.src.exponential()*e.scale
		}
	}
	e.now = t
}

// events executes events up to time t. It returns true if the stretch ended at
// the event at e.next, which has been executed, and false if e.next is the
// first event after t.
//
// The function is long because it is the inner loop: one jump is 5 to 15 seats
// that change class, each a dozen instructions and two accesses to memory that
// wait for none before them.
func (e *classes[T]) events(t float64) bool {
	h := &e.hot
	tags, touches, tables := e.tags, e.g.Touch, e.g.Tables
	arena, end, src := e.arena, &e.end, e.src
	next, scale, head, left := e.next, e.scale, e.head, e.left
	width, mask := h.bits&63, T(h.mask)
	over := false
	packed := int64(0) // the single word of sums, while it is in use
	for next <= t {
		tk := e.queue[head%window]
		k := e.draw.draw(src.next())
		i, rest := src.below(uint64(e.bound[k&255] - e.first[k&255]))
		e.queue[head%window] = token{k, e.first[k&255] + uint32(i), rest}
		head++
		left--
		if tk.at < end[tk.class&255] {
			j := arena[tk.at]
			hi, _ := bits.Mul64(uint64(j), h.magic)
			row := uint32(hi) + j&h.single
			col := j - row*h.rowLen
			place := &h.places[e.g.Row[row]+uint32(e.g.Col[col])]
			pattern := uint32(tags[j] & mask)
			move := place.first
			if place.moves > 1 {
				split := h.splits[place.shape][pattern*uint32(place.moves):]
				for a := range uint32(place.moves) - 1 {
					if tk.rest >= split[a] {
						move++
					} else {
						break
					}
				}
			}
			mv := &h.moves[move]
			if h.words == 1 {
				packed += h.delta[mv.delta+pattern]
			} else {
				for w := range h.words {
					e.packed[w] += h.delta[mv.delta+pattern*h.words+w]
				}
			}
			for i := mv.first; i < mv.energy; i++ {
				touch := &touches[i]
				a := uint32(int32(j) + touch.Delta)
				tag := tags[a]
				v := tables[touch.Table+uint32(tag&mask)]
				from, to := v>>16&255, v>>24
				last := end[from] - 1
				end[from] = last
				moved := arena[last]
				arena[tag>>width] = moved
				tags[moved] = tags[moved]&mask | tag&^mask
				at := end[to]
				arena[at] = a
				end[to] = at + 1
				tags[a] = T(at)<<width | T(v&0xffff)
				over = over || at >= e.bound[to]
			}
			for i := mv.energy; i < mv.last; i++ {
				touch := &touches[i]
				a := uint32(int32(j) + touch.Delta)
				tag := tags[a]
				tags[a] = tag&^mask | T(tables[touch.Table+uint32(tag&mask)]&0xffff)
			}
			if mv.firstHit < mv.lastHit {
				e.hitLines(mv, row, col)
			}
			e.jumps++
			if e.since++; e.since == unpackEvery {
				e.packed[0] += packed
				packed = 0
				e.unpack()
			}
		} else {
			e.nulls++
		}
		if over || left == 0 {
			break
		}
		next += src.exponential() * scale
	}
	e.src = src
	e.packed[0] += packed
	e.next, e.head, e.left = next, head, left
	return over || left == 0
}

// hitLines changes the lines that a move meets, and their sums.
func (e *classes[T]) hitLines(mv *hotMove, row, col uint32) {
	for i := mv.firstHit; i < mv.lastHit; i++ {
		hit := &e.g.Hits[i]
		at := hit.Col[col] + hit.Row[row]
		line := e.lines[hit.Line]
		if int(at) >= len(line) {
			continue
		}
		line[at] ^= hit.Change
		e.lineSums[hit.Line] += 2 - 4*int64(line[at])
	}
}
