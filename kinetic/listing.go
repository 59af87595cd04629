package kinetic

import "math"

// listing lists seats by class and draws attempts ahead.
//
// The seats of class k stand in the arena from first[k] up to end[k]. For a
// stretch of events, bounds at or above the ends stand in for them: events come
// at rate sum_k (bound[k]-first[k])*rate[k], each is a position below a bound,
// and a position at or above the end is a null event (thinning: P. A. W. Lewis,
// G. S. Shedler, Nav. Res. Logist. Q. 26, 403 (1979)), which is exact. So tokens
// do not depend on the state and are drawn ahead. When an end passes its bound,
// or the stretch is long, the unused tokens are dropped and new bounds set;
// exponential waiting times have no memory, so that is exact too.
type listing struct {
	rates   []float64 // by class, at most 256
	seats   int
	touches int // most seats that one jump moves

	src   source
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
}

// window is how many tokens are drawn ahead: one for each used, while a jump
// waits for its own memory; or all at once, so that what they will read can be
// read together, where waiting for memory is what counts.
const window = 32

// token is an attempted jump drawn ahead: a position in the arena, within the
// bound of a class, and 64 random bits that choose among the seat's moves.
type token struct {
	class uint32
	at    uint32
	rest  uint64
}

// arenaSize is the length of the arena for n seats in the given number of
// classes: every class has room for its count, for an equal part of n/4 more,
// and for what a stretch and a jump add.
func arenaSize(n, classes int) int {
	return n + n/4 + n/256 + classes*(2+int(math.Sqrt(float64(n)))+touchesGuess+min(n, wholeRoom))
}

// wholeRoom is how many seats a class has room for whatever its share, so that
// small lattices need never move their classes apart.
const wholeRoom = 1 << 12

// touchesGuess stands for the seats that a jump moves, in estimates.
const touchesGuess = 64

// slack is how far the bound of a stretch lies above the count n: a few of its
// fluctuations in a stretch.
func slack(n uint32) uint32 { return n/256 + 2 + uint32(math.Sqrt(float64(n))) }

// layOut makes an arena with room for the given counts and more. Classes are
// empty then.
func (l *listing) layOut(counts *[256]int) {
	at := uint32(0)
	for k := range l.rates {
		l.first[k], l.end[k] = at, at
		room := max(counts[k]+l.seats/4/len(l.rates), min(l.seats, wholeRoom))
		at += uint32(room+l.touches) + slack(uint32(counts[k]))
		l.room[k] = at
	}
	l.arena = make([]uint32, at)
}

// widen moves the classes apart when one has outgrown its share, keeping the
// order within each, and returns by how much each has moved (mod 2^32).
func (l *listing) widen() (moved [256]uint32) {
	old, first, end := l.arena, l.first, l.end
	var counts [256]int
	for k := range l.rates {
		counts[k] = int(end[k] - first[k])
	}
	l.layOut(&counts)
	for k := range l.rates {
		l.end[k] += uint32(copy(l.arena[l.first[k]:], old[first[k]:end[k]]))
		moved[k] = l.first[k] - first[k]
	}
	return moved
}

// setBounds sets the bounds and the weights of the classes; it returns false
// if a class has no room for its bound.
func (l *listing) setBounds() bool {
	weights := l.draw.weights[:0]
	for k, rate := range l.rates {
		n := l.end[k] - l.first[k]
		n = min(n+slack(n), uint32(l.seats))
		l.bound[k] = l.first[k] + n
		if l.bound[k]+uint32(l.touches) > l.room[k] {
			return false
		}
		weights = append(weights, float64(n)*rate)
	}
	l.draw.set(weights)
	return true
}

// newStretch begins a stretch with the bounds just set.
func (l *listing) newStretch() {
	l.left = min(max(l.seats, 4096), 100000)
	l.setScale()
	if l.draw.sum == 0 {
		return
	}
	l.drawAhead()
}

// drawAhead fills the queue.
func (l *listing) drawAhead() {
	l.head = 0
	for i := range l.queue {
		l.queue[i] = l.draw1()
	}
}

// draw1 draws one attempt of the present stretch.
func (l *listing) draw1() token {
	k := l.draw.draw(l.src.next())
	at, rest := l.src.below(uint64(l.bound[k&255] - l.first[k&255]))
	return token{k, l.first[k&255] + uint32(at), rest}
}

// redraw takes the token at the head of the queue and puts a new one in its
// place.
func (l *listing) redraw() token {
	tk := l.queue[l.head%window]
	l.queue[l.head%window] = l.draw1()
	l.head++
	return tk
}

// take takes the next token; when the queue was used up and is full again,
// filled is true.
func (l *listing) take() (tk token, filled bool) {
	if l.head == window {
		l.drawAhead()
		filled = true
	}
	tk = l.queue[l.head%window]
	l.head++
	return tk, filled
}

func (l *listing) setScale() {
	l.scale = math.Inf(1)
	if l.draw.sum > 0 {
		l.scale = 1 / l.draw.sum
	}
}

func (l *listing) Time() float64 { return l.now }
func (l *listing) Lanes() int    { return 1 }
func (l *listing) Jumps() uint64 { return l.jumps }
