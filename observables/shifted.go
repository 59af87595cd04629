package observables

import "math/big"

// Sums of powers and products are accumulated for differences d = f - c from a
// fixed value c near the data, where they keep their digits, and turned into
// sums for f only once, at the end of a unit.

// expansion computes in 256-bit arithmetic and rounds once.
const expansion = 256

func wide(x float64) *big.Float { return new(big.Float).SetPrec(expansion).SetFloat64(x) }

func wideSum(terms ...*big.Float) *big.Float {
	s := wide(0)
	for _, t := range terms {
		s.Add(s, t)
	}
	return s
}

func wideProduct(factors ...float64) *big.Float {
	p := wide(1)
	for _, f := range factors {
		p.Mul(p, wide(f))
	}
	return p
}

func narrow(x *big.Float) float64 {
	f, _ := x.Float64()
	return f
}

// pairSums are the sums of f, g and f*g over pairs of samples.
type pairSums struct{ f, g, fg float64 }

// unshift returns the sums for f and g from those for f - cf and g - cg over n
// pairs:
//
//	sum f g = sum d e + cf sum e + cg sum d + n cf cg.
func (s pairSums) unshift(n int64, cf, cg float64) pairSums {
	return pairSums{
		f:  narrow(wideSum(wide(s.f), wideProduct(float64(n), cf))),
		g:  narrow(wideSum(wide(s.g), wideProduct(float64(n), cg))),
		fg: narrow(wideSum(wide(s.fg), wideProduct(cf, s.g), wideProduct(cg, s.f), wideProduct(float64(n), cf, cg))),
	}
}

// powerSums are the sums of the first four powers.
type powerSums [4]float64

func (p *powerSums) add(d float64) {
	d2 := d * d
	p[0] += d
	p[1] += d2
	p[2] += d2 * d
	p[3] += d2 * d2
}

// unshift returns the sums of powers of f from those of f - c over n values, by
// the binomial theorem.
func (p powerSums) unshift(n int64, c float64) powerSums {
	at := [5]float64{float64(n), p[0], p[1], p[2], p[3]}
	binomial := [5][5]float64{{1}, {1, 1}, {1, 2, 1}, {1, 3, 3, 1}, {1, 4, 6, 4, 1}}
	var out powerSums
	for k := 1; k <= 4; k++ {
		sum := wide(0)
		power := wide(1) // c^(k-j)
		for j := k; j >= 0; j-- {
			term := wideProduct(binomial[k][j], at[j])
			sum.Add(sum, term.Mul(term, power))
			power.Mul(power, wide(c))
		}
		out[k-1] = narrow(sum)
	}
	return out
}
