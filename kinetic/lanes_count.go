package kinetic

import "math/bits"

// laneCounter counts, in each lane, the words in which its bit is 1: bit l of
// place[k] is bit k of the count of lane l. Carries are saved: a place takes two
// words at a time, so one of each pair waits (S. Harley's method; H. S. Warren,
// Hacker's Delight, 2nd ed., section 5-1).
type laneCounter struct {
	place   [48]uint64
	wait    [48]uint64
	waiting uint64 // bit k is set if a word waits at place k
	some    [8]uint64
	n       int // words in some
}

// fullAdd adds three bits.
func fullAdd(a, b, c uint64) (sum, carry uint64) {
	u := a ^ b
	return u ^ c, a&b | u&c
}

// add counts n words.
func (c *laneCounter) add(words []uint64) {
	one, two, four := c.place[0], c.place[1], c.place[2]
	for ; len(words) >= 8; words = words[8:] {
		w := (*[8]uint64)(words)
		var p, q, r, s, carry uint64
		one, p = fullAdd(one, w[0], w[1])
		one, q = fullAdd(one, w[2], w[3])
		two, r = fullAdd(two, p, q)
		one, p = fullAdd(one, w[4], w[5])
		one, q = fullAdd(one, w[6], w[7])
		two, s = fullAdd(two, p, q)
		four, carry = fullAdd(four, r, s)
		c.push(carry)
	}
	c.place[0], c.place[1], c.place[2] = one, two, four
	for _, w := range words {
		c.addWord(w)
	}
}

// addPairs counts the exclusive or of two runs of words.
func (c *laneCounter) addPairs(x, y []uint64) {
	one, two, four := c.place[0], c.place[1], c.place[2]
	for ; len(x) >= 8 && len(y) >= 8; x, y = x[8:], y[8:] {
		v, w := (*[8]uint64)(x), (*[8]uint64)(y)
		var p, q, r, s, carry uint64
		one, p = fullAdd(one, v[0]^w[0], v[1]^w[1])
		one, q = fullAdd(one, v[2]^w[2], v[3]^w[3])
		two, r = fullAdd(two, p, q)
		one, p = fullAdd(one, v[4]^w[4], v[5]^w[5])
		one, q = fullAdd(one, v[6]^w[6], v[7]^w[7])
		two, s = fullAdd(two, p, q)
		four, carry = fullAdd(four, r, s)
		c.push(carry)
	}
	c.place[0], c.place[1], c.place[2] = one, two, four
	for i, w := range x {
		c.addWord(w ^ y[i])
	}
}

// push takes a word of weight 8.
func (c *laneCounter) push(w uint64) {
	k := 3
	for ; c.waiting>>(k&63)&1 != 0; k++ {
		c.place[k], w = fullAdd(c.place[k], c.wait[k], w)
	}
	c.waiting = (c.waiting>>3 + 1) << 3 // as a binary counter
	c.wait[k] = w
}

// addWord keeps a word until there are eight.
func (c *laneCounter) addWord(w uint64) {
	c.some[c.n&7] = w
	if c.n++; c.n == 8 {
		c.n = 0
		c.add(c.some[:])
	}
}

// spread[b] has bit k of b in the lowest bit of byte k.
var spread [256]uint64

func init() {
	for b := range spread {
		for k := range 8 {
			spread[b] |= uint64(b>>k&1) << (8 * k)
		}
	}
}

// settle adds up the words that wait, and returns the places in use.
func (c *laneCounter) settle() []uint64 {
	for _, w := range c.some[:c.n] {
		c.carry(0, w)
	}
	for k := range c.wait {
		if c.waiting>>k&1 != 0 {
			c.carry(k, c.wait[k])
		}
	}
	c.n, c.waiting = 0, 0
	top := len(c.place)
	for top > 0 && c.place[top-1] == 0 {
		top--
	}
	return c.place[:top]
}

// carry adds a word of weight 2^k.
func (c *laneCounter) carry(k int, w uint64) {
	for ; w != 0; k++ {
		c.place[k], w = c.place[k]^w, c.place[k]&w
	}
}

// addTo adds weight times the count of each lane to dst[lane*step], and empties
// the counter.
func (c *laneCounter) addTo(dst []int64, step int, weight int64) {
	place := c.settle()
	for low := 0; low < len(place); low += 8 {
		places := place[low:min(low+8, len(place))]
		for group := range 8 {
			var v uint64 // byte i: 8 bits of the count of lane 8*group+i
			for k, w := range places {
				v |= spread[w>>(8*group)&255] << k
			}
			for i := range 8 {
				dst[(8*group+i)*step] += weight * int64(v>>(8*i)&255) << low
			}
		}
	}
	clear(place)
}

