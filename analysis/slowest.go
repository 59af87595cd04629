package analysis

import "math"

// slowest returns the time at which the decay of one observable levels off,
//
//	tau(t) = (t/2) / ln[C(t/2)/C(t)],
//
// averaged over plateaus as in [slowMode], and a lower bound of the slowest
// time in it. ln C is convex, so that tau(t) rises with t towards the slowest
// time from below: the value has no two-sided error, and its Low and High are
// zero. The bound takes the spread between plateaus into its error.
func slowest(in *integrated) (*mode, Estimate, Bound) {
	b := &basis{p: in.pool.p, pool: in.pool, obs: []int{in.o}, times: in.times, scale: []float64{math.Sqrt(in.c[0])}}
	b.c = b.curve(in.c)
	for _, row := range in.without {
		b.without = append(b.without, b.curve(row))
		b.times = b.times[:min(len(b.times), len(row))]
	}
	// Two passes: lags up to three times the slowest time seen in the first.
	m := newMode(b, in.tau)
	if m.ok && m.tau > math.Log(in.tau) {
		if second := newMode(b, math.Exp(m.tau)); second.ok {
			m = second
		}
	}
	if !m.ok {
		const reason = "no lag gives a decay above noise"
		return m, missing(codeNoise, reason), noBound(codeNoise, reason)
	}
	u := len(b.without)
	se := math.Hypot(m.se, m.spread)
	est := Estimate{Value: math.Exp(m.tau), Err: math.Exp(m.tau) * se, Units: u, OK: true}
	return m, est, Bound{Value: math.Exp(m.tau - studentT(boundTail, u-1)*se), Confidence: 0.95, OK: true}
}

// curve is C(t) of one observable as one-by-one matrices.
func (b *basis) curve(c []float64) [][][]float64 {
	m := make([][][]float64, len(c))
	for i, x := range c {
		m[i] = [][]float64{{x / (b.scale[0] * b.scale[0])}}
	}
	return m
}
