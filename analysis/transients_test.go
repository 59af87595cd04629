package analysis

import (
	"math"
	"math/rand/v2"
	"testing"
)

// relaxing makes a point with a transient: units of two starts whose mean of
// the observable decays as amplitude*exp(-t/tau) to limit, with noise of
// standard deviation sd per unit, correlated over one tau.
func relaxing(seed uint64, units int, tau, amplitude, limit, sd float64) Point {
	rng := rand.New(rand.NewPCG(seed, 0xdeca))
	p := Point{Size: []int{4}, Open: []bool{false}, Observables: []Observable{{Name: "m", Kind: "magnetization", Scalar: true}}}
	tr := Transient{}
	for _, lag := range lagGrid(4096) {
		tr.Times = append(tr.Times, float64(lag)*0.1)
	}
	for u := range units {
		start, sign := "up", 1.0
		if u%2 == 1 {
			start, sign = "down", -1
		}
		p.Starts = append(p.Starts, start)
		row := make([]Moment, len(tr.Times))
		y := 0.0 // starts are sharp
		for i, t := range tr.Times {
			if i > 0 {
				a := math.Exp(-(t - tr.Times[i-1]) / tau)
				y = a*y + sd*math.Sqrt(1-a*a)*rng.NormFloat64()
			}
			v := limit + sign*amplitude*math.Exp(-t/tau) + y
			row[i] = Moment{N: 1, S1: v, S2: v * v}
		}
		tr.Sums = append(tr.Sums, row)
		p.Observables[0].Moments = append(p.Observables[0].Moments, []Moment{{}})
	}
	p.Transients = []Transient{tr}
	return p
}

func TestApproach(t *testing.T) {
	const tau, amplitude = 3.0, 100.0
	within, last, coupled := tally{truth: tau * math.Log(20)}, tally{truth: tau}, tally{truth: tau * math.Log(400)}
	for seed := range uint64(100) {
		p := relaxing(seed, 32, tau, amplitude, 0, 1)
		limit := symmetric(0, 0.01, 16)
		out := approaches(&p, []ObservableResult{{Mean: limit}}, Options{}.withDefaults())
		if len(out) != 3 || out[2].Start != "up-down" {
			t.Fatalf("%d approaches", len(out))
		}
		for _, a := range out[:2] {
			within.add(a.Time, false)
		}
		last.add(out[2].Tau, false)
		coupled.add(out[2].Coupling, false)
	}
	for _, test := range []struct {
		name string
		tl   *tally
	}{{"time to 5 %", &within}, {"last decay", &last}, {"coupling time", &coupled}} {
		b, sd := test.tl.bias()
		t.Logf("%s: covers %.0f and %.0f %%, bias %+.2f sd, sd %.1f %%, missing %d", test.name, test.tl.cover68(), test.tl.cover95(), b, 100*sd, test.tl.missing)
		if test.tl.missing > 2 || test.tl.cover68() < 50 || test.tl.cover95() < 86 {
			t.Errorf("%s: covers %.0f and %.0f %%, missing %d %v", test.name, test.tl.cover68(), test.tl.cover95(), test.tl.missing, test.tl.reasons)
		}
	}
}

func TestApproachAbsent(t *testing.T) {
	limit := symmetric(0, 0.01, 16)
	for _, test := range []struct {
		name, code string
		p          Point
		limit      Estimate
	}{
		{"starts in equilibrium", codeNotMeaningful, relaxing(1, 32, 3, 0, 0, 1), limit},
		{"too slow", codeNotReached, relaxing(1, 32, 3000, 100, 0, 1), limit},
		{"too noisy", codeNoise, relaxing(1, 8, 3, 10, 0, 10), limit},
		{"two units", codeFewUnits, relaxing(1, 4, 3, 100, 0, 1), limit},
		{"no limit", codeFewUnits, relaxing(1, 32, 3, 100, 0, 1), missing(codeFewUnits, "one unit")},
	} {
		a := approaches(&test.p, []ObservableResult{{Mean: test.limit}}, Options{}.withDefaults())[0]
		if a.Time.OK || a.Time.Code != test.code {
			t.Errorf("%s: %v (%s), want %s", test.name, a.Time, a.Time.Code, test.code)
		}
	}
}

// Levin, Peres, Wilmer, theorems 12.4 and 12.5, with numbers put in by hand.
func TestMixing(t *testing.T) {
	p := Point{Beta: 0.5, LnStates: 10, EnergyRange: 8}
	r := Result{SlowMode: SlowMode{Tau: logarithmic(math.Log(20), 0.1, 16), Bound: Bound{Value: 16, Confidence: 0.95, OK: true}}}
	m := mixing(&p, &r)
	if want := 16 * math.Ln2; math.Abs(m.Lower.Value-want) > 1e-12 {
		t.Errorf("lower bound %g, want %g", m.Lower.Value, want)
	}
	if want := 20 * (math.Log(4) + 10 + 4); math.Abs(m.Volume.Value-want) > 1e-9 {
		t.Errorf("volume bound %g, want %g", m.Volume.Value, want)
	}
	if m := mixing(&p, &Result{SlowMode: SlowMode{Bound: noBound(codeNoData, "nothing")}}); m.Lower.OK || m.Volume.OK {
		t.Errorf("without a slow mode: %+v", m)
	}
}

// The advice for a precision that one has already is a factor of at most 1, and
// four times the data halve the error.
func TestAdvice(t *testing.T) {
	p := pureOU.point(5, 16, 100, 0.1)
	p.Size, p.Beta, p.Jumps, p.Seconds = []int{32}, 0.44, 1e6, 10
	r := Infer(p, Options{Precision: 0.01})
	a := r.Advice[0]
	tau := r.Observables[0].Integrated
	want := math.Pow(tau.Err/tau.Value/0.01, 2)
	if math.Abs(a.Factor/want-1) > 1e-9 || math.Abs(a.Total-1600*a.Factor) > 1e-6*a.Total || a.Jumps != 1e6*a.Factor || a.Text == "" {
		t.Errorf("%+v, want factor %g", a, want)
	}
	if got, want := TotalFor(0.03), 2*math.Pow(4.3/0.03, 2); math.Abs(got-want) > 1e-9 {
		t.Errorf("TotalFor = %g, want %g", got, want)
	}
}
