package analysis

import "math"

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
	if !obs.Scalar && obs.Kind != "fourier" && obs.Kind != "magnetization" && obs.Kind != "terms" && anyOpen(p) {
		res.Warnings = append(res.Warnings, warn(codeInhomogeneous,
			"%s averages positions, which are not equivalent on open axes: C(t) includes the differences of their means", obs.Name))
	}
	if obs.Kind == "fourier" && anyOpen(p) {
		res.Warnings = append(res.Warnings, warn(codeInhomogeneous,
			"%s is taken to have mean 0, which open axes do not guarantee", obs.Name))
	}
	res.slowest(&in, opt, "", "")
	if obs.Single {
		res.declared(&in)
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
