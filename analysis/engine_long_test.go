//go:build long

package analysis

import (
	"context"
	"crypto/sha256"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"sync"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/models"
	"sojourn/observables"
)

// experiment is an Ising model under heat-bath rates, run by a real engine.
type experiment struct {
	size   []int
	beta   float64
	engine string
	units  int
	start  func(unit int) kinetic.Start
	plan   observables.Plan
	asked  []observables.Request
	single bool
}

// run records every unit and returns the point.
func (x *experiment) run(t *testing.T) Point {
	t.Helper()
	l, err := lattice.New(x.size, nil)
	if err != nil {
		t.Fatal(err)
	}
	model, ok := models.Find("ising")
	if !ok {
		t.Fatal("no Ising model")
	}
	h, err := model.Build(l, models.Values{})
	if err != nil {
		t.Fatal(err)
	}
	g, err := kinetic.Compile(kinetic.Spec{
		Lattice: l, Levels: h.Levels, Sites: h.Sites, Families: h.Families, Tracked: h.Tracked, Beta: x.beta,
		Bath: []kinetic.BathOperator{{Name: "X", X: 1, Law: bath.Law{Kind: bath.HeatBath, Rate: 1}}},
	})
	if err != nil {
		t.Fatal(err)
	}
	obs, err := observables.Bind(g, x.asked)
	if err != nil {
		t.Fatal(err)
	}
	var pairs [][2]int
	for i := range obs {
		pairs = append(pairs, [2]int{i, i})
	}
	units := make([]observables.Unit, x.units)
	seed := sha256.Sum256([]byte(fmt.Sprint(x.size, x.beta)))
	next := make(chan int)
	var wg sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		wg.Go(func() {
			for u := range next {
				e, err := kinetic.NewEngine(x.engine, g, seed, u, x.start(u))
				if err == nil {
					units[u], err = observables.Record(context.Background(), e, g, obs, pairs, x.plan, observables.Label{Unit: u, Start: string(x.start(u))}, nil)
				}
				if err != nil {
					t.Error(err)
				}
			}
		})
	}
	for u := range units {
		next <- u
	}
	close(next)
	wg.Wait()
	if t.Failed() {
		t.FailNow()
	}
	return x.point(obs, units)
}

// point arranges the rows of the units.
func (x *experiment) point(obs []observables.Observable, units []observables.Unit) Point {
	p := Point{
		Beta: x.beta, Step: x.plan.Step, Span: x.plan.Span, Lanes: kinetic.EngineLanes(x.engine), Rate: 1,
		Size: x.size, Open: make([]bool, len(x.size)), Sites: 1,
	}
	lags := observables.Lags(x.plan.Samples())
	at := map[int64]int{}
	for i, lag := range lags {
		at[lag] = i
	}
	for i, o := range obs {
		p.Observables = append(p.Observables, Observable{Name: o.Name, Kind: string(o.Kind), Scalar: o.Scalar(), Single: x.single})
		p.Pairs = append(p.Pairs, Pair{F: i, G: i, Lags: lags})
	}
	for _, u := range units {
		p.Starts = append(p.Starts, u.Trajectories[0].Start)
		for i, o := range obs {
			moments := make([]Moment, observables.MomentSegments)
			for _, r := range u.Moments {
				if r.Observable == o.Name {
					moments[r.Segment] = Moment{r.Count, r.Sum1, r.Sum2, r.Sum3, r.Sum4}
				}
			}
			sums, dirichlet := make([][]Lagged, observables.PairSegments), make([]Sum, observables.PairSegments)
			for s := range sums {
				sums[s] = make([]Lagged, len(lags))
			}
			for _, r := range u.Autocorrelation {
				if r.F == o.Name && r.G == o.Name {
					sums[r.Segment][at[r.Lag]] = Lagged{r.Pairs, r.SumF, r.SumG, r.SumFG}
				}
			}
			for _, r := range u.Dirichlet {
				if r.F == o.Name && r.G == o.Name {
					dirichlet[r.Segment] = Sum{r.Count, r.Sum}
				}
			}
			flips := []Flips{}
			for _, r := range u.Flips {
				if r.Observable == o.Name {
					flips = append(flips, Flips{r.Level, r.Flips, r.Time})
				}
			}
			p.Observables[i].Moments = append(p.Observables[i].Moments, moments)
			if len(flips) > 0 {
				p.Observables[i].Flips = append(p.Observables[i].Flips, flips)
			}
			p.Pairs[i].Sums = append(p.Pairs[i].Sums, sums)
			p.Pairs[i].Dirichlet = append(p.Pairs[i].Dirichlet, dirichlet)
		}
	}
	return p
}

