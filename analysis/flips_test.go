package analysis

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// flipping returns a point whose units counted flips at rate 1/(2 tau).
func flipping(tau, span float64, units int, src rand.Source) Point {
	p := Point{Span: span, Observables: []Observable{{Name: "magnetization"}}}
	poisson := distuv.Poisson{Lambda: span / (2 * tau), Src: src}
	for range units {
		obs := &p.Observables[0]
		obs.Moments = append(obs.Moments, []Moment{{N: 100, S2: 100 * 64, S4: 100 * 64 * 64}})
		obs.Flips = append(obs.Flips, []Flips{
			{Level: 8, Time: span},
			{Level: 4, N: int64(poisson.Rand()), Time: span},
			{Level: 2, N: 999, Time: span},
		})
	}
	return p
}

// The interval covers, and the bound holds, as often as stated: 95 % within four
// standard errors of 1000 trials, or more (discrete counts cover more).
func TestSwitchingCovers(t *testing.T) {
	src := rand.NewPCG(1, 2)
	for _, expected := range []float64{3, 10, 100} {
		const trials = 1000
		inside, bounded, seen := 0, 0, 0
		for range trials {
			const tau = 50.0
			p := flipping(tau, 2*tau*expected/8, 8, src)
			s := switching(&p, 0)
			if !s.OK || s.Level != 4 {
				t.Fatalf("%+v", s)
			}
			if s.Bound.Value <= tau {
				bounded++
			}
			if s.Tau.OK {
				seen++
				if s.Tau.Low <= tau && tau <= s.Tau.High {
					inside++
				}
			}
		}
		least := 0.95 - 4*math.Sqrt(0.05*0.95/trials)
		if float64(inside) < least*float64(seen) || float64(bounded) < least*trials {
			t.Errorf("%v flips expected: interval held %d of %d, bound %d of %d", expected, inside, seen, bounded, trials)
		}
	}
}

// Without a flip the bound is T/6 (-ln 0.05 = 3.0), and there is no value.
func TestSwitchingWithoutFlips(t *testing.T) {
	p := flipping(1e12, 100, 6, rand.NewPCG(1, 1))
	s := switching(&p, 0)
	if !s.OK || s.Tau.OK || math.Abs(s.Bound.Value-600/5.9915) > 0.01 {
		t.Errorf("%+v", s)
	}
}

// A Gaussian observable has no wells.
func TestSwitchingNeedsWells(t *testing.T) {
	p := flipping(1, 100, 6, rand.NewPCG(1, 1))
	for u := range p.Observables[0].Moments {
		p.Observables[0].Moments[u][0].S4 *= 3
	}
	if s := switching(&p, 0); s.OK {
		t.Errorf("%+v", s)
	}
}
