package analysis

import (
	"fmt"
	"math"
)

func (o Options) withDefaults() Options {
	if o.WeightFloor == 0 {
		o.WeightFloor = 0.2
	}
	if o.Precision == 0 {
		o.Precision = 0.03
	}
	if o.Epsilon == 0 {
		o.Epsilon = 0.05
	}
	return o
}

// Infer makes the whole inference of one point. Results that cannot be had are
// missing with a reason; it never fails. It panics only if the arrays of p
// contradict each other.
func Infer(p Point, opt Options) Result {
	opt = opt.withDefaults()
	r := Result{Beta: p.Beta, Size: p.Size, Open: p.Open, Group: p.Group}
	cache := map[int]*pool{}
	pools := func(split int) *pool {
		if cache[split] == nil {
			cache[split] = newPool(&p, split)
		}
		return cache[split]
	}
	states := make([]integrated, len(p.Observables))
	for o := range p.Observables {
		var res ObservableResult
		states[o], res = inferObservable(&p, o, opt, pools)
		r.Observables = append(r.Observables, res)
		r.Tests = append(r.Tests, stationarity(&p, o)...)
		if p.Observables[o].Kind == "energy" && p.Sites > 0 {
			r.EnergyPerSite = scaled(res.Mean, 1/float64(p.Sites))
		}
	}
	r.SlowMode = slowMode(&p, states, r.Observables, pools)
	for k := range p.Pairs {
		r.Curves = append(r.Curves, curve(&p, k, states))
	}
	for i := range p.Spatial {
		for j := range p.Spatial[i].Planes {
			plane := &p.Spatial[i].Planes[j]
			r.Decay = append(r.Decay, decay(&p, p.Spatial[i].Of, plane))
			r.Spatial = append(r.Spatial, planeCurve(&p, p.Spatial[i].Of, plane))
		}
	}
	r.Approach = approaches(&p, r.Observables, opt)
	r.Mixing = mixing(&p, &r)
	r.Advice = advise(&p, states, r.Observables, opt)
	conclude([]*Result{&r})
	return r
}

// Compare looks at all points of a study together. It corrects the tests of
// results for their number (Holm), sets Equilibrated and the warnings that
// follow from them in place, and fits trends.
func Compare(results []Result) Comparison {
	all := make([]*Result, len(results))
	for i := range results {
		all[i] = &results[i]
	}
	conclude(all)
	return Comparison{Trends: trends(results)}
}

func scaled(e Estimate, by float64) Estimate {
	e.Value *= by
	e.Err *= by
	e.Low *= by
	e.High *= by
	return e
}

// inferObservable makes all estimates of one observable.
func inferObservable(p *Point, o int, opt Options, pools func(int) *pool) (integrated, ObservableResult) {
	obs := &p.Observables[o]
	res := ObservableResult{Name: obs.Name, WeightFloor: opt.WeightFloor}
	in, tau := integrate(p, o, pools)
	res.Integrated = tau
	res.switches(p, o)
	res.means(&in)
	if !tau.OK {
		res.Initial = tauInitial(&in)
		res.slowest(&in, opt, tau.Code, tau.Reason)
		res.absences()
		return in, res
	}
	res.Window = in.times[in.win.last]
	res.Initial = tauInitial(&in)
	if !obs.Scalar && obs.Kind != "fourier" && anyOpen(p) {
		res.Warnings = append(res.Warnings, warn(codeInhomogeneous,
			"%s averages positions, which are not equivalent on open axes: C(t) includes the differences of their means", obs.Name))
	}
	if obs.Kind == "fourier" && anyOpen(p) {
		res.Warnings = append(res.Warnings, warn(codeInhomogeneous,
			"%s is taken to have mean 0, which open axes do not guarantee", obs.Name))
	}
	res.slowest(&in, opt, "", "")
	if obs.Single {
		res.Single, res.SingleTest = single(&in)
		if res.SingleTest.Rejected {
			res.Warnings = append(res.Warnings, warn(codeSingle,
				"declared a single exponential, but its decay slows down: t = %.1f, p = %.2g; do not use tau_single", res.SingleTest.Statistic, res.SingleTest.P))
		}
	}
	res.FormulaErr = in.formulaError(p)
	res.Warnings = append(res.Warnings, in.warnings(p, tau)...)
	if res.FormulaErr > 0 && tau.Units >= 16 {
		if ratio := tau.Err / res.FormulaErr; ratio > 1.5 || ratio < 1/1.5 {
			res.Warnings = append(res.Warnings, warn(codeErrorsDiffer,
				"resampling gives tau_int an error of %.2g, Wolff's formula %.2g", tau.Err, res.FormulaErr))
		}
	}
	res.Warnings = append(res.Warnings, res.chain(&in)...)
	res.absences()
	return in, res
}

