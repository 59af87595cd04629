package kinetic

import (
	"fmt"
	"math"
	"math/bits"
)

// ClassEngine is the name of the class engine.
const ClassEngine = "classes"

// classes draws trajectories by classes of equal rate (A. B. Bortz, M. H. Kalos,
// J. L. Lebowitz, J. Comput. Phys. 17, 10 (1975)). A tag is a seat's position in
// the arena, shifted, and its pattern.
type classes[T uint32 | uint64] struct {
	listing
	tally
	hot  hot
	tags []T
	seen T // of what was read ahead
}

// NewClasses returns the class engine for any generator, with one trajectory:
// the given unit of the stream that seed identifies. It needs about 9 bytes per
// seat, 13 where the pattern and the number of seats do not fit 32 bits together.
func NewClasses(g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	if g.Couplings != nil {
		return nil, errVaryingCouplings
	}
	if g.Wide != nil {
		return nil, errWidePatterns
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

// ClassBytes estimates the memory of one class engine.
func ClassBytes(g *Generator) int64 {
	tag := int64(8)
	if g.narrow() {
		tag = 4
	}
	return int64(g.Addresses())*tag + 4*int64(arenaSize(g.Addresses(), len(g.Rates))) + g.tableBytes()
}

func newClasses[T uint32 | uint64](g *Generator, s *state, src source) *classes[T] {
	e := &classes[T]{hot: newHot(g), tags: make([]T, len(s.patterns))}
	for a, p := range s.patterns {
		e.tags[a] = T(p)
	}
	e.tally = newTally(g, e.tags, s.lines, e.hot.words)
	e.listing = listing{rates: g.Rates, seats: len(e.tags), touches: e.hot.touches, src: src}
	e.fill()
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
	e.layOut(&counts)
	for a := range e.tags {
		k := e.class(a)
		e.arena[e.end[k]] = uint32(a)
		e.tags[a] = T(e.end[k])<<e.hot.bits | e.tags[a]&T(e.hot.mask)
		e.end[k]++
	}
}

// refresh begins a new stretch, making room first where a class needs it.
func (e *classes[T]) refresh() {
	for !e.setBounds() {
		moved := e.widen()
		mask := T(e.hot.mask)
		for a, tag := range e.tags {
			at := uint32(tag>>e.hot.bits) + moved[e.class(a)]
			e.tags[a] = T(at)<<e.hot.bits | tag&mask
		}
	}
	e.newStretch()
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

// lookAhead reads what the queue's jumps will change, so that their waits for
// memory overlap. It changes nothing.
func (e *classes[T]) lookAhead() {
	var seats [window]uint32
	for i := range e.queue {
		seats[i] = e.arena[e.queue[i].at]
	}
	for _, a := range seats {
		e.seen ^= e.tags[a]
		for _, d := range e.hot.far {
			if b := uint32(int32(a) + d); int(b) < len(e.tags) {
				e.seen ^= e.tags[b]
			}
		}
	}
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
		if h.far != nil && head == window {
			e.src = src
			e.drawAhead()
			src, head = e.src, 0
			e.lookAhead()
		}
		tk := e.queue[head%window]
		if h.far == nil {
			k := e.draw.draw(src.next())
			i, rest := src.below(uint64(e.bound[k&255] - e.first[k&255]))
			e.queue[head%window] = token{k, e.first[k&255] + uint32(i), rest}
		}
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
