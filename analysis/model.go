package analysis

import "math"

// Settings of the model average.
const (
	modelPrice    = 4.0  // added to chi^2 per exponential
	modelLeastC   = 0.05 // least weight of an exponential, of C(0)
	modelLowRate  = 0.25 // slowest rate, in 1/tau_int
	fewestModelUs = 16   // blocks
)

// modelAverage is tau_int from sums of one to three exponentials fitted from
// different first lags on: up to the first lag C is summed, beyond it the fit is
// integrated. ln tau is averaged with weights exp[-(chi^2 + 4 K)/2], K
// exponentials, without a price for lags cut away, so that short fits far out
// prevail unless the data are clear. The error is the jackknife (to first order
// in the fits) and the spread between models.
//
// Its error is smaller than that of the windowed sum by up to a half, but a slow
// part of small weight can bias it: it never stands alone.
func modelAverage(in *integrated, f *fitted) Estimate {
	n := len(f.y)
	m := modelFits{in: in, f: f}
	for s := range n {
		if n-s >= 3 {
			m.add(1, s)
		}
		if n-s >= 5 && f.times[s] <= f.tau {
			m.add(2, s)
		}
		if s == 0 && n >= 8 {
			m.add(3, s)
		}
	}
	if len(m.logs) == 0 {
		return missing(codeNoise, "no sum of exponentials fits")
	}
	ln, se := weighted(m.logs, m.costs, m.without)
	if se > noisyLog {
		return missing(codeNoise, "its error would exceed the value")
	}
	return logarithmic(ln, se, len(f.without))
}

// modelFits gathers ln tau_int by model.
type modelFits struct {
	in          *integrated
	f           *fitted
	logs, costs []float64
	without     [][]float64 // model, block
}

// add fits k exponentials from lag s on. A fit that fails is left out.
func (m *modelFits) add(k, s int) {
	in, f := m.in, m.f
	l, ok := cholesky(minor(f.cov, s, len(f.y)))
	if !ok {
		return
	}
	fit, ok := newSumFit(l, f.times[s:], f.y[s:], k, modelLeastC*f.y[0], modelLowRate/f.tau, 3/f.step)
	if !ok {
		return
	}
	tail, sensitivity := fit.tail(f.times[s])
	if sensitivity == nil {
		return
	}
	logTau := func(c []float64, tail float64) float64 {
		return math.Log((integral(in.times, c, f.at[s]) + tail) / c[0])
	}
	value := logTau(in.c, tail)
	row := make([]float64, len(f.without))
	change := make([]float64, len(f.y)-s)
	for b, y := range f.without {
		for i := range change {
			change[i] = y[s+i] - f.y[s+i]
		}
		solveLower(l, change)
		if row[b] = logTau(in.without[b], tail+dot(sensitivity, change)); math.IsNaN(row[b]) {
			return
		}
	}
	if math.IsNaN(value) {
		return
	}
	m.logs = append(m.logs, value)
	m.costs = append(m.costs, fit.chi2+modelPrice*float64(k))
	m.without = append(m.without, row)
}

// weighted averages values with weights exp(-cost/2); its error combines the
// jackknife of the average at fixed weights with the spread between values.
func weighted(values, costs []float64, without [][]float64) (mean, se float64) {
	least := math.Inf(1)
	for _, c := range costs {
		least = math.Min(least, c)
	}
	norm := 0.0
	weights := make([]float64, len(values))
	for i, c := range costs {
		weights[i] = math.Exp((least - c) / 2)
		norm += weights[i]
	}
	average := make([]float64, len(without[0]))
	for i := range values {
		weights[i] /= norm
		mean += weights[i] * values[i]
		for b := range average {
			average[b] += weights[i] * without[i][b]
		}
	}
	spread := 0.0
	for i, v := range values {
		spread += weights[i] * (v - mean) * (v - mean)
	}
	return mean, math.Hypot(jackknife(average), math.Sqrt(spread))
}
