package analysis

import (
	"math"
	"testing"
)

// BenchmarkInfer is one point of the size that a large study has: 64 units, 4
// scalar observables with all 10 pairs, about 60 lags. 100 such points must fit
// into 15 s on two cores, so that one must stay below 300 ms.
func BenchmarkInfer(b *testing.B) {
	m := mixture{"bench", []float64{1, 2, 5, 12}, [][]float64{
		{1, .5, .2, .1}, {.3, 1, .5, .2}, {.2, -.4, 1, .3}, {.1, .2, .3, 1}}}
	p := m.point(1, 64, 100, 0.1)
	b.ReportMetric(float64(len(p.Pairs[0].Lags)), "lags")
	sum := 0.0
	for b.Loop() {
		sum += Infer(p, Options{}).SlowMode.Tau.Value
	}
	if math.IsNaN(sum) {
		b.Fatal("not a number")
	}
}
