package analysis

import (
	"math"
	"sync"
	"testing"
)

// A short version of the coverage tables: 300 data sets per cell. The sampling
// error of a coverage is 2.7 % at 68 and 1.3 % at 95; limits are nominal minus
// and plus four of them. Wrong errors by a factor 1.4 miss them by far.
func TestCoverage(t *testing.T) {
	const repeats = 300
	for _, c := range []*cell{
		{proc: &pureOU, units: 16, span: 50, step: 0.1},
		{proc: &pureTS, units: 16, span: 50, step: 0.1},
		{proc: &hardE, units: 16, span: 50, step: 0.1},
		{proc: &hardC, units: 32, span: 25, step: 0.1},
	} {
		c.repeats, c.seed = repeats, 20261201
		c.run()
		t.Log(c)
		gate := func(name string, tl *tally, least95 float64) {
			if tl.missing > repeats/50 {
				t.Errorf("%s, %s: %d of %d missing: %v", c.proc.name, name, tl.missing, repeats, tl.reasons)
			}
			if x := tl.cover68(); x < 57 || x > 79 {
				t.Errorf("%s, %s: %.1f %% within one standard error", c.proc.name, name, x)
			}
			if x := tl.cover95(); x < least95 {
				t.Errorf("%s, %s: %.1f %% within the 95 %% interval", c.proc.name, name, x)
			}
			// A third of a standard deviation, and four standard errors of it.
			if b, _ := tl.bias(); math.Abs(b) > 1.0/3+4/math.Sqrt(repeats) {
				t.Errorf("%s, %s: biased by %.2f standard deviations", c.proc.name, name, b)
			}
		}
		gate("tau_int", &c.integrated, 89.7)
		gate("tau_int_model", &c.model, 85) // it may be less careful
		if c.proc != &pureTS {              // its variance and Dirichlet form are constants of the path
			gate("tau_initial", &c.initial, 89.7)
		}
		if n := c.warnings[codeChain]; n > repeats/50 {
			t.Errorf("%s: the chain of inequalities is called violated in %d of %d data sets", c.proc.name, n, repeats)
		}
		if c.boundAbove > repeats*5/100+10 {
			t.Errorf("%s: the lower bound exceeds the truth in %d of %d data sets", c.proc.name, c.boundAbove, c.bounds)
		}
		if c.bounds < repeats*98/100 || c.intervals < repeats*98/100 {
			t.Errorf("%s: %d bounds, %d intervals of %d", c.proc.name, c.bounds, c.intervals, repeats)
		}
		if c.intervalsCover < c.intervals*91/100 {
			t.Errorf("%s: the interval under the weight floor covers in %d of %d data sets", c.proc.name, c.intervalsCover, c.intervals)
		}
	}
}

// A pure exponential: relative errors in units of the ideal sqrt(2 tau/T), with
// 4 standard errors of a standard deviation from 300 data sets (16 %).
func TestEfficiency(t *testing.T) {
	c := cell{proc: &pureOU, units: 16, span: 50, step: 0.1, repeats: 300, seed: 3, single: tally{}, declared: true}
	c.run()
	for _, test := range []struct {
		name  string
		tl    *tally
		limit float64
	}{{"tau_initial", &c.initial, 1.05}, {"tau_single", &c.single, 1.2}, {"tau_int_model", &c.model, 2.4}, {"tau_int", &c.integrated, 4.3}} {
		b, sd := test.tl.bias()
		if got := sd / c.ideal(); got > test.limit*1.16 || test.tl.n < 295 {
			t.Errorf("%s: %.2f times the ideal error (%d of 300), want %.2f", test.name, got, test.tl.n, test.limit)
		}
		if math.Abs(b) > 1.0/3+4/math.Sqrt(300) || test.tl.cover68() < 57 || test.tl.cover95() < 89.7 {
			t.Errorf("%s: biased by %.2f standard deviations, covers %.0f and %.0f %%", test.name, b, test.tl.cover68(), test.tl.cover95())
		}
	}
}

// The slow mode of two observables that three decays enter, and of three that
// span them; the second gives the Rayleigh quotient too.
func TestSlowModeCoverage(t *testing.T) {
	const repeats = 150
	for _, test := range []struct {
		m        *mixture
		complete bool
	}{{&twoOfThree, false}, {&threeOfThree, true}} {
		results := make([]SlowMode, repeats)
		var wg sync.WaitGroup
		for w := range 2 {
			wg.Go(func() {
				for i := w; i < repeats; i += 2 {
					results[i] = Infer(test.m.point(uint64(1000+i), 16, 40, 0.1), Options{}).SlowMode
				}
			})
		}
		wg.Wait()
		tau, rayleigh := tally{truth: 1}, tally{truth: 1}
		above := 0
		for _, r := range results {
			tau.add(r.Tau, false)
			rayleigh.add(r.Rayleigh, false)
			if r.Bound.Value > 1 || r.RayleighBound.Value > 1 {
				above++
			}
		}
		t.Logf("%s: slow mode %.0f %.0f, Rayleigh %.0f %.0f, bound above the truth %d", test.m.name,
			tau.cover68(), tau.cover95(), rayleigh.cover68(), rayleigh.cover95(), above)
		if tau.n < repeats*88/100 || tau.cover68() < 53 || tau.cover95() < 87 {
			t.Errorf("%s: slow mode in %d, covers %.0f and %.0f %%", test.m.name, tau.n, tau.cover68(), tau.cover95())
		}
		if above > 17 { // 5 % and four standard errors
			t.Errorf("%s: a bound exceeds the truth in %d of %d", test.m.name, above, repeats)
		}
		if test.complete && (rayleigh.cover68() < 53 || rayleigh.cover95() < 88) {
			t.Errorf("%s: Rayleigh quotient covers %.0f and %.0f %%", test.m.name, rayleigh.cover68(), rayleigh.cover95())
		}
		if b, _ := rayleigh.bias(); !test.complete && b > -2 {
			t.Errorf("%s: Rayleigh quotient of an incomplete basis is biased by %.1f standard deviations only", test.m.name, b)
		}
	}
}

