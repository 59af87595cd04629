package analysis

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// singleLag is the lag, in tau_int, at which the time of a declared single
// exponential is read off: short enough to be nearly as good as maximum
// likelihood, long enough to be past a weak fast part.
const singleLag = 0.25

// single estimates the relaxation time of an observable declared a single
// exponential, tau = -t/ln(C(t)/C(0)) at t near tau_int/4, and makes two tests
// of the declaration. By the first, the same must come out at t = tau_int as from
// the initial decay Var/E; long runs find the smallest fast part by it. By the
// second, the same must come out from the decay over the next tau_int: it finds
// what makes tau wrong. Tests can prove that the decay is no single exponential,
// not that it is one.
func single(in *integrated) (est Estimate, initial, late Test) {
	name := in.pool.p.Observables[in.o].Name
	initial = Test{Kind: "single", Observable: name}
	late = Test{Kind: "single late", Observable: name}
	short := max(1, lagNear(in.times, singleLag*in.tau))
	fromZero := func(c []float64, i int) (float64, bool) { return in.logTime(c, 0, i) }
	ln, ok := fromZero(in.c, short)
	logs, ok2 := resampled(len(in.without), func(b int) (float64, bool) { return fromZero(in.without[b], short) })
	if !ok || !ok2 {
		const reason = "the autocorrelation does not decay within noise"
		initial.Reason, late.Reason = reason, reason
		return missing(codeNoise, reason), initial, late
	}
	est = logarithmic(ln, jackknife(logs), len(in.without))
	long := max(1, lagNear(in.times, in.tau))
	initial = initial.slower(in, func(out int, c []float64) (float64, bool) {
		a, ok := fromZero(c, long)
		if e, recorded := in.pool.dirichlet(in.k, out); recorded {
			return a - math.Log(c[0]/e), ok && e > 0
		}
		b, ok2 := fromZero(c, 1)
		return a - b, ok && ok2
	})
	next := max(short+1, lagNear(in.times, (1+singleLag)*in.tau))
	late = late.slower(in, func(_ int, c []float64) (float64, bool) {
		if next >= len(c) {
			return 0, false
		}
		a, ok := in.logTime(c, short, next)
		b, ok2 := fromZero(c, short)
		return a - b, ok && ok2
	})
	return est, initial, late
}

// logTime is ln tau from the decay of C between two lags.
func (in *integrated) logTime(c []float64, i, j int) (float64, bool) {
	r := c[j] / c[i]
	return math.Log((in.times[j] - in.times[i]) / -math.Log(r)), c[i] > 0 && r > 0 && r < 1
}

// slower tests whether a difference of ln tau is positive: only a decay that
// slows down contradicts a single exponential.
func (t Test) slower(in *integrated, difference func(out int, c []float64) (float64, bool)) Test {
	d, ok := difference(all, in.c)
	ds, ok2 := resampled(len(in.without), func(b int) (float64, bool) { return difference(b, in.without[b]) })
	if !ok || !ok2 {
		t.Reason = "the autocorrelation is lost in noise too early"
		return t
	}
	t = t.student(d, jackknife(ds), float64(len(ds)-1))
	t.P = distuv.StudentsT{Mu: 0, Sigma: 1, Nu: t.Dof}.Survival(t.Statistic)
	t.Adjusted = t.P
	t.Rejected = t.P < significance
	return t
}

// declared estimates an observable declared a single exponential and says what
// the tests found.
func (res *ObservableResult) declared(in *integrated) {
	res.Single, res.SingleTest, res.SingleLate = single(in)
	switch {
	case res.SingleLate.Rejected:
		res.Warnings = append(res.Warnings, warn(codeSingle,
			"declared a single exponential, but its decay still slows down beyond tau/4: t = %.1f, p = %.2g; do not use tau_single", res.SingleLate.Statistic, res.SingleLate.P))
	case res.SingleTest.Rejected:
		res.Warnings = append(res.Warnings, warn(codeSingleLate,
			"declared a single exponential; a part decays faster at first (tau_initial, t = %.1f), and from tau/4 on no other time is seen within errors", res.SingleTest.Statistic))
	}
}
