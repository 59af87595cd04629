package analysis

import (
	"math"
	"testing"
)

// A mode of 2 % of the variance and 20 times the time of the rest makes 29 % of
// tau_int and lies mostly beyond Wolff's window. Four standard errors of the mean
// over data sets, and each within its own error as a rule.
func TestSlowTailIsCounted(t *testing.T) {
	p := ou("weak and slow", exponential{c: 0.98, rate: 1}, exponential{c: 0.02, rate: 0.05})
	const sets = 12
	var z, z2 float64
	extended := 0
	for i := range sets {
		point := p.point(uint64(100+i), 16, 30000, 0.5)
		in, est := integrate(&point, 0, func(split int) *pool { return newPool(&point, split) })
		if !est.OK {
			t.Fatal(est.Reason)
		}
		if in.tailShare > 0 {
			extended++
		}
		d := math.Log(est.Value/p.tauInt()) / (est.Err / est.Value)
		z += d / sets
		z2 += d * d / sets
	}
	t.Logf("mean deviation %.2f, rms %.2f standard errors, %d of %d extended", z, math.Sqrt(z2), extended, sets)
	if math.Abs(z) > 4/math.Sqrt(sets) || z2 > 4 || extended < sets/2 {
		t.Errorf("mean deviation %.2f, rms %.2f standard errors, %d of %d extended", z, math.Sqrt(z2), extended, sets)
	}
}

// A single exponential ends in its window.
func TestNoTailOfOneExponential(t *testing.T) {
	p := ou("one", exponential{c: 1, rate: 1})
	extended := 0
	const sets = 20
	for i := range sets {
		point := p.point(uint64(i), 16, 1000, 0.1)
		if in, _ := integrate(&point, 0, func(split int) *pool { return newPool(&point, split) }); in.tailShare > 0 {
			extended++
		}
	}
	if extended > 1 {
		t.Errorf("%d of %d extended", extended, sets)
	}
}
