package kinetic_test

import (
	"math"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/kinetictest"
)

// Lanes share times and places of attempts. Whether a site has been attempted
// since decides most of its autocorrelation when it is hot, so the lanes of a
// bundle say nearly the same: as independent units they give errors that are too
// small, while bundles give right ones.
func TestBundlesAreTheUnits(t *testing.T) {
	const (
		experiments = 80
		bundles     = 8 // of an experiment
		origins     = 30
		lag         = 1.0
		student     = 2.365 // 95 % of t with 7 degrees of freedom, tables
		normal      = 1.960
	)
	spec := kinetictest.Ising(kinetictest.Lattice(3, 3), 0.1, kinetictest.HeatBath)
	g, err := kinetic.Compile(spec)
	if err != nil {
		t.Fatal(err)
	}
	const spin = 2
	want := spinAutocorrelation(t, spec, lag)
	hitLanes, hitBundles := 0, 0
	effect := 0.0
	for x := range experiments {
		var lanes, means []float64
		for b := range bundles {
			e, err := kinetic.NewLanes(g, [32]byte{5}, x*bundles+b, kinetic.StartRandom)
			if err != nil {
				t.Fatal(err)
			}
			c := laneAutocorrelations(e.(kinetic.LaneWords), spin, origins, lag)
			lanes = append(lanes, c...)
			m, _ := meanError(c)
			means = append(means, m)
		}
		m, se := meanError(lanes)
		if math.Abs(m-want) < normal*se {
			hitLanes++
		}
		mb, seBundles := meanError(means)
		if math.Abs(mb-want) < student*seBundles {
			hitBundles++
		}
		effect += seBundles * seBundles / (se * se) / experiments
	}
	t.Logf("intervals of 95 %% hold %d of %d times with lanes as units, %d times with bundles; ratio of variances %.1f",
		hitLanes, experiments, hitBundles, effect)
	// The number of intervals that hold is binomial: 76 +- 2 expected.
	if hitBundles < 68 {
		t.Errorf("intervals of 95 %% from bundles hold only %d of %d times", hitBundles, experiments)
	}
	if hitLanes > 48 {
		t.Errorf("intervals of 95 %% from lanes hold %d of %d times: this lattice does not show that lanes depend on each other", hitLanes, experiments)
	}
	if effect < 4 {
		t.Errorf("a bundle's mean varies only %.1f times as much as the mean of 64 independent lanes", effect)
	}
}

// laneAutocorrelations returns, for every lane, the mean over sites and times of
// s(t) s(t+lag).
func laneAutocorrelations(e kinetic.LaneWords, spin, origins int, lag float64) []float64 {
	const sites = 9
	e.Advance(10)
	before, now := make([]uint64, sites), make([]uint64, sites)
	c := make([]float64, e.Lanes())
	for range origins {
		e.Words(spin, before)
		e.Advance(e.Time() + lag)
		e.Words(spin, now)
		for i := range now {
			for l := range c {
				c[l] += (1 - 2*float64((before[i]^now[i])>>l&1)) / float64(sites*origins)
			}
		}
	}
	return c
}

// spinAutocorrelation is <s(0) s(t)> of one spin, from the matrix of rates.
func spinAutocorrelation(t *testing.T, spec kinetic.Spec, lag float64) float64 {
	s, err := exact.NewSystem(spec)
	if err != nil {
		t.Fatal(err)
	}
	all, err := s.Orbit(1 << 10)
	if err != nil {
		t.Fatal(err)
	}
	o, err := s.Local(2)
	if err != nil {
		t.Fatal(err)
	}
	f := make([]float64, all.Len())
	all.Values(o.Components[0], f)
	v := make([]float64, len(f))
	for i := range v {
		v[i] = all.Weight[i] * f[i]
	}
	c := 0.0
	for i, p := range all.Matrix().Propagate(v, lag) {
		c += p * f[i]
	}
	return c
}

// meanError returns the mean and its standard error for independent numbers.
func meanError(x []float64) (mean, se float64) {
	for _, v := range x {
		mean += v / float64(len(x))
	}
	for _, v := range x {
		se += (v - mean) * (v - mean)
	}
	return mean, math.Sqrt(se / float64(len(x)) / float64(len(x)-1))
}
