package analysis

import (
	"math"
	"math/rand/v2"
	"sync"
	"testing"
)

// ringPlanes draws snapshots of Ising spins on a ring of n sites, from the
// transfer matrix: spins are drawn in order, conditioned on the first. The
// covariance is (t^r + t^(n-r))/(1 + t^n), t = tanh beta.
func ringPlanes(rng *rand.Rand, beta float64, n, units, snapshots int) []Plane {
	t := math.Tanh(beta)
	plane := Plane{Axis: 0}
	spins := make([]float64, n)
	for range units {
		sums := make([]Lagged, n/2+1)
		for range snapshots {
			// P(s_i | s_(i-1), s_0) ~ (1 + t s_(i-1) s_i)(1 + t^(n-i) s_i s_0).
			spins[0] = 1
			if rng.Uint64()&1 == 0 {
				spins[0] = -1
			}
			for i := 1; i < n; i++ {
				far := math.Pow(t, float64(n-i)) * spins[0]
				up := (1 + t*spins[i-1]) * (1 + far)
				down := (1 - t*spins[i-1]) * (1 - far)
				spins[i] = -1
				if rng.Float64()*(up+down) < up {
					spins[i] = 1
				}
			}
			for r := range sums {
				v := &sums[r]
				for i := range spins {
					j := i + r
					if j >= n {
						j -= n
					}
					v.N++
					v.SF += spins[i]
					v.SG += spins[j]
					v.SFG += spins[i] * spins[j]
				}
			}
		}
		plane.Sums = append(plane.Sums, sums)
	}
	return []Plane{plane}
}

func ringPoint(planes []Plane, n int) Point {
	return Point{Size: []int{n}, Open: []bool{false}, Spatial: []Spatial{{Of: "spin", Planes: planes}}}
}

// The ring: xi = -1/ln tanh beta, and the second moment is exactly 1/(2 sinh(1/(2
// xi))) for any length (geometric sums of the covariance).
func TestRingDecay(t *testing.T) {
	const n, repeats = 64, 100
	const beta = 1.2 // xi = 5.47: 12 xi fit on the ring
	xi := -1 / math.Log(math.Tanh(beta))
	second := 1 / (2 * math.Sinh(1/(2*xi)))
	results := make([]Decay, repeats)
	var wg sync.WaitGroup
	for w := range 2 {
		wg.Go(func() {
			for i := w; i < repeats; i += 2 {
				rng := rand.New(rand.NewPCG(uint64(i), 0xc0))
				p := ringPoint(ringPlanes(rng, beta, n, 16, 150), n)
				results[i] = decay(&p, "spin", &p.Spatial[0].Planes[0])
			}
		})
	}
	wg.Wait()
	first, moment := tally{truth: xi}, tally{truth: second}
	for _, d := range results {
		first.add(d.Xi, false)
		moment.add(d.SecondMoment, false)
	}
	for _, test := range []struct {
		name string
		tl   *tally
	}{{"xi", &first}, {"second moment", &moment}} {
		b, sd := test.tl.bias()
		t.Logf("%s: covers %.0f and %.0f %%, bias %+.2f sd, sd %.1f %%, %d missing", test.name, test.tl.cover68(), test.tl.cover95(), b, 100*sd, test.tl.missing)
		// 100 data sets: 4 standard errors are 19 and 9.
		if test.tl.missing > 2 || test.tl.cover68() < 50 || test.tl.cover95() < 86 || math.Abs(b) > 1.0/3+0.4 {
			t.Errorf("%s is not within its errors", test.name)
		}
	}
}

// exactPlanes makes units whose sums are those of the given covariance, with a
// relative scatter between units.
func exactPlanes(rng *rand.Rand, k func(r int) float64, distances, units int, mean, scatter float64) []Plane {
	plane := Plane{}
	for range units {
		var sums []Lagged
		scale := 1 + scatter*rng.NormFloat64()
		for r := range distances {
			x := 1 + scatter*rng.NormFloat64()/3
			sums = append(sums, Lagged{1e6, 1e6 * mean, 1e6 * mean, 1e6 * (mean*mean + k(r)*scale*x)})
		}
		plane.Sums = append(plane.Sums, sums)
	}
	return []Plane{plane}
}

