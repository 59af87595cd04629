package kinetic

import "math/bits"

// laneCounter counts, in each lane, the words in which its bit is 1: bit l of
// place[k] is bit k of the count of lane l. Carries are saved over 16 words
// before they are carried on (S. Harley's method; H. S. Warren, Hacker's Delight,
// 2nd ed., section 5-1).
type laneCounter struct {
	place [64]uint64
	top   int // places in use
}

// add counts words[0], words[stride], ... of n words, each joined by exclusive
// or with those at the other differences.
func (c *laneCounter) add(words []uint64, at int, stride, n int, differences []int32) {
	switch len(differences) {
	case 1:
		c.addOne(words[at+int(differences[0]):], stride, n)
	case 2:
		c.addTwo(words, at+int(differences[0]), at+int(differences[1]), stride, n)
	default:
		for range n {
			w := uint64(0)
			for _, d := range differences {
				w ^= words[at+int(d)]
			}
			c.carry(0, w)
			at += stride
		}
	}
}

// carry adds a word of weight 2^k.
func (c *laneCounter) carry(k int, w uint64) {
	for ; w != 0; k++ {
		c.place[k], w = c.place[k]^w, c.place[k]&w
		c.top = max(c.top, k+1)
	}
}

// fullAdd adds three bits.
func fullAdd(a, b, c uint64) (sum, carry uint64) {
	u := a ^ b
	return u ^ c, a&b | u&c
}

// addBlock counts eight words.
func (c *laneCounter) addBlock(w *[8]uint64) {
	one, two, four := c.place[0], c.place[1], c.place[2]
	one, a := fullAdd(one, w[0], w[1])
	one, b := fullAdd(one, w[2], w[3])
	two, f := fullAdd(two, a, b)
	one, a = fullAdd(one, w[4], w[5])
	one, b = fullAdd(one, w[6], w[7])
	two, g := fullAdd(two, a, b)
	four, e := fullAdd(four, f, g)
	c.place[0], c.place[1], c.place[2] = one, two, four
	c.top = max(c.top, 3)
	c.carry(3, e)
}

func (c *laneCounter) addOne(words []uint64, stride, n int) {
	var w [8]uint64
	at := 0
	for ; n >= 8; n -= 8 {
		for i := range w {
			w[i] = words[at]
			at += stride
		}
		c.addBlock(&w)
	}
	for ; n > 0; n-- {
		c.carry(0, words[at])
		at += stride
	}
}

func (c *laneCounter) addTwo(words []uint64, x, y int, stride, n int) {
	var w [8]uint64
	for ; n >= 8; n -= 8 {
		for i := range w {
			w[i] = words[x] ^ words[y]
			x += stride
			y += stride
		}
		c.addBlock(&w)
	}
	for ; n > 0; n-- {
		c.carry(0, words[x]^words[y])
		x += stride
		y += stride
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

// addTo adds weight times the count of each lane to dst[lane*step], and empties
// the counter.
func (c *laneCounter) addTo(dst []int64, step int, weight int64) {
	for low := 0; low < c.top; low += 8 {
		places := c.place[low:min(low+8, c.top)]
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
	clear(c.place[:c.top])
	c.top = 0
}

// patternCounter counts the patterns of n words by bit position, over all lanes.
// For few words it counts the lanes in which all words of a subset have a 1,
// and gets the patterns from these by inclusion and exclusion; else it reads
// the pattern of every lane.
type patternCounter struct {
	n      int
	subset [1 << subsetWords]int64
	all    [1 << subsetWords]uint64
}

// subsetWords is the largest number of words whose subsets are fewer than the
// steps of reading 64 patterns.
const subsetWords = 6

// add counts one seat.
func (c *patternCounter) add(words []uint64) {
	n := 1
	for _, w := range words {
		for s := range n {
			c.all[n+s] = c.all[s] & w
		}
		n *= 2
	}
	for s, w := range c.all[:n] {
		c.subset[s] += int64(bits.OnesCount64(w))
	}
}

// addTo adds the counts to dst[pattern], where bit i of a pattern is bit slots[i],
// and empties the counter.
func (c *patternCounter) addTo(dst []int64, slots []int) {
	n := 1 << len(slots)
	counts := c.subset[:n]
	for i := range slots {
		for s := range n {
			if s>>i&1 == 0 {
				counts[s] -= counts[s|1<<i]
			}
		}
	}
	for s, k := range counts {
		p := 0
		for i, b := range slots {
			p |= s >> i & 1 << b
		}
		dst[p] += k
	}
	clear(counts)
}

// countLanes adds one to dst for the pattern of every lane, where bit b of a
// pattern is in words[b].
func countLanes(words []uint64, dst []int64) {
	for group := 0; group < lanesPerWord; group += 8 {
		var low, high uint64
		for b, w := range words {
			v := spread[w>>group&255]
			if b < 8 {
				low |= v << b
			} else {
				high |= v << (b - 8)
			}
		}
		for i := 0; i < 64; i += 8 {
			dst[low>>i&255|high>>i&255<<8]++
		}
	}
}
