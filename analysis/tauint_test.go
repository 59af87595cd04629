package analysis

import (
	"math"
	"testing"
)

// exactCurve evaluates C(t) of a process on the recorded lags.
func exactCurve(p *process, span, step float64) (times, c []float64) {
	for _, lag := range lagGrid(int(span / step)) {
		t := float64(lag) * step
		v := 0.0
		for _, e := range p.terms {
			v += e.c * math.Exp(-e.rate*t)
		}
		times, c = append(times, t), append(c, v)
	}
	return times, c
}

// The quadrature on the recorded lags must be exact to a small part of any
// attainable error, also where the step is longer than the initial decay.
func TestQuadrature(t *testing.T) {
	for _, test := range []struct {
		proc      *process
		step      float64
		tolerance float64 // relative
	}{
		{&pureOU, 0.03, 0.002}, {&pureOU, 0.3, 0.003},
		{&hardC, 0.03, 0.002}, {&hardC, 0.1, 0.002}, {&hardC, 0.3, 0.005}, // 0.3 is 1.6 tau_initial
		{&hardD, 0.3, 0.004}, {&hardE, 0.1, 0.002}, {&hardF, 0.1, 0.003},
	} {
		times, c := exactCurve(test.proc, 100, test.step)
		got := (integral(times, c, len(c)-1) - endCorrection(times, c, test.proc.dirichlet(), len(c)-1)) / c[0]
		if want := test.proc.tauInt(); math.Abs(got/want-1) > test.tolerance {
			t.Errorf("%s, step %g: %.6g, want %.6g within %g", test.proc.name, test.step, got, want, test.tolerance)
		}
		low, high := firstInterval(times, c, test.proc.dirichlet())
		exact := 0.0
		for _, e := range test.proc.terms {
			exact += e.c * (1 - math.Exp(-e.rate*test.step)) / e.rate
		}
		if exact < low-1e-12 || exact > high+1e-12 {
			t.Errorf("%s, step %g: first interval %.6g outside [%.6g, %.6g]", test.proc.name, test.step, exact, low, high)
		}
	}
}

func TestLogMean(t *testing.T) {
	for _, test := range []struct{ a, b, want float64 }{
		{1, math.Exp(-2), (1 - math.Exp(-2)) / 2}, // integral of exp(-2t) over a unit
		{1, 1, 1},
		{1, 1 + 1e-5, 1 + 0.5e-5},
		{1, -0.5, 0.25},
	} {
		if got := logMean(test.a, test.b); math.Abs(got-test.want) > 1e-10 {
			t.Errorf("logMean(%g, %g) = %g, want %g", test.a, test.b, got, test.want)
		}
	}
}

// Wolff's window for a pure exponential: exp(-W/tau_W) = tau_W/sqrt(W N) with
// tau_W = 2 tau, solved here by bisection in continuous W.
func TestAutomaticWindow(t *testing.T) {
	times, c := exactCurve(&pureOU, 100, 0.01)
	const samples = 1e5
	w := automaticWindow(times, c, 0.01, samples)
	low, high := 0.01, 50.0
	for range 60 {
		mid := (low + high) / 2
		if math.Exp(-mid/2) < 200/math.Sqrt(mid*100*samples) {
			high = mid
		} else {
			low = mid
		}
	}
	if got := times[w.last]; !w.reached || got < low*0.99 || got > low*1.12 { // the next lag of the grid
		t.Errorf("window %g, want the lag after %g", got, low)
	}
}

// Wolff, eq. 42: sqrt(4 (W + 1/2 - tau)/N) in steps.
func TestWolffError(t *testing.T) {
	if got, want := wolffError(2, 10, 0.5, 1000), math.Sqrt(4*(20+0.5-4)/1000); math.Abs(got-want) > 1e-15 {
		t.Errorf("%g, want %g", got, want)
	}
}

// Jackknife of a mean is the textbook standard error s/sqrt(n), and the
// Quenouille correction leaves a mean alone.
func TestJackknife(t *testing.T) {
	x := []float64{3, 1, 4, 1, 5, 9, 2, 6}
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	var without []float64
	for _, v := range x {
		without = append(without, (sum-v)/7)
	}
	_, variance := meanVariance(x)
	if got, want := jackknife(without), math.Sqrt(variance/8); math.Abs(got-want) > 1e-12 {
		t.Errorf("jackknife %g, want %g", got, want)
	}
	if got := unbiased(sum/8, without); math.Abs(got-sum/8) > 1e-12 {
		t.Errorf("unbiased mean %g, want %g", got, sum/8)
	}
}

// The square of a mean is too large by s^2/n, which the correction removes
// exactly (Quenouille, section 2).
func TestUnbiased(t *testing.T) {
	x := []float64{3, 1, 4, 1, 5, 9, 2, 6}
	n := float64(len(x))
	mean, variance := meanVariance(x)
	var without []float64
	for _, v := range x {
		m := (n*mean - v) / (n - 1)
		without = append(without, m*m)
	}
	if got, want := unbiased(mean*mean, without), mean*mean-variance/n; math.Abs(got-want) > 1e-12 {
		t.Errorf("%g, want %g", got, want)
	}
}

