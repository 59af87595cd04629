package kinetic

import (
	"math"
	"math/big"
	"testing"

	"sojourn/kinetic/bath"
)

// The q-th roots of unity that are p-th roots times a fixed one add up to 0 for
// every prime p that divides q, and these relations generate all others (N. G.
// de Bruijn, Indag. Math. 15, 370 (1953)). The values of a clock obey them
// exactly.
func TestClockShape(t *testing.T) {
	for q := 2; q <= 64; q++ {
		shape := ClockShape(q)
		for s, v := range shape {
			if want := math.Cos(2 * math.Pi * float64(s) / float64(q)); math.Abs(v-want) > 2e-14 {
				t.Errorf("q = %d, s = %d: %.17g, want %.17g", q, s, v, want)
			}
			if v != shape[(q-s)%q] {
				t.Errorf("q = %d: levels %d and %d differ", q, s, q-s)
			}
			switch {
			case s == 0 && v != 1, 2*s == q && v != -1, 4*s == q && v != 0, 6*s == q && v != 0.5, 3*s == q && v != -0.5:
				t.Errorf("q = %d, s = %d: %v is not exact", q, s, v)
			}
		}
		for p := 2; p <= q; p++ {
			if q%p != 0 || !prime(p) {
				continue
			}
			for first := range q / p {
				sum := new(big.Rat)
				for k := range p {
					sum.Add(sum, bath.Exact(shape[first+k*q/p]))
				}
				if sum.Sign() != 0 {
					t.Errorf("q = %d: the %d values from %d in steps of %d add up to %s", q, p, first, q/p, sum.FloatString(20))
				}
			}
		}
	}
}

func prime(n int) bool {
	for d := 2; d*d <= n; d++ {
		if n%d == 0 {
			return false
		}
	}
	return n > 1
}
