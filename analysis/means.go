package analysis

import "math"

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