// slowest fills in what can be said of the slowest time. It is all that short
// data give: a lower bound survives where tau_int was refused for the reason
// given.
func (res *ObservableResult) slowest(in *integrated, opt Options, code, reason string) {
	switch code {
	case "", codeShortSpan, codeShortTotal:
	default:
		res.Slowest, res.SlowestBound, res.SlowestInterval = missing(code, reason), noBound(code, reason), noInterval(code, reason)
		return
	}
	_, res.Slowest, res.SlowestBound = slowest(in)
	if code != "" {
		res.Slowest, res.SlowestInterval = missing(code, reason), noInterval(code, reason)
		return
	}
	if len(in.without) < 8 {
		res.SlowestInterval = noInterval(codeFewUnits, "its fits need at least 8 blocks to resample")
		return
	}
	f, ok := newFitted(in)
	if !ok {
		res.SlowestInterval = noInterval(codeNoise, "too few lags lie within the decay")
		return
	}
	// Blocks that exist only because tau came out small by chance do not count.
	se := res.Integrated.Err / res.Integrated.Value
	p := in.pool.p
	if len(p.Starts)*p.splitFor(in.tau*math.Exp(2*se), len(p.Pairs[in.k].Sums[0])) < fewestModelUs {
		res.Model = missing(codeFewUnits, "the average over models needs at least 16 blocks to resample")
	} else {
		res.Model = modelAverage(in, &f)
	}
	res.Shape = shape(&f)
	res.SlowestInterval = slowestInterval(&f, opt.WeightFloor, res.Slowest)
}

func anyOpen(p *Point) bool {
	for _, open := range p.Open {
		if open {
			return true
		}
	}
	return false
}

// means fills in mean, variance and kurtosis.
func (res *ObservableResult) means(in *integrated) {
	q := in.pool
	absent := func(code, reason string) {
		res.Mean, res.Variance, res.Kurtosis = missing(code, reason), missing(code, reason), missing(code, reason)
	}
	if q == nil || q.moments(in.o, all).N == 0 {
		absent(codeNoData, "nothing was recorded")
		return
	}
	if q.blocks < 2 {
		absent(codeFewUnits, "one unit has no error (raise count)")
		return
	}
	mean, ok := resampled(q.blocks, func(b int) (float64, bool) {
		m := q.moments(in.o, b)
		return m.S1 / float64(m.N), m.N > 0
	})
	if !ok {
		absent(codeNoData, "one block holds all samples")
		return
	}
	m := q.moments(in.o, all)
	res.Mean = symmetric(m.S1/float64(m.N), jackknife(mean), q.blocks)
	switch {
	case in.constant:
		res.Variance = symmetric(0, 0, q.blocks)
		res.Kurtosis = missing(codeConstant, "the observable did not change")
	case in.without == nil:
		res.Variance = missing(res.Integrated.Code, res.Integrated.Reason)
		res.Kurtosis = missing(res.Integrated.Code, res.Integrated.Reason)
	default:
		variance := make([]float64, q.blocks)
		for b := range variance {
			variance[b] = in.without[b][0]
		}
		res.Variance = symmetric(in.c[0], jackknife(variance), q.blocks)
		res.Kurtosis = kurtosis(in)
	}
}

// kurtosis is the fourth central moment over the squared second: 3 for a
// Gaussian, 1 for two sharp values. Only scalars have it.
func kurtosis(in *integrated) Estimate {
	q := in.pool
	if !q.p.Observables[in.o].Scalar {
		return missing(codeNotMeaningful, "it is not a scalar")
	}
	of := func(out int) (float64, bool) {
		m := q.moments(in.o, out)
		n := float64(m.N)
		c := m.S1 / n
		m2 := m.S2/n - c*c
		m4 := m.S4/n - 4*c*m.S3/n + 6*c*c*m.S2/n - 3*c*c*c*c
		return m4 / (m2 * m2), m2 > 0
	}
	k, ok := of(all)
	without, ok2 := resampled(q.blocks, of)
	if !ok || !ok2 || k < 1 {
		return missing(codeNoise, "rounding or noise exceeds it")
	}
	return symmetric(k, jackknife(without), q.blocks)
}

// tauInitial is Var/E(f,f), the time of the initial decay of C(t).
func tauInitial(in *integrated) Estimate {
	q := in.pool
	if in.constant {
		return missing(codeConstant, "the observable did not change")
	}
	if q == nil || in.without == nil {
		return missing(codeNoData, "there is no autocorrelation with errors")
	}
	e, ok := q.dirichlet(in.k, all)
	if !ok {
		return missing(codeNoData, "the Dirichlet form was not recorded")
	}
	if e <= 0 {
		return missing(codeFrozen, "no jump changes the observable in the states that were visited")
	}
	logs, ok := resampled(q.blocks, func(b int) (float64, bool) {
		e, ok := q.dirichlet(in.k, b)
		return math.Log(in.without[b][0] / e), ok && e > 0 && in.without[b][0] > 0
	})
	if !ok {
		return missing(codeNoise, "it cannot be had without one of the blocks")
	}
	return logarithmic(math.Log(in.c[0]/e), jackknife(logs), q.blocks)
}

