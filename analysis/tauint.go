package analysis

import (
	"fmt"
	"math"
)

// Thresholds of the windowed sum.
const (
	windowFactor = 2.0 // S of Wolff's window
	totalDoubt   = 160 // total time, in tau
	totalRefuse  = 40
	spanDoubt    = 20 // time of one trajectory, in tau
	truncation   = 0.4
	stepDoubt    = 0.5 // step, in tau_initial
	stepRefuse   = 1.6
	fewestBlocks = 4
	noisyLog     = 1.0 // standard error of ln tau beyond which it is noise
)

// window is the result of the windowed sum on one curve.
type window struct {
	tau     float64 // integral of C/C(0) up to the window
	last    int     // index of the window's lag
	reached bool    // false: the lags ended first
}

// automaticWindow finds the first lag W with
//
//	exp(-W/tau_W) < tau_W / sqrt(W N),   tau_W = S / ln[(2x+1)/(2x-1)],
//
// x = tau_int(W)/dt, N samples in all (U. Wolff, Comput. Phys. Commun. 156, 143
// (2004), eqs. 51, 52 with tau_W for tau; W and tau_W in steps; N. Madras, A. D.
// Sokal, J. Stat. Phys. 50, 109 (1988), appendix C, for the idea of such a
// window). S = 2 makes the truncation bias small against the error for sums of
// exponentials too.
func automaticWindow(times, c []float64, step, samples float64) window {
	w := window{}
	sum := 0.0
	for i := 1; i < len(c); i++ {
		sum += strip(times, c, i-1)
		w.last = i
		x := sum / c[0] / step
		if x <= 0.5 {
			w.reached = true // faster than the step
			break
		}
		tau := windowFactor / math.Log((2*x+1)/(2*x-1))
		steps := times[i] / step
		if math.Exp(-steps/tau) < tau/math.Sqrt(steps*samples) {
			w.reached = true
			break
		}
	}
	w.tau = sum / c[0]
	return w
}

// wolffError is the relative standard error of tau_int from a sum up to lag W,
//
//	sqrt[ 4 (W/dt + 1/2 - tau_int/dt) / N ]
//
// (Wolff, eq. 42, N samples). It holds for one scalar in independent
// trajectories.
func wolffError(tau, windowTime, step, samples float64) float64 {
	return math.Sqrt(4 * math.Max(0, windowTime/step+0.5-tau/step) / samples)
}

// integrated is tau_int of one observable with everything that later steps need
// of it.
type integrated struct {
	o, k    int // observable, its pair with itself
	pool    *pool
	times   []float64
	c       []float64   // C, corrected for the variance of the mean
	without [][]float64 // the same without each block
	win     window
	// tailShare is the share of tau that lies beyond the last lag summed, in a
	// slow tail.
	tailShare float64
	tau       float64
	logs      []float64 // ln tau without each block
	constant  bool
}

// corrected returns C(t) of pair k without block out, plus the variance of the
// grand mean, which the subtraction of an estimated mean took away:
//
//	Var(mean) = 2 tau_int C(0) (1 + 2W/T)/T
//
// (Wolff, eq. 49 for the factor), and the integral of the result up to the
// window. last = 0 chooses the window.
func (q *pool) corrected(k, out, last int, dst []float64) (c []float64, w window) {
	o := q.p.Pairs[k].F
	times := q.pairs[k].times
	c = q.covariance(k, out, dst)
	if len(c) < 2 || c[0] <= 0 {
		return c, window{}
	}
	total := q.time(o, out)
	samples := total / q.p.Step
	measure := func() window {
		if last == 0 {
			return automaticWindow(times, c, q.p.Step, samples)
		}
		at := min(last, len(c)-1)
		return window{tau: integral(times, c, at) / c[0], last: at, reached: true}
	}
	var shift float64
	switch {
	case q.zeroMean(o):
	case q.p.Observables[o].Scalar:
		w = measure()
		shift = 2 * math.Max(0, w.tau) * c[0] * (1 + 2*times[w.last]/total) / total
	default:
		shift = q.meanVariance(o, out)
	}
	for i := range c {
		c[i] += shift
	}
	w = measure()
	if e, ok := q.dirichlet(k, out); ok {
		w.tau -= endCorrection(times, c, e, w.last) / c[0]
	}
	return c, w
}