func always(s kinetic.Start) func(int) kinetic.Start { return func(int) kinetic.Start { return s } }

var magnetization = []observables.Request{{Name: "m", Kind: observables.Magnetization}}

// Glauber's ring, J. Math. Phys. 4, 294 (1963): the Fourier amplitude of the
// spins at wavevector k decays as one exponential of rate 1 - tanh(2 beta) cos k.
func TestLongGlauberRing(t *testing.T) {
	const n, beta = 24, 0.5
	x := experiment{
		size: []int{n}, beta: beta, engine: "classes", units: 64, start: always(kinetic.StartRandom), single: true,
		plan: observables.Plan{Settle: 60, Span: 2000, Step: 0.2}, asked: magnetization,
	}
	for k := 1; k <= n/2; k++ {
		x.asked = append(x.asked, observables.Request{Name: fmt.Sprint(k), Kind: observables.Fourier, Family: "spin", Wavevector: lattice.Offset{k}})
	}
	r := Infer(x.run(t), Options{})
	for k, o := range r.Observables {
		want := 1 / (1 - math.Tanh(2*beta)*math.Cos(2*math.Pi*float64(k)/n))
		for name, e := range map[string]Estimate{"tau_int": o.Integrated, "tau_initial": o.Initial, "tau_single": o.Single} {
			if !e.OK || math.Abs(e.Value-want) > 4*e.Err || name == "tau_initial" && e.Err > 0.02*want {
				t.Errorf("k = %d, %s: %v, want %.4f", k, name, e, want)
			}
		}
		if o.SlowestBound.Value > want {
			t.Errorf("k = %d: bound %.4f above %.4f", k, o.SlowestBound.Value, want)
		}
		t.Logf("k = %2d: exact %.4f, tau_int %s, tau_initial %s, tau_single %s", k, want, withError(o.Integrated.Value, o.Integrated.Err),
			withError(o.Initial.Value, o.Initial.Err), withError(o.Single.Value, o.Single.Err))
	}
}

// The 2D critical point: tau ~ L^z with z = 2.1665(12) (M. P. Nightingale, H. W.
// J. Bloete, Phys. Rev. Lett. 76, 4548 (1996), from memory), from the
// magnetisation declared a single exponential; its weight in the slowest mode is
// about 0.99.
func criticalTrend(t *testing.T, engine string, units map[int]int) Trend {
	var results []Result
	for _, l := range []int{8, 12, 16, 24, 32} {
		tau := 4.5 * math.Pow(float64(l), 2.1665)
		x := experiment{
			size: []int{l, l}, beta: math.Log(1+math.Sqrt2) / 2, engine: engine, units: units[l], single: true,
			start: always(kinetic.StartRandom), plan: observables.Plan{Settle: 8 * tau, Span: 40 * tau, Step: tau / 20}, asked: magnetization,
		}
		r := Infer(x.run(t), Options{})
		o := r.Observables[0]
		t.Logf("L = %d: tau_single %s, tau_int %s, bound %.4g, equilibrated %v, %v", l, withError(o.Single.Value, o.Single.Err),
			withError(o.Integrated.Value, o.Integrated.Err), o.SlowestBound.Value, r.Equilibrated, o.Warnings)
		results = append(results, r)
	}
	for _, trend := range Compare(results).Trends {
		if trend.Quantity == "tau_single" && trend.Against == "length" {
			for _, m := range trend.Models {
				t.Logf("%s: weight %.3f, chi^2 %.1f for %d, %v", m.Name, m.Weight, m.Chi2, m.Dof, m.Parameters)
			}
			return trend
		}
	}
	t.Fatal("no trend of tau_single")
	return Trend{}
}

