package observables

import (
	"fmt"
	"math"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

// pooled collects, per unit, normalised covariances without subtracting means
// (they vanish by symmetry), and Dirichlet forms.
type pooled struct {
	lags  map[string]map[int64]*averages
	forms map[string]*averages // E(f,f)
}

func pool(t *testing.T, g *kinetic.Generator, obs []Observable, plan Plan, units, lanes int) pooled {
	p := pooled{make(map[string]map[int64]*averages), make(map[string]*averages)}
	for _, o := range obs {
		p.lags[o.Name], p.forms[o.Name] = make(map[int64]*averages), newAverages(1)
	}
	for unit := range units {
		u := record(t, newBundle(t, g, lanes, byte(50+unit)), g, obs, plan)
		sums := make(map[string]map[int64][2]float64)
		for _, r := range u.Autocorrelation {
			if r.F != r.G {
				continue
			}
			if sums[r.F] == nil {
				sums[r.F] = make(map[int64][2]float64)
			}
			s := sums[r.F][r.Lag]
			sums[r.F][r.Lag] = [2]float64{s[0] + float64(r.Pairs), s[1] + r.SumFG}
		}
		for name, byLag := range sums {
			for lag, s := range byLag {
				if p.lags[name][lag] == nil {
					p.lags[name][lag] = newAverages(1)
				}
				p.lags[name][lag].add(0, s[1]/s[0])
			}
		}
		form := make(map[string][2]float64)
		for _, r := range u.Dirichlet {
			if r.F == r.G {
				f := form[r.F]
				form[r.F] = [2]float64{f[0] + float64(r.Count), f[1] + r.Sum}
			}
		}
		for name, f := range form {
			p.forms[name].add(0, f[1]/f[0])
		}
	}
	return p
}

// check compares C(t) of an observable with variance*exp(-rate t), and E(f,f)
// with variance*rate, within 4.5 standard errors: some 300 comparisons.
func (p pooled) check(t *testing.T, name string, variance, rate, step, until float64) {
	t.Helper()
	for lag, a := range p.lags[name] {
		if time := float64(lag) * step; time <= until {
			a.check(t, fmt.Sprintf("C(%g) of %s", time, name), 0, variance*math.Exp(-rate*time), 4.5)
		}
	}
	p.forms[name].check(t, fmt.Sprintf("E of %s", name), 0, variance*rate, 4.5)
}

// At beta = 0 spins are independent and each flips at G(0) = 1/2: every product
// of one spin decays as exp(-2 G(0) t) = exp(-t), of any weight.
func TestIndependentSpins(t *testing.T) {
	g := compile(t, kinetictest.Ising(kinetictest.Lattice(6, 5), 0, kinetictest.HeatBath))
	obs, err := Bind(g, []Request{
		{Name: "magnetization", Kind: Magnetization},
		{Name: "local", Kind: Local, Family: "spin"},
		{Name: "fourier", Kind: Fourier, Family: "spin", Wavevector: lattice.Offset{1, 2}},
		{Name: "bond", Kind: Local, Family: "bond-x"},
	})
	if err != nil {
		t.Fatal(err)
	}
	const step = 0.25
	for _, lanes := range []int{1, 4} {
		p := pool(t, g, obs, Plan{Span: 500, Step: step}, 24, lanes)
		p.check(t, "magnetization", 30, 1, step, 4)
		p.check(t, "local", 1, 1, step, 4)
		p.check(t, "fourier", 30, 1, step, 4)
		p.check(t, "bond", 1, 2, step, 3) // two spins
	}
}

// The Fourier amplitudes of the spins of the heat-bath Ising ring are slow modes
// of their own:
//
//	C_k(t) = S(k) exp(-(1 - tanh(2 beta) cos k) t)
//
// (R. J. Glauber, J. Math. Phys. 4, 294 (1963)), with S(k) the
// transform of the covariance on the ring.
func TestGlauberRing(t *testing.T) {
	const (
		beta = 0.45
		n    = 20
		step = 0.2
	)
	g := compile(t, kinetictest.Ising(kinetictest.Lattice(n), beta, kinetictest.HeatBath))
	var requests []Request
	for k := range 4 {
		requests = append(requests, Request{Name: fmt.Sprint("mode ", k), Kind: Fourier, Family: "spin", Wavevector: lattice.Offset{3 * k}})
	}
	requests = append(requests, Request{Name: "magnetization", Kind: Magnetization})
	obs, err := Bind(g, requests)
	if err != nil {
		t.Fatal(err)
	}
	p := pool(t, g, obs, Plan{Settle: 40, Span: 800, Step: step}, 24, 1)
	for k := range 4 {
		q := 2 * math.Pi * 3 * float64(k) / n
		th, variance := math.Tanh(beta), 0.0
		for r := range n {
			variance += n * math.Cos(q*float64(r)) * (math.Pow(th, float64(r)) + math.Pow(th, float64(n-r))) / (1 + math.Pow(th, n))
		}
		rate := 1 - math.Tanh(2*beta)*math.Cos(q)
		p.check(t, fmt.Sprint("mode ", k), variance, rate, step, 4/rate)
		if k == 0 {
			p.check(t, "magnetization", variance, rate, step, 4/rate)
		}
	}
}

// From the state of all spins up, the magnetization of the ring decays as
// N exp(-(1 - tanh 2 beta) t) from time 0 on (Glauber).
func TestTransientOfRing(t *testing.T) {
	const (
		beta = 0.45
		n    = 64
	)
	g := compile(t, kinetictest.Ising(kinetictest.Lattice(n), beta, kinetictest.HeatBath))
	obs, err := Bind(g, []Request{{Name: "magnetization", Kind: Magnetization}, {Name: "local", Kind: Local, Family: "spin"}})
	if err != nil {
		t.Fatal(err)
	}
	plan := Plan{Settle: 7.9, Span: 3, Step: 0.25}
	times := TransientTimes(plan.Settle, plan.Span, plan.Step)
	means, locals := newAverages(len(times)), newAverages(len(times))
	for unit := range 400 {
		e, err := kinetic.NewClasses(g, [32]byte{77}, unit, kinetic.StartUp)
		if err != nil {
			t.Fatal(err)
		}
		u := record(t, e, g, obs, plan)
		if len(u.Transients) != 2*len(times) {
			t.Fatalf("%d rows, want %d", len(u.Transients), 2*len(times))
		}
		for i := range times {
			m, l := u.Transients[i], u.Transients[len(times)+i]
			if m.Time != float64(times[i])*plan.Step || m.Count != 1 || m.Sum2 != m.Sum1*m.Sum1 || l.Sum1 != m.Sum1/n {
				t.Fatalf("rows %+v and %+v at time %v", m, l, times[i])
			}
			means.add(i, m.Sum1)
			locals.add(i, l.Sum1)
		}
	}
	for i, k := range times {
		want := math.Exp(-(1 - math.Tanh(2*beta)) * float64(k) * plan.Step)
		means.check(t, fmt.Sprintf("M(%g)", float64(k)*plan.Step), i, n*want, 4)
		locals.check(t, fmt.Sprintf("spin(%g)", float64(k)*plan.Step), i, want, 4)
	}
}