// C(t) gains the variance of the grand mean, 2 tau C(0) (1 + 2W/T)/T with the
// first pass's tau and window (Wolff, eq. 49).
func TestMeanCorrection(t *testing.T) {
	p := pureOU.point(3, 4, 12, 0.1)
	q := newPool(&p, 1)
	raw := q.covariance(0, all, nil)
	times := q.pairs[0].times
	c, _ := q.corrected(0, all, 0, nil)
	const total = 48
	w := automaticWindow(times, raw, 0.1, total/0.1)
	want := 2 * w.tau * raw[0] * (1 + 2*times[w.last]/total) / total
	for i := range c {
		if got := c[i] - raw[i]; math.Abs(got/want-1) > 1e-9 || want < 0.01 {
			t.Fatalf("lag %d: shifted by %g, want %g", i, got, want)
		}
	}
	// A known mean needs no correction, an average over positions that of its
	// scatter between blocks.
	p.Observables[0].Kind = "fourier"
	q = newPool(&p, 1)
	zero := q.covariance(0, all, nil)
	if c, _ := q.corrected(0, all, 0, nil); c[0] != zero[0] || q.mean(0, all) != 0 {
		t.Errorf("fourier: %g, want %g", c[0], zero[0])
	}
	p.Observables[0].Kind, p.Observables[0].Scalar = "local", false
	q = newPool(&p, 1)
	var means []float64
	for _, m := range q.obs[0].by {
		means = append(means, m.S1/float64(m.N))
	}
	_, variance := meanVariance(means)
	if c, _ := q.corrected(0, all, 0, nil); math.Abs(c[0]-raw[0]-variance/4) > 1e-12 {
		t.Errorf("local: shifted by %g, want %g", c[0]-raw[0], variance/4)
	}
}

// Blocks are stretches: neighbouring segments of one unit go together, moments
// with the pairs of their time.
func TestBlocks(t *testing.T) {
	p := pureOU.point(3, 2, 40, 0.1)
	for split, segments := range map[int]int{1: 4, 2: 2, 4: 1} {
		q := newPool(&p, split)
		if q.blocks != 2*split {
			t.Fatalf("split %d: %d blocks", split, q.blocks)
		}
		for b := range q.blocks {
			var m Moment
			var pairs, dirichlet int64
			unit, first := b/split, b%split*segments
			for s := range segments {
				for _, v := range p.Observables[0].Moments[unit][4*(first+s) : 4*(first+s+1)] {
					m.add(v)
				}
				pairs += p.Pairs[0].Sums[unit][first+s][3].N
				dirichlet += p.Pairs[0].Dirichlet[unit][first+s].N
			}
			if q.obs[0].by[b] != m || q.pairs[0].by[b][3].N != pairs || q.pairs[0].dirBy[b].N != dirichlet {
				t.Errorf("split %d: block %d has the wrong segments", split, b)
			}
		}
	}
	for _, test := range []struct {
		units     int
		span, tau float64
		want      int
	}{{4, 100, 1, 4}, {4, 100, 2, 2}, {4, 100, 3, 1}, {16, 100, 1, 2}, {64, 1000, 1, 1}, {1, 1000, 1, 4}} {
		p := Point{Span: test.span, Starts: make([]string, test.units)}
		if got := p.splitFor(test.tau, 4); got != test.want {
			t.Errorf("%+v: %d blocks per unit", test, got)
		}
	}
}

// Adding a constant to the observable or scaling it changes no relaxation time;
// scaling time scales all of them.
func TestInvariances(t *testing.T) {
	base := hardE.point(11, 16, 60, 0.1)
	want := Infer(base, Options{})
	transform := func(a, b, unit float64) Result {
		p := hardE.point(11, 16, 60, 0.1)
		for _, segments := range p.Observables[0].Moments {
			for s, m := range segments {
				n := float64(m.N)
				segments[s] = Moment{
					m.N, a*m.S1 + b*n, a*a*m.S2 + 2*a*b*m.S1 + b*b*n,
					a*a*a*m.S3 + 3*a*a*b*m.S2 + 3*a*b*b*m.S1 + b*b*b*n,
					a*a*a*a*m.S4 + 4*a*a*a*b*m.S3 + 6*a*a*b*b*m.S2 + 4*a*b*b*b*m.S1 + b*b*b*b*n,
				}
			}
		}
		for _, segments := range p.Pairs[0].Sums {
			for _, lags := range segments {
				for i, v := range lags {
					n := float64(v.N)
					lags[i] = Lagged{v.N, a*v.SF + b*n, a*v.SG + b*n, a*a*v.SFG + a*b*(v.SF+v.SG) + b*b*n}
				}
			}
		}
		for _, segments := range p.Pairs[0].Dirichlet {
			for i := range segments {
				segments[i].S *= a * a / unit
			}
		}
		p.Step *= unit
		p.Span *= unit
		return Infer(p, Options{})
	}
	for _, test := range []struct{ a, b, unit float64 }{{3, 0, 1}, {1, 5, 1}, {-2, 1, 1}, {1, 0, 7}} {
		got := transform(test.a, test.b, test.unit)
		g, w := got.Observables[0], want.Observables[0]
		close := func(name string, g, w float64) {
			if math.Abs(g/w-1) > 1e-4 { // the search for rates stops at 1e-4
				t.Errorf("%+v: %s = %.8g, want %.8g", test, name, g, w)
			}
		}
		close("tau_int", g.Integrated.Value, w.Integrated.Value*test.unit)
		close("tau_int error", g.Integrated.Err, w.Integrated.Err*test.unit)
		close("tau_initial", g.Initial.Value, w.Initial.Value*test.unit)
		close("tau_slowest bound", g.SlowestBound.Value, w.SlowestBound.Value*test.unit)
		close("interval", g.SlowestInterval.High, w.SlowestInterval.High*test.unit)
		close("variance", g.Variance.Value, w.Variance.Value*test.a*test.a)
		close("kurtosis", g.Kurtosis.Value, w.Kurtosis.Value)
		close("slow mode", got.SlowMode.Tau.Value, want.SlowMode.Tau.Value*test.unit)
	}
}
