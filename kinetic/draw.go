package kinetic

import "math/bits"

// classDraw draws a class in proportion to fixed weights: by comparing with
// cumulative weights when there are few, else by aliases (A. J. Walker, ACM
// Trans. Math. Softw. 3, 253 (1977)).
type classDraw struct {
	weights []float64
	cum     [linearClasses]float64 // cumulative, unused entries +Inf
	sum     float64
	cut     []uint64 // aliases: keep the column below this
	alias   []uint32
}

// linearClasses is how many classes are compared with one by one.
const linearClasses = 8

// set takes new weights (the slice is kept) and returns their sum.
func (d *classDraw) set(weights []float64) float64 {
	d.weights = weights
	d.sum = 0
	for _, w := range weights {
		d.sum += w
	}
	if len(weights) > linearClasses {
		d.setAliases()
		return d.sum
	}
	sum := 0.0
	for k := range d.cum {
		d.cum[k] = d.sum * 2
		if k < len(weights)-1 {
			sum += weights[k]
			d.cum[k] = sum
		}
	}
	return d.sum
}

// class returns the class that 64 random bits choose.
func (d *classDraw) class(u uint64) uint32 {
	if len(d.weights) > linearClasses {
		return d.aliased(u)
	}
	x := uniform(u) * d.sum
	k := uint32(0)
	for _, c := range &d.cum {
		if x >= c {
			k++
		}
	}
	return k
}

// aliased splits u: the high part of u*K is a column, the low part decides
// between it and its alias.
func (d *classDraw) aliased(u uint64) uint32 {
	k, rest := bits.Mul64(u, uint64(len(d.cut)))
	if rest < d.cut[k] {
		return uint32(k)
	}
	return d.alias[k]
}

func (d *classDraw) setAliases() {
	n := len(d.weights)
	if cap(d.cut) < n {
		d.cut = make([]uint64, n)
		d.alias = make([]uint32, n)
	}
	d.cut, d.alias = d.cut[:n], d.alias[:n]
	share := make([]float64, n)
	var small, large []uint32
	for k, w := range d.weights {
		share[k] = w / d.sum * float64(n)
		if share[k] < 1 {
			small = append(small, uint32(k))
		} else {
			large = append(large, uint32(k))
		}
	}
	for len(small) > 0 && len(large) > 0 {
		s, l := small[len(small)-1], large[len(large)-1]
		small = small[:len(small)-1]
		d.cut[s] = uint64(share[s] * 0x1p64)
		d.alias[s] = l
		share[l] -= 1 - share[s]
		if share[l] < 1 {
			large = large[:len(large)-1]
			small = append(small, l)
		}
	}
	for _, rest := range [][]uint32{small, large} {
		for _, k := range rest {
			d.cut[k] = 1<<64 - 1
			d.alias[k] = k
		}
	}
}