func exponentOf(t *testing.T, trend Trend, model string) Parameter {
	for _, m := range trend.Models {
		if m.Name == model {
			return m.Parameters[1]
		}
	}
	t.Fatalf("no %s", model)
	return Parameter{}
}

func TestLongExponentClasses(t *testing.T) {
	z := exponentOf(t, criticalTrend(t, "classes", map[int]int{8: 64, 12: 64, 16: 64, 24: 32, 32: 24}), "power")
	if math.Abs(z.Value-2.1665) > 4*z.Err || z.Err > 0.03 {
		t.Errorf("z = %s", withError(z.Value, z.Err))
	}
}

func TestLongExponentLanes(t *testing.T) {
	trend := criticalTrend(t, "lanes", map[int]int{8: 128, 12: 128, 16: 96, 24: 48, 32: 32})
	z := exponentOf(t, trend, "power with correction")
	pure := exponentOf(t, trend, "power")
	if math.Abs(z.Value-2.1665) > 4*z.Err || z.Err > 0.012 {
		t.Errorf("z = %s", withError(z.Value, z.Err))
	}
	t.Logf("with L^-2 %s, pure power %s: off by %+.3f", withError(z.Value, z.Err), withError(pure.Value, pure.Err), pure.Value-2.1665)
}

// In the ordered phase the two wells are parted by two interfaces across the
// torus: tau grows like L^b exp(2 s L), s = 2 beta + ln tanh beta the surface
// tension (L. Onsager, Phys. Rev. 65, 117 (1944)). The power is not known and
// fitted along.
func TestLongSurfaceTension(t *testing.T) {
	const beta = 0.6
	want := 2 * (2*beta + math.Log(math.Tanh(beta)))
	var x, y, se []float64
	for _, l := range []int{4, 6, 8, 10} {
		units := map[int]int{4: 16, 6: 32, 8: 64, 10: 96}[l]
		x1 := experiment{
			size: []int{l, l}, beta: beta, engine: "lanes", units: units, plan: observables.Plan{Settle: 200, Span: math.Min(60*math.Exp(want*float64(l)), 4e5), Step: 10}, asked: magnetization,
			start: func(u int) kinetic.Start { return []kinetic.Start{kinetic.StartUp, kinetic.StartDown}[u%2] },
		}
		s := Infer(x1.run(t), Options{}).Observables[0].Switching
		t.Logf("L = %d: %d flips, tau %s", l, s.Flips, withError(s.Tau.Value, s.Tau.Err))
		if !s.Tau.OK {
			t.Fatalf("L = %d: no flips", l)
		}
		x, y, se = append(x, float64(l)), append(y, math.Log(s.Tau.Value)), append(se, s.Tau.Err/s.Tau.Value)
	}
	f := leastSquares(func(l float64, p []float64) float64 { return p[0] + p[1]*l + p[2]*math.Log(l) }, x, y, se, [][]float64{{0, 1, 0}})
	t.Logf("ln tau = a + g L + b ln L: g = %s, b = %s, chi^2 %.1f for 1; surface tension says g = %.4f",
		withError(f.p[1], f.err[1]), withError(f.p[2], f.err[2]), f.chi2, want)
	if math.Abs(f.p[1]-want) > 4*f.err[1] || f.err[1] > 0.15 {
		t.Errorf("growth %s, want %.4f", withError(f.p[1], f.err[1]), want)
	}
}

