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
// exponential, tau = -t/ln(C(t)/C(0)) at t near tau_int/4, and tests the
// declaration: at t = tau_int the same must come out as from the initial decay
// Var/E. The test can prove that the decay is no single exponential, not that it
// is one.
func single(in *integrated) (Estimate, Test) {
	test := Test{Kind: "single", Observable: in.pool.p.Observables[in.o].Name}
	at := func(c []float64, i int) (float64, bool) {
		r := c[i] / c[0]
		return math.Log(-in.times[i] / math.Log(r)), r > 0 && r < 1
	}
	short := max(1, lagNear(in.times, singleLag*in.tau))
	ln, ok := at(in.c, short)
	logs, ok2 := resampled(len(in.without), func(b int) (float64, bool) { return at(in.without[b], short) })
	if !ok || !ok2 {
		const reason = "the autocorrelation does not decay within noise"
		test.Reason = reason
		return missing(codeNoise, reason), test
	}
	est := logarithmic(ln, jackknife(logs), len(in.without))
	long := max(1, lagNear(in.times, in.tau))
	initial := func(out int, c []float64) (float64, bool) {
		if e, ok := in.pool.dirichlet(in.k, out); ok {
			return math.Log(c[0] / e), e > 0
		}
		return at(c, 1)
	}
	difference := func(out int, c []float64) (float64, bool) {
		a, ok := at(c, long)
		b, ok2 := initial(out, c)
		return a - b, ok && ok2
	}
	d, ok := difference(all, in.c)
	ds, ok2 := resampled(len(in.without), func(b int) (float64, bool) { return difference(b, in.without[b]) })
	if !ok || !ok2 {
		test.Reason = "the autocorrelation at tau_int is lost in noise"
		return est, test
	}
	test = test.student(d, jackknife(ds), float64(len(ds)-1))
	// Only a decay that slows down contradicts the declaration.
	test.P = distuv.StudentsT{Mu: 0, Sigma: 1, Nu: test.Dof}.Survival(test.Statistic)
	test.Adjusted = test.P
	test.Rejected = test.P < significance
	return est, test
}
