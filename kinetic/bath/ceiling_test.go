package bath

import (
	"math"
	"testing"
)

func TestBoundsHoldAndAreClose(t *testing.T) {
	laws := []Law{
		{Kind: HeatBath, Rate: 0.7},
		{Kind: Metropolis, Rate: 2},
		{Kind: Symmetric, Rate: 1},
		{Kind: Power, Rate: 1, Exponent: 1},
		{Kind: Power, Rate: 1, Exponent: 3},
		{Kind: Power, Rate: 0.5, Exponent: 2.5, Cutoff: 0.8},
		{Kind: Power, Rate: 1, Exponent: 1, Cutoff: 3},
	}
	for _, l := range laws {
		for _, beta := range []float64{0.1, 1, 30} {
			for low := -8.0; low < 8; low += 0.37 {
				for _, width := range []float64{0, 1e-3, 0.5} {
					high := low + width
					c := l.Ceiling(low, high, beta)
					floor := l.Floor(low, high, beta)
					best := 0.0
					for i := range 101 {
						g := l.Float(low+width*float64(i)/100, beta)
						best = math.Max(best, g)
						if g < floor {
							t.Errorf("%v: at beta = %v a rate of %v between %v and %v is below the floor %v", l, beta, g, low, high, floor)
						}
					}
					if best > c {
						t.Errorf("%v: at beta = %v a rate of %v between %v and %v exceeds the ceiling %v", l, beta, best, low, high, c)
					}
					if l.Exponent <= 1 && l.Cutoff == 0 && width == 0 && floor < best*(1-1e-9) {
						t.Errorf("%v: at beta = %v the floor at %v is %v, the rate %v", l, beta, low, floor, best)
					}
					if width == 0 && c > best*(1+1e-9) {
						t.Errorf("%v: at beta = %v the ceiling at %v is %v, the rate %v", l, beta, low, c, best)
					}
				}
			}
		}
	}
}