// isingPlanes draws snapshots of the 2D Ising model by single clusters (U.
// Wolff, Phys. Rev. Lett. 62, 361 (1989)) and sums products of plane sums.
func isingPlanes(rng *rand.Rand, l int, beta float64, snapshots, clusters int) []Lagged {
	s := make([]int8, l*l)
	for i := range s {
		s[i] = 1
	}
	add := uint64(float64(1<<63) * (1 - math.Exp(-2*beta)))
	stack := make([]int, 0, l*l)
	flip := func() {
		seed := rng.IntN(l * l)
		old := s[seed]
		s[seed] = -old
		stack = append(stack[:0], seed)
		for len(stack) > 0 {
			i := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			x, y := i%l, i/l
			for _, j := range [4]int{(x+1)%l + y*l, (x+l-1)%l + y*l, x + (y+1)%l*l, x + (y+l-1)%l*l} {
				if s[j] == old && rng.Uint64()>>1 < add {
					s[j] = -old
					stack = append(stack, j)
				}
			}
		}
	}
	for range 50 * clusters {
		flip()
	}
	sums := make([]Lagged, l/2+1)
	planes := make([]float64, l)
	for range snapshots {
		for range clusters {
			flip()
		}
		for axis := range 2 {
			clear(planes)
			for i, v := range s {
				if axis == 0 {
					planes[i%l] += float64(v)
				} else {
					planes[i/l] += float64(v)
				}
			}
			for r := range sums {
				v := &sums[r]
				for i := range planes {
					j := (i + r) % l
					v.N++
					v.SF += planes[i]
					v.SG += planes[j]
					v.SFG += planes[i] * planes[j]
				}
			}
		}
	}
	return sums
}

// The correlation length along an axis, 1/(ln coth beta - 2 beta) (L. Onsager,
// Phys. Rev. 65, 117 (1944)), within 1 %, and coverage of its error at 0.35.
func TestLongPlaneSums(t *testing.T) {
	xi := func(beta float64) float64 { return 1 / (math.Log(1/math.Tanh(beta)) - 2*beta) }
	decayOf := func(l int, beta float64, units, snapshots, clusters int, seed uint64) Decay {
		plane := Plane{Sums: make([][]Lagged, units)}
		var wg sync.WaitGroup
		for w := range 2 {
			wg.Go(func() {
				for u := w; u < units; u += 2 {
					plane.Sums[u] = isingPlanes(rand.New(rand.NewPCG(seed, uint64(u))), l, beta, snapshots, clusters)
				}
			})
		}
		wg.Wait()
		p := ringPoint([]Plane{plane}, l)
		return decay(&p, "spin", &p.Spatial[0].Planes[0])
	}
	for _, c := range []struct {
		l    int
		beta float64
	}{{48, 0.40}, {96, 0.42}} {
		d := decayOf(c.l, c.beta, 32, 6000, 40, 1)
		want := xi(c.beta)
		t.Logf("beta = %.2f, L = %d: xi %s, exact %.4f, second moment %s, amplitude %s", c.beta, c.l, withError(d.Xi.Value, d.Xi.Err), want,
			withError(d.SecondMoment.Value, d.SecondMoment.Err), withError(d.Amplitude.Value, d.Amplitude.Err))
		if !d.Xi.OK || math.Abs(d.Xi.Value/want-1) > 0.01+4*d.Xi.Err/want || d.Xi.Err > 0.01*want {
			t.Errorf("beta = %.2f: xi %v, want %.4f", c.beta, d.Xi, want)
		}
	}
	var out strings.Builder
	for _, c := range []struct {
		l         int
		beta      float64
		snapshots int
	}{{24, 0.35, 60}, {24, 0.35, 500}, {48, 0.40, 100}} {
		const repeats = 200
		tl := tally{truth: xi(c.beta)}
		for i := range repeats {
			tl.add(decayOf(c.l, c.beta, 16, c.snapshots, 30, uint64(1000+i)).Xi, false)
		}
		b, sd := tl.bias()
		fmt.Fprintf(&out, "beta = %.2f, L = %d, 16 units of %d snapshots: covers %.1f and %.1f %%, bias %+.2f sd, sd %.1f %%, missing %d\n",
			c.beta, c.l, c.snapshots, tl.cover68(), tl.cover95(), b, 100*sd, tl.missing)
	}
	t.Logf("coverage of xi\n%s", out.String())
}