// integrate computes tau_int of observable o; pools[n] is the pool with n
// blocks per unit.
func integrate(p *Point, o int, pools func(split int) *pool) (in integrated, est Estimate) {
	k := p.pairOf(o, o)
	in = integrated{o: o, k: k}
	if k < 0 || len(p.Pairs[k].Lags) < 2 || len(p.Starts) == 0 {
		return in, missing(codeNoData, "no autocorrelation was recorded")
	}
	q := pools(1)
	in.pool = q
	if m := q.moments(o, all); m.N < 2 {
		return in, missing(codeNoData, "fewer than two samples were taken")
	}
	in.times = q.pairs[k].times
	in.c, in.win = q.corrected(k, all, 0, nil)
	if len(in.c) < 2 {
		return in, missing(codeNoData, "no pairs of samples were taken")
	}
	if scale := q.moments(o, all); in.c[0] <= 1e-11*scale.S2/float64(scale.N) {
		in.constant = true
		return in, missing(codeConstant, "the observable did not change")
	}
	in.times = in.times[:len(in.c)]
	in.tau = in.win.tau
	if in.tau <= 0 {
		return in, missing(codeNoise, "the sum of the autocorrelation is not positive: noise")
	}
	segments := len(p.Pairs[k].Sums[0])
	q = pools(p.splitFor(in.tau, segments))
	in.pool = q
	if q.blocks < fewestBlocks {
		return in, missing(codeFewUnits, fmt.Sprintf("only %d units to resample, at least %d are needed (raise count)", q.blocks, fewestBlocks))
	}
	in.without = make([][]float64, q.blocks)
	sums := make([]float64, q.blocks)
	for b := range sums {
		c, w := q.corrected(k, b, in.win.last, make([]float64, 0, len(in.c)))
		in.without[b], sums[b] = c, w.tau
	}
	if last, slow := in.slowTail(); slow {
		in.c, in.win = q.corrected(k, all, last, nil)
		in.c = in.c[:len(in.times)]
		in.tailShare = beyond(in.times, in.c, last)
		in.tau = in.win.tau + in.tailShare
		in.tailShare /= in.tau
		for b := range sums {
			c, w := q.corrected(k, b, last, make([]float64, 0, len(in.c)))
			in.without[b], sums[b] = c, w.tau+beyond(in.times, c, last)
		}
	}
	logs, ok := resampled(q.blocks, func(b int) (float64, bool) { return math.Log(sums[b]), sums[b] > 0 })
	if !ok {
		return in, missing(codeNoise, "the sum of the autocorrelation is not positive without one of the blocks: noise")
	}
	in.logs = logs
	se := jackknife(logs)
	if se > noisyLog {
		return in, missing(codeNoise, fmt.Sprintf("its standard error would be %.0f %%", 100*se))
	}
	return in, in.judge(p, logarithmic(unbiased(math.Log(in.tau), logs), se, q.blocks))
}

// judge refuses an estimate of tau_int that the data are too short for.
func (in *integrated) judge(p *Point, est Estimate) Estimate {
	total := in.pool.time(in.o, all)
	switch {
	case total < totalRefuse*in.tau:
		return missing(codeShortTotal, fmt.Sprintf("the total time %.4g is only about %.2g relaxation times, at least %d are needed",
			total, total/in.tau, totalRefuse))
	case in.truncated(est):
		return missing(codeShortSpan, fmt.Sprintf("lags end at %.4g, about %.2g relaxation times, where the autocorrelation is not yet below its error (span at least %d relaxation times)",
			in.times[in.win.last], in.times[in.win.last]/in.tau, spanDoubt))
	}
	if e, ok := in.pool.dirichlet(in.k, all); ok {
		low, high := firstInterval(in.times, in.c, e)
		if half := (high - low) / (2 * in.c[0]); half > est.Err && p.Step > stepRefuse*in.c[0]/e {
			return missing(codeCoarseStep, fmt.Sprintf("the step %.3g is %.2g initial relaxation times long: what happens within it decides the value to %.2g",
				p.Step, p.Step*e/in.c[0], half))
		}
	} else if in.c[1] < math.Exp(-stepRefuse)*in.c[0] {
		return missing(codeCoarseStep, "the autocorrelation is lost within one step")
	}
	return est
}

// truncated reports whether the lags ended before the window while what they
// leave out, exp(-W/tau) of an exponential or more, may reach 0.4 of the
// standard error, for tau one standard error above the estimate. (With the
// estimate itself, the data sets that pass would be those whose tau came out
// small by chance.)
func (in *integrated) truncated(est Estimate) bool {
	se := est.Err / est.Value
	return !in.win.reached && math.Exp(-in.times[in.win.last]/(in.tau*math.Exp(se))) > truncation*se
}

// warnings says what makes a tau_int doubtful that was not refused.
func (in *integrated) warnings(p *Point, est Estimate) []Warning {
	var w []Warning
	if !est.OK {
		return nil
	}
	total := in.pool.time(in.o, all)
	if total < totalDoubt*in.tau {
		w = append(w, warn(codeShortTotal, "the total time is about %.0f tau_int, below %d: the error may be too small", total/in.tau, totalDoubt))
	}
	if p.Span < spanDoubt*in.tau {
		w = append(w, warn(codeShortSpan, "one span is about %.2g tau_int, below %d: a slower decay would not be seen", p.Span/in.tau, spanDoubt))
	}
	if e, ok := in.pool.dirichlet(in.k, all); ok && p.Step > stepDoubt*in.c[0]/e {
		w = append(w, warn(codeCoarseStep, "the step is %.2g tau_initial, above %.1f: the sum depends on how the first step is interpolated", p.Step*e/in.c[0], stepDoubt))
	}
	if in.tailShare > 0 {
		w = append(w, warn(codeExtrapolated, "%.0f %% of tau_int lie beyond lag %.4g, in a slow tail that was continued as an exponential", 100*in.tailShare, in.times[in.win.last]))
	}
	if est.Units < 8 {
		w = append(w, warn(codeFewUnits, "errors rest on %d blocks only", est.Units))
	}
	return w
}

// formulaError applies wolffError where it holds: a scalar in independent
// trajectories. It is 0 elsewhere.
func (in *integrated) formulaError(p *Point) float64 {
	if !p.Observables[in.o].Scalar || p.Lanes != 1 || in.tau <= 0 {
		return 0
	}
	samples := float64(in.pool.moments(in.o, all).N)
	return in.tau * wolffError(in.tau, in.times[in.win.last], p.Step, samples)
}
