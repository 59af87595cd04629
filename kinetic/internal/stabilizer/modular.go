package stabilizer

import "math"

// vector is a product of rows over Z_q, as element is over Z_2: entries from
// column lo on, the first of them not 0.
type vector struct {
	lo    int32
	phase int // units of exp(i pi/q), over the X^x Z^z of the entries
	entry []uint8
}

// howell is a basis in Howell form (J. A. Howell, Linear Multilinear Algebra
// 19, 67 (1986)): at most one vector for each first column, whose first entry
// divides q, such that every element of the group reduces to the identity.
type howell struct {
	p      *problem
	pivots []*vector // by first column
}

// eliminateModular returns log_q of the order of the group of the rows alive.
func (p *problem) eliminateModular() (rank float64, ok bool) {
	h := howell{p: p, pivots: make([]*vector, p.columns())}
	for _, i := range p.eliminationOrder() {
		row := p.rows[i]
		v := p.vector(row)
		phase, ok := h.insert(v)
		if !ok {
			return 0, false
		}
		p.settle(row, phase)
	}
	whole := 0
	for c, v := range h.pivots {
		if v == nil {
			continue
		}
		if d := int(v.at(int32(c))); d == 1 {
			whole++
		} else {
			rank += math.Log(float64(p.q / d))
		}
	}
	return float64(whole) + rank/math.Log(float64(p.q)), true
}

// vector returns a row at its wanted level: with eigenvalue 1 if it has that.
func (p *problem) vector(row int32) *vector {
	lo, hi := int32(p.columns()), int32(0)
	p.each(row, func(col int32, _ uint8) { lo, hi = min(lo, col), max(hi, col+1) })
	v := &vector{lo: lo, phase: p.phase(row) - 2*int(p.levels[row]), entry: make([]uint8, hi-lo)}
	p.each(row, func(col int32, entry uint8) { v.entry[col-lo] = entry })
	return v
}

// insert adds v to the basis. It returns the phase of the identities that come
// out, 0 if they agree that the vector has eigenvalue 1.
func (h *howell) insert(v *vector) (phase int, ok bool) {
	q := h.p.q
	for {
		if !v.trim() {
			return v.phase, true
		}
		if *h.p.budget -= len(v.entry)/8 + 8; *h.p.budget < 0 {
			return 0, false
		}
		c := v.lo
		b := h.pivots[c]
		a := int(v.at(c))
		if b == nil {
			if *h.p.budget -= storage * len(v.entry) / 8; *h.p.budget < 0 {
				return 0, false
			}
			g := gcd(a, q)
			h.pivots[c] = v.power(h.p, unitTo(a, g, q))
			if g == 1 {
				return 0, true
			}
			v = h.pivots[c].power(h.p, q/g) // its first entry is gone
			continue
		}
		d := int(b.at(c))
		if a%d == 0 {
			v = v.times(h.p, b.power(h.p, q-a/d))
			continue
		}
		// A combination of v and b has the greatest common divisor as first
		// entry and replaces b; what is left of both goes on.
		g := gcd(gcd(a, d), q)
		s, t := combine(a, d, g, q)
		w := v.power(h.p, s).times(h.p, b.power(h.p, t))
		h.pivots[c] = w
		rests := []*vector{
			v.times(h.p, w.power(h.p, q-a/g)),
			b.times(h.p, w.power(h.p, q-d/g)),
			w.power(h.p, q/g),
		}
		for _, r := range rests {
			more, ok := h.insert(r)
			if !ok {
				return 0, false
			}
			if more%(2*q) != 0 {
				phase = more
			}
		}
		return phase, true
	}
}

// unitTo returns a unit u of Z_q with u a = g, g being gcd(a, q).
func unitTo(a, g, q int) int {
	for u := 1; u < q; u++ {
		if gcd(u, q) == 1 && u*a%q == g%q {
			return u
		}
	}
	panic("stabilizer: no unit") // cannot be: a and g generate the same ideal
}

// combine returns s and t with s a + t d = g mod q, s as small as possible.
func combine(a, d, g, q int) (s, t int) {
	for s := range q {
		for t := range q {
			if (s*a+t*d)%q == g {
				return s, t
			}
		}
	}
	panic("stabilizer: no combination") // cannot be: g generates the ideal of a and d
}

func (v *vector) at(col int32) uint8 {
	if i := col - v.lo; i >= 0 && int(i) < len(v.entry) {
		return v.entry[i]
	}
	return 0
}

// trim drops leading zeros and reports whether anything is left.
func (v *vector) trim() bool {
	n := 0
	for n < len(v.entry) && v.entry[n] == 0 {
		n++
	}
	v.lo += int32(n)
	v.entry = v.entry[n:]
	return len(v.entry) > 0
}

// power returns v^k, k >= 0:
//
//	(X^x Z^z)^k = w^(x z k(k-1)/2) X^(kx) Z^(kz).
func (v *vector) power(p *problem, k int) *vector {
	k %= p.q
	out := &vector{lo: v.lo, phase: v.phase * k, entry: make([]uint8, len(v.entry))}
	for i, e := range v.entry {
		out.entry[i] = uint8(int(e) * k % p.q)
	}
	if p.mixed {
		sum := 0
		for c := (v.lo + 1) &^ 1; c < v.lo+int32(len(v.entry)); c += 2 {
			sum += int(v.at(c)) * int(v.at(c+1))
		}
		out.phase += sum * k * (k - 1)
	}
	out.phase %= 2 * p.q
	return out
}

// times returns v u: X^x of u passes Z^z of v.
func (v *vector) times(p *problem, u *vector) *vector {
	lo := min(v.lo, u.lo)
	hi := max(v.lo+int32(len(v.entry)), u.lo+int32(len(u.entry)))
	out := &vector{lo: lo, phase: v.phase + u.phase, entry: make([]uint8, hi-lo)}
	copy(out.entry[v.lo-lo:], v.entry)
	for i, e := range u.entry {
		k := u.lo - lo + int32(i)
		if p.mixed && (u.lo+int32(i))%2 == 0 {
			out.phase += 2 * int(e) * int(v.at(u.lo+int32(i)+1))
		}
		out.entry[k] = uint8((int(out.entry[k]) + int(e)) % p.q)
	}
	out.phase %= 2 * p.q
	return out
}
