package kinetic

import "math/bits"

// aliases draws an index in proportion to fixed weights in constant time
// (A. J. Walker, ACM Trans. Math. Softw. 3, 253 (1977)): an equal column per
// index, each shared between the index and one alias.
type aliases struct {
	weights []float64
	sum     float64
	column  []column

	share        []float64
	small, large []uint32
}

type column struct {
	cut   uint64 // the index itself below this, scaled to 2^64
	alias uint32
}

// set takes new weights; the slice is kept.
func (d *aliases) set(weights []float64) {
	d.weights = weights
	d.sum = 0
	for _, w := range weights {
		d.sum += w
	}
	if d.sum == 0 {
		return
	}
	if len(d.column) != len(weights) {
		d.column = make([]column, len(weights))
	}
	d.share, d.small, d.large = d.share[:0], d.small[:0], d.large[:0]
	for k, w := range weights {
		d.share = append(d.share, w/d.sum*float64(len(weights)))
		d.sort(uint32(k))
	}
	for len(d.small) > 0 && len(d.large) > 0 {
		s, l := d.small[len(d.small)-1], d.large[len(d.large)-1]
		d.small, d.large = d.small[:len(d.small)-1], d.large[:len(d.large)-1]
		d.column[s] = column{uint64(d.share[s] * 0x1p64), l}
		d.share[l] -= 1 - d.share[s]
		d.sort(l)
	}
	// What is left differs from a whole column by rounding only, but for
	// indices without weight that rounding has left over.
	for _, rest := range [][]uint32{d.small, d.large} {
		for _, k := range rest {
			d.column[k] = column{1<<64 - 1, k}
			if weights[k] == 0 {
				d.column[k] = column{0, d.heaviest()}
			}
		}
	}
}

func (d *aliases) heaviest() uint32 {
	best := 0
	for k, w := range d.weights {
		if w > d.weights[best] {
			best = k
		}
	}
	return uint32(best)
}

func (d *aliases) sort(k uint32) {
	if d.share[k] < 1 {
		d.small = append(d.small, k)
	} else {
		d.large = append(d.large, k)
	}
}

// draw returns the index that 64 random bits choose: the high half of u*K is a
// column, the low half decides between it and its alias.
func (d *aliases) draw(u uint64) uint32 {
	k, rest := bits.Mul64(u, uint64(len(d.column)))
	c := &d.column[k]
	if rest < c.cut {
		return uint32(k)
	}
	return c.alias
}