// chain checks Var/E <= tau_int <= tau_slowest within three standard errors of
// the differences.
func (res *ObservableResult) chain(in *integrated) []Warning {
	const limit = 3
	var w []Warning
	if res.Initial.OK {
		q := in.pool
		diff, ok := resampled(q.blocks, func(b int) (float64, bool) {
			e, ok := q.dirichlet(in.k, b)
			return in.logs[b] - math.Log(in.without[b][0]/e), ok
		})
		d := math.Log(res.Integrated.Value / res.Initial.Value)
		if ok && d < -limit*jackknife(diff) && d < -1e-3 {
			w = append(w, warn(codeChain, "tau_int %.4g lies below tau_initial %.4g by %.1f standard errors: the data do not come from one stationary reversible process",
				res.Integrated.Value, res.Initial.Value, -d/jackknife(diff)))
		}
	}
	if res.SlowestInterval.OK {
		if h := res.SlowestInterval.High; res.Integrated.Value*math.Exp(-limit*res.Integrated.Err/res.Integrated.Value) > h {
			w = append(w, warn(codeWeightFloor, "tau_int %.4g exceeds the upper end %.4g of tau_slowest: a slower mode of little weight, or noise", res.Integrated.Value, h))
		}
	}
	return w
}

// absences turns the reasons of missing estimates into warnings.
func (res *ObservableResult) absences() {
	said := map[string]bool{}
	say := func(name, code, reason string) {
		if reason == "" || said[reason] {
			return
		}
		said[reason] = true
		res.Warnings = append(res.Warnings, warn(code, "no %s: %s", name, reason))
	}
	say("mean", res.Mean.Code, res.Mean.Reason)
	say("tau_int", res.Integrated.Code, res.Integrated.Reason)
	say("tau_initial", res.Initial.Code, res.Initial.Reason)
	say("tau_slowest", res.Slowest.Code, res.Slowest.Reason)
	say("interval of tau_slowest", res.SlowestInterval.Code, res.SlowestInterval.Reason)
}

// curve pools one covariance in time for plots.
func curve(p *Point, k int, states []integrated) Curve {
	pair := &p.Pairs[k]
	c := Curve{F: p.Observables[pair.F].Name, G: p.Observables[pair.G].Name}
	in := &states[pair.F]
	if in.pool == nil {
		return c
	}
	values, without := in.c, in.without
	if pair.F != pair.G {
		q := in.pool
		values = q.covariance(k, all, nil)
		without = nil
		for b := range q.blocks {
			without = append(without, q.covariance(k, b, nil))
		}
	}
	n := len(values)
	for _, row := range without {
		n = min(n, len(row))
	}
	column := make([]float64, len(without))
	rates := make([]float64, len(without))
	for i := range n {
		c.Times = append(c.Times, float64(pair.Lags[i])*p.Step)
		c.C = append(c.C, values[i])
		c.Pairs = append(c.Pairs, in.pool.pairs[k].total[i].N)
		se := 0.0
		if len(without) > 1 {
			for b := range without {
				column[b] = without[b][i]
			}
			se = jackknife(column)
		}
		c.Err = append(c.Err, se)
		if pair.F != pair.G || i+1 >= n {
			continue
		}
		rate, rateErr := 0.0, -1.0
		dt := float64(pair.Lags[i+1]-pair.Lags[i]) * p.Step
		if values[i] > 0 && values[i+1] > 0 {
			rate = math.Log(values[i]/values[i+1]) / dt
			good := len(without) > 1
			for b := range without {
				good = good && without[b][i] > 0 && without[b][i+1] > 0
				if good {
					rates[b] = math.Log(without[b][i]/without[b][i+1]) / dt
				}
			}
			if good {
				rateErr = jackknife(rates)
			}
		}
		c.Rate = append(c.Rate, rate)
		c.RateErr = append(c.RateErr, rateErr)
	}
	return c
}

func planeCurve(p *Point, of string, plane *Plane) SpatialCurve {
	s := newPlaneSums(p, plane)
	c := SpatialCurve{Of: of, Axis: plane.Axis, K: s.k, Err: s.errors()}
	for r := range s.k {
		c.Displacements = append(c.Displacements, []int{r})
	}
	return c
}

// String gives the value with its error, or the reason.
func (e Estimate) String() string {
	if !e.OK {
		return "missing: " + e.Reason
	}
	return fmt.Sprintf("%.5g +- %.2g [%.5g, %.5g]", e.Value, e.Err, e.Low, e.High)
}