func TestDecayShapes(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 9))
	const n = 48
	cosh := func(xi float64) func(int) float64 {
		return func(r int) float64 { return math.Cosh((float64(r) - n/2) / xi) }
	}
	bare := func(xi float64) func(int) float64 {
		return func(r int) float64 { return math.Exp(-float64(r) / xi) }
	}
	for _, test := range []struct {
		name      string
		k         func(int) float64
		distances int
		open      bool
		mean      float64
		xi        float64
		code      string // of the missing xi
	}{
		{"periodic", cosh(6), n/2 + 1, false, 0, 6, ""},
		{"periodic, with a mean", cosh(6), n/2 + 1, false, 3, 6, ""},
		{"periodic, long", cosh(14), n/2 + 1, false, 0, 14, ""},
		{"open", bare(6), n, true, 0, 6, ""},
		{"short", bare(0.7), n/2 + 1, false, 0, 0.7, ""},
		{"flat", func(int) float64 { return 1 }, n/2 + 1, false, 0, 0, codeNoDecay},
		{"long", cosh(40), n/2 + 1, false, 0, 0, codeNoDecay},
		{"none", func(r int) float64 { return map[bool]float64{true: 1}[r == 0] }, n/2 + 1, false, 0, 0, codeNoise},
		{"constant", func(int) float64 { return 0 }, n/2 + 1, false, 2, 0, codeConstant},
	} {
		p := Point{Size: []int{n}, Open: []bool{test.open}, Spatial: []Spatial{{Planes: exactPlanes(rng, test.k, test.distances, 16, test.mean, 0.01)}}}
		d := decay(&p, "spin", &p.Spatial[0].Planes[0])
		if test.code != "" {
			if d.Xi.OK || d.Xi.Code != test.code || d.NoDecay != (test.code == codeNoDecay) || len(d.Warnings) == 0 {
				t.Errorf("%s: xi %v (%s)", test.name, d.Xi, d.Xi.Code)
			}
			continue
		}
		if !d.Xi.OK || math.Abs(d.Xi.Value-test.xi) > 4*d.Xi.Err || d.Xi.Err > 0.05*test.xi {
			t.Errorf("%s: xi %v, want %g", test.name, d.Xi, test.xi)
		}
		if test.open == d.SecondMoment.OK {
			t.Errorf("%s: second moment %v", test.name, d.SecondMoment)
		}
	}
	// The envelope K(r) <= c K(0) exp(-r/xi): c = 1/2 for half the weight in a
	// short-ranged part.
	half := func(r int) float64 { return bare(6)(r)/2 + bare(0.5)(r)/2 }
	p := Point{Size: []int{n}, Open: []bool{true}, Spatial: []Spatial{{Planes: exactPlanes(rng, half, n, 16, 0, 0.01)}}}
	d := decay(&p, "spin", &p.Spatial[0].Planes[0])
	if !d.Xi.OK || math.Abs(d.Xi.Value-6) > 4*d.Xi.Err || math.Abs(d.Amplitude.Value-0.5) > 4*d.Amplitude.Err {
		t.Errorf("two parts: xi %v, want 6, amplitude %v, want 0.5", d.Xi, d.Amplitude)
	}
}

// The identity behind the second moment, without noise: on a ring of any length
// with K(r) = a^r + a^(N-r), xi_2 = 1/(2 sinh(1/(2 xi))).
func TestSecondMomentIdentity(t *testing.T) {
	for _, n := range []int{7, 8, 64} {
		const xi = 2.5
		s := planeSums{length: n}
		for r := range n/2 + 1 {
			s.k = append(s.k, math.Exp(-float64(r)/xi)+math.Exp(-float64(n-r)/xi))
		}
		for range 4 {
			s.without = append(s.without, s.k)
		}
		if got, want := s.secondMoment().Value, 1/(2*math.Sinh(1/(2*xi))); math.Abs(got/want-1) > 1e-12 {
			t.Errorf("N = %d: %.15g, want %.15g", n, got, want)
		}
	}
}

// K(r) gains the variance of the grand mean between units.
func TestPlaneMeanCorrection(t *testing.T) {
	var plane Plane
	means := []float64{1, 2, 4, 5}
	for _, m := range means {
		plane.Sums = append(plane.Sums, []Lagged{{10, 10 * m, 10 * m, 200}, {10, 10 * m, 10 * m, 150}})
	}
	p := Point{Size: []int{8}, Open: []bool{false}}
	s := newPlaneSums(&p, &plane)
	mean, variance := meanVariance(means)
	for r, raw := range []float64{20, 15} {
		if want := raw - mean*mean + variance/4; math.Abs(s.k[r]-want) > 1e-12 {
			t.Errorf("K(%d) = %g, want %g", r, s.k[r], want)
		}
	}
}

// The picture of single terms: covariance and error at each displacement.
func TestPointCurve(t *testing.T) {
	spatial := Spatial{Of: "spin"}
	for d, k := range []float64{1, 0.5, 0.2} {
		point := Displacement{D: []int{d, 0}}
		for u := range 4 {
			point.Sums = append(point.Sums, Lagged{100, 300, 300, 100 * (9 + k*(1+0.1*float64(u)))})
		}
		spatial.Points = append(spatial.Points, point)
	}
	c := pointCurve(&spatial)
	for i, k := range []float64{1, 0.5, 0.2} {
		// Values k (1, 1.1, 1.2, 1.3): mean 1.15 k, standard error 0.0645 k.
		if math.Abs(c.K[i]-1.15*k) > 1e-9 || math.Abs(c.Err[i]/k-0.1*math.Sqrt(5.0/3/4)) > 1e-9 || c.Displacements[i][0] != i {
			t.Errorf("displacement %v: %g(%g)", c.Displacements[i], c.K[i], c.Err[i])
		}
	}
}
