package observables

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// A total of 1e7 whose relative variance is 1e-8 keeps its variance and its
// covariances: the recorded sums about zero are the exactly rounded ones.
func TestSumsKeepDigits(t *testing.T) {
	const n = 2000
	rng := rand.New(rand.NewPCG(3, 4))
	tl := newTimeline(n)
	c := newCorrelator(tl, &reading{lanes: 1, channels: 1}, [][2]int{{0, 0}})
	m := newMoments(1, 0, 2)
	series := make([]float64, n)
	x := 0.0
	for k := range series {
		x = 0.9*x + rng.NormFloat64()
		series[k] = -1e7 + math.Round(400*x)
		r := &reading{lanes: 1, channels: 1, values: series[k : k+1]}
		tl.next()
		c.add(r)
		m.add(tl.segment(int64(k), MomentSegments), r)
	}
	var powers [5]*big.Float
	for p := range powers {
		powers[p] = wide(0)
	}
	for _, f := range series[:n/MomentSegments] {
		power := wide(1)
		for p := range powers {
			powers[p].Add(powers[p], power)
			power.Mul(power, wide(f))
		}
	}
	for p, got := range m.channel(0, 0) {
		if want := narrow(powers[p+1]); math.Abs(got-want) > math.Abs(want)*0x1p-52 {
			t.Errorf("sum of power %d is %v, want %v", p+1, got, want)
		}
	}
	for i, lag := range tl.lags[:20] {
		var want pairSums
		products := wide(0)
		n := int64(0)
		for k := 0; k < len(series)/PairSegments; k++ {
			n++
			products.Add(products, wideProduct(series[k], series[k+int(lag)]))
			want.f += series[k]
			want.g += series[k+int(lag)]
		}
		got, sums := c.channelPair(0, i, 0)
		if want.fg = narrow(products); got != n || sums != want {
			t.Errorf("lag %d: %d pairs, %+v, want %d, %+v", lag, got, sums, n, want)
		}
	}
}