// gathered is how many seats are read together.
const gathered = 64

// subsetSlots is the largest number of slots whose subsets are fewer than the
// steps of reading 64 patterns.
const subsetSlots = 8

// patternCounter counts the patterns of seats over all lanes, some seats of one
// shape at a time.
type patternCounter struct {
	g     *Generator
	exist [][]int // slots, by shape
	shape int
	slots []int                     // of the shape, that exist
	words [MaxBits][gathered]uint64 // by slot that exists, and seat
	n     int                       // seats in words
	some  [1 << subsetSlots]int64   // lanes in which all words of a subset have a 1
	with  [gathered]uint64
}

func newPatternCounter(g *Generator) *patternCounter {
	c := &patternCounter{g: g, shape: -1}
	for i := range g.Shapes {
		c.exist = append(c.exist, slotsOf(g.Shapes[i].Present))
	}
	return c
}

// begin makes the counter ready for seats of a shape.
func (c *patternCounter) begin(shape int, dst []int64) {
	if c.shape == shape {
		return
	}
	c.finish(dst)
	c.shape = shape
	c.slots = c.exist[shape]
}

// room makes room for up to n seats: those from first, k in number, are to be
// written to words.
func (c *patternCounter) room(n int, dst []int64) (first, k int) {
	if c.n == gathered {
		c.count(dst)
	}
	first = c.n
	k = min(n, gathered-first)
	c.n += k
	return first, k
}

// count counts the seats in words.
func (c *patternCounter) count(dst []int64) {
	if len(c.slots) <= subsetSlots {
		c.countSubsets()
	} else {
		c.countLanes(dst[c.shape<<c.g.Bits:])
	}
	c.n = 0
}

// finish adds what was counted to dst, and empties the counter.
func (c *patternCounter) finish(dst []int64) {
	if c.n > 0 {
		c.count(dst)
	}
	if c.shape >= 0 && len(c.slots) <= subsetSlots {
		c.addPatterns(dst[c.shape<<c.g.Bits:])
	}
	c.shape = -1
}

// countSubsets counts the lanes in which all words of a subset of slots have a
// 1. The subsets of the first three slots are counted together.
func (c *patternCounter) countSubsets() {
	n := c.n
	x, y, z := c.words[0][:n], c.words[1][:n], c.words[2][:n]
	m := c.with[:n]
	for s := 0; s < max(8, 1<<len(c.slots)); s += 8 {
		for i := range m {
			m[i] = ^uint64(0)
		}
		for k := 3; s>>k != 0; k++ {
			if s>>k&1 != 0 {
				for i, w := range c.words[k][:n] {
					m[i] &= w
				}
			}
		}
		var t [8]int
		for i, v := range m {
			a, b := v&x[i], v&y[i]
			ab := a & b
			t[0] += bits.OnesCount64(v)
			t[1] += bits.OnesCount64(a)
			t[2] += bits.OnesCount64(b)
			t[3] += bits.OnesCount64(ab)
			t[4] += bits.OnesCount64(v & z[i])
			t[5] += bits.OnesCount64(a & z[i])
			t[6] += bits.OnesCount64(b & z[i])
			t[7] += bits.OnesCount64(ab & z[i])
		}
		for j, k := range t {
			c.some[s+j] += int64(k)
		}
	}
}

// addPatterns turns the counts of subsets into counts of patterns, by inclusion
// and exclusion, adds these to dst, and clears them.
func (c *patternCounter) addPatterns(dst []int64) {
	n := 1 << len(c.slots)
	for i := range c.slots {
		for s := range n {
			if s>>i&1 == 0 {
				c.some[s] -= c.some[s|1<<i]
			}
		}
	}
	for s, k := range c.some[:n] {
		p := 0
		for i, b := range c.slots {
			p |= s >> i & 1 << b
		}
		dst[p] += k
	}
	clear(c.some[:])
}

// countLanes adds one to dst for the pattern of every lane of the seats.
func (c *patternCounter) countLanes(dst []int64) {
	for i := range c.n {
		for group := 0; group < lanesPerWord; group += 8 {
			var low, high uint64
			for k, b := range c.slots {
				v := spread[c.words[k][i]>>group&255]
				if b < 8 {
					low |= v << b
				} else {
					high |= v << (b - 8)
				}
			}
			for j := 0; j < 64; j += 8 {
				dst[low>>j&255|high>>j&255<<8]++
			}
		}
	}
}