// What a mode is made of: two decays, seen apart by the two observables.
func TestShares(t *testing.T) {
	m := mixture{"shares", []float64{1, 5}, [][]float64{{math.Sqrt(.8), math.Sqrt(.2)}, {math.Sqrt(.1), -math.Sqrt(.9)}}}
	r := Infer(m.point(77, 32, 100, 0.1), Options{}).SlowMode
	for i, want := range []float64{0.8, 0.1} {
		if s := r.Shares[i]; math.Abs(s.Value-want) > 4*s.Err || s.Err > 0.05 {
			t.Errorf("share of %s: %.3f(%.3f), want %.1f", s.Name, s.Value, s.Err, want)
		}
	}
}

// Proportional observables leave one combination, a constant leaves none; and
// one combination gives no more than a bound.
func TestReduced(t *testing.T) {
	m := mixture{"proportional", []float64{1, 5}, [][]float64{{1, 1}, {2, 2}, {0, 0}}}
	r := Infer(m.point(78, 16, 60, 0.1), Options{}).SlowMode
	if r.Tau.OK || r.Tau.Code != codeLowerBound || !r.Bound.OK || r.Bound.Value > 1 || len(r.Dropped) != 2 || len(r.Shares) != 2 {
		t.Errorf("tau %v, dropped %q, shares %v", r.Tau, r.Dropped, r.Shares)
	}
}

// The form of the decay: a pure exponential, a sum, and a process whose rates
// are spread so that C(t) falls like a power, must not be mistaken for each
// other.
func TestShape(t *testing.T) {
	var many []exponential // weights of (1 + t/tau)^-2: integral of rate exp(-rate tau)
	for rate := 0.02; rate < 20; rate *= 1.5 {
		many = append(many, exponential{rate * rate * math.Exp(-rate*0.5), rate})
	}
	spread := ou("power", many...)
	for _, test := range []struct {
		proc *process
		want string
		span float64
	}{{&pureOU, "exponential", 100}, {&spread, "power", 2000}} {
		right, wrong := 0, 0
		for seed := range uint64(10) {
			s := Infer(test.proc.point(seed, 32, test.span, 0.1), Options{}).Observables[0].Shape
			switch {
			case s.Prefers == test.want:
				right++
			default:
				wrong++
			}
		}
		t.Logf("%s: %d right, %d wrong of 10", test.proc.name, right, wrong)
		if wrong > 1 || right < 9 {
			t.Errorf("%s: %d right, %d wrong of 10", test.proc.name, right, wrong)
		}
	}
}

// A Dirichlet form that does not belong to the trajectories breaks the chain.
func TestChainViolated(t *testing.T) {
	p := pureOU.point(6, 16, 100, 0.1)
	if w := Infer(p, Options{}).Observables[0].Warnings; len(w) > 0 {
		t.Errorf("in order: %v", w)
	}
	for _, segments := range p.Pairs[0].Dirichlet {
		for s := range segments {
			segments[s].S /= 3
		}
	}
	found := false
	for _, w := range Infer(p, Options{}).Observables[0].Warnings {
		found = found || w.Code == codeChain
	}
	if !found {
		t.Error("tau_initial three times tau_int passed")
	}
}

// A mixture declared a single exponential is found out, an exponential is not,
// and a small fast part is told from what makes the time wrong.
func TestSingleDeclaration(t *testing.T) {
	fast := ou("small fast part", exponential{.995, 1}, exponential{.005, 40})
	for _, test := range []struct {
		proc          *process
		initial, late bool
	}{{&pureOU, false, false}, {&hardC, true, true}, {&fast, true, false}} {
		initial, late := 0, 0
		for seed := range uint64(40) {
			p := test.proc.point(seed, 16, 100, 0.05)
			p.Observables[0].Single = true
			o := Infer(p, Options{}).Observables[0]
			if !o.Single.OK || !o.SingleTest.OK || !o.SingleLate.OK {
				t.Fatalf("%s: %v, %+v, %+v", test.proc.name, o.Single, o.SingleTest, o.SingleLate)
			}
			if o.SingleTest.Rejected {
				initial++
			}
			if o.SingleLate.Rejected {
				late++
			}
		}
		// At 5 %, more than 8 of 40 has probability 1e-4; the small part biases
		// the time by half its error.
		t.Logf("%s: rejected in %d and %d of 40", test.proc.name, initial, late)
		if test.initial && initial < 40 || !test.initial && initial > 8 || test.late && late < 36 || !test.late && late > 12 {
			t.Errorf("%s: declaration rejected in %d and %d of 40", test.proc.name, initial, late)
		}
	}
}
