package kinetic

import "math/bits"

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
// Bits are then turned on one by one with probability rest, chosen so that
// 1 - (1 - P/2^8)(1 - rest) = p.
type chance struct {
	steps    [chanceBits + 1]uint64
	rest     float64
	inverted bool
}

func newChance(p float64, inverted bool) chance {
	if !(p >= 0 && p <= 0.5) {
		panic("kinetic: a chance above one half")
	}
	const scale = 1 << chanceBits
	whole := uint64(p * scale)
	low := float64(whole) / scale
	c := chance{rest: (p - low) / (1 - low), inverted: inverted}
	before := uint64(0)
	for i := range chanceBits {
		m := -(whole >> i & 1) // all ones where the step is an OR
		c.steps[i] = before ^ m
		before = m
	}
	c.steps[chanceBits] = before
	if inverted {
		c.steps[chanceBits] ^= ^uint64(0)
	}
	// The first step joins its word to 0, and 0 ^ step is the step itself.
	return c
}

// word returns the word that 8 random words give.
func (c *chance) word(r *[chanceBits]uint64) uint64 {
	s := &c.steps
	y := r[0]&s[0] ^ s[1]
	y = y&r[1] ^ s[2]
	y = y&r[2] ^ s[3]
	y = y&r[3] ^ s[4]
	y = y&r[4] ^ s[5]
	y = y&r[5] ^ s[6]
	y = y&r[6] ^ s[7]
	return y&r[7] ^ s[8]
}
