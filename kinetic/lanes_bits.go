package kinetic

import (
	"math"
	"math/bits"
	"slices"
)

// bulk is a stream of words in which every bit is used by another lane:
// xoshiro256++ (D. Blackman, S. Vigna, ACM Trans. Math. Softw. 47, 36 (2021)).
// Its state is drawn from a source.
type bulk struct{ a, b, c, d uint64 }

func newBulk(src *source) bulk {
	s := bulk{src.next(), src.next(), src.next(), src.next()}
	if s == (bulk{}) {
		s.a = 1 // the one state that does not move
	}
	return s
}

// fill writes the next words of the stream.
func (s *bulk) fill(dst []uint64) {
	a, b, c, d := s.a, s.b, s.c, s.d
	for i := range dst {
		dst[i] = bits.RotateLeft64(a+d, 23) + a
		t := b << 17
		c ^= a
		d ^= b
		b ^= c
		a ^= d
		c ^= t
		d = bits.RotateLeft64(d, 45)
	}
	s.a, s.b, s.c, s.d = a, b, c, d
}

// attemptsAhead is how many attempts are drawn at a time.
const attemptsAhead = 128

// wordColumn is one word for each attempt drawn ahead.
type wordColumn = [attemptsAhead]uint64

// chanceBits is the number of random words that a chance takes. Its remaining
// bits are put in one lane at a time, so any number is exact; with 8 that
// happens about once in three attempts.
const chanceBits = 8

// chance makes words in which every bit is 1 with probability p <= 1/2 (or, if
// inverted, 1 - p), independently.
//
// With P = floor(2^8 p), a word of probability P/2^8 is the bitwise comparison
// U < P with 8 random words as the bits of U, from the last bit up: the result
// so far is joined to the next word by OR where P has a 1, by AND where it has a
// 0. With OR written as AND between complements, all steps are (y & r) ^ step.
// Then points are strewn over the bits, on average rest to a bit, and bits under
// a point are turned on: exp(-rest) (1 - P/2^8) = 1 - p.
type chance struct {
	steps    [chanceBits + 1]uint64
	rest     float64
	heeds    uint64 // share of the points that count, scaled to 2^51
	flip     uint64 // all ones if inverted
	inverted bool
}

func newChance(p float64, inverted bool) chance {
	if !(p >= 0 && p <= 0.5) {
		panic("kinetic: a chance above one half")
	}
	const scale = 1 << chanceBits
	whole := uint64(p * scale)
	low := float64(whole) / scale
	c := chance{rest: -math.Log1p(-(p - low) / (1 - low)), inverted: inverted}
	before := uint64(0)
	for i := range chanceBits {
		m := -(whole >> i & 1) // all ones where the step is an OR
		c.steps[i] = before ^ m
		before = m
	}
	c.steps[chanceBits] = before
	if inverted {
		c.flip = ^uint64(0)
		c.steps[chanceBits] ^= c.flip
	}
	return c
}

// fill makes the words of all attempts from their random words; turned, if not
// nil, gets the complements.
func (c *chance) fill(raw *[chanceBits]wordColumn, out, turned *wordColumn) {
	s0, s1, s2 := c.steps[0], c.steps[1], c.steps[2]
	s3, s4, s5 := c.steps[3], c.steps[4], c.steps[5]
	s6, s7, s8 := c.steps[6], c.steps[7], c.steps[8]
	for i := range out {
		y := raw[0][i]&s0 ^ s1
		y = y&raw[1][i] ^ s2
		y = y&raw[2][i] ^ s3
		y = y&raw[3][i] ^ s4
		y = y&raw[4][i] ^ s5
		y = y&raw[5][i] ^ s6
		y = y&raw[6][i] ^ s7
		out[i] = y&raw[7][i] ^ s8
	}
	if turned != nil {
		for i, y := range out {
			turned[i] = ^y
		}
	}
}

// word makes the word of one attempt.
func (c *chance) word(raw *[chanceBits]wordColumn, i int) uint64 {
	y := c.steps[0]
	for k := range raw {
		y = y&raw[k][i] ^ c.steps[k+1]
	}
	return y
}

// poisson draws Poisson variates of a fixed mean by inversion.
type poisson struct {
	below []uint64 // below[k] is the probability of at most k, scaled to 2^64
}

// newPoisson tabulates the distribution up to where 64 bits end.
func newPoisson(mean float64) poisson {
	var p poisson
	sum := 0.0
	for k := 0; ; k++ {
		lg, _ := math.Lgamma(float64(k) + 1)
		term := math.Exp(float64(k)*math.Log(mean) - mean - lg)
		sum += term
		if float64(k) > mean && term < 0x1p-64 || sum >= 1 {
			return p
		}
		p.below = append(p.below, uint64(sum*0x1p64))
	}
}

// most returns the largest variate.
func (p *poisson) most() int { return len(p.below) }

// draw returns the variate that 64 random bits choose.
func (p *poisson) draw(u uint64) int {
	n, _ := slices.BinarySearch(p.below, u)
	if n < len(p.below) && p.below[n] == u {
		n++
	}
	return n
}
