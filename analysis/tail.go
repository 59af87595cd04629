package analysis

import (
	"math"
)

// tails averages single exponentials c exp(-t/tau) fitted from each first lag
// on, with weights
//
//	exp[-(chi^2 + 2 (lags cut away))/2] / sqrt(standard error)
//
// (W. I. Jay, E. T. Neil, Phys. Rev. D 103, 114502 (2021), eq. 50, for the
// exponential). Without the last factor late tails of few noisy lags take part
// and double the error; with the full standard error in its place remnants of
// faster parts bias the average. For a sum of exponentials with positive weights
// ln C is convex: what is seen in any window is at most the slowest.
type tails struct {
	f       *fitted
	factors [][][]float64 // Cholesky factors of the tails' covariances, by first lag
	work    []float64
	reduced float64 // chi^2 per degree of freedom of the tail with most weight
}

// tailLeast is the fewest lags of a tail.
const tailLeast = 3

func newTails(f *fitted) (*tails, bool) {
	t := &tails{f: f}
	n := len(f.y)
	for k := 0; k+tailLeast <= n; k++ {
		l, ok := cholesky(minor(f.cov, k, n))
		if !ok {
			return nil, false
		}
		t.factors = append(t.factors, l)
	}
	t.work = make([]float64, 2*n)
	return t, true
}

// estimate returns ln tau with its standard error, and ln tau without each
// block at the same weights. The error combines the jackknife with the spread
// between tails.
func (t *tails) estimate() (lnTau, se float64, logs []float64, ok bool) {
	n := len(t.factors)
	value, cost, errs := make([]float64, n), make([]float64, n), make([]float64, n)
	without := make([][]float64, n)
	least := math.Inf(1)
	for k := range n {
		rate, chi2 := t.tail(k, t.f.y).search(t.f.low, t.f.high)
		value[k], cost[k] = -math.Log(rate), chi2+2*float64(k)
		for _, y := range t.f.without {
			r, _ := t.tail(k, y).refine(rate/2, rate*2)
			without[k] = append(without[k], -math.Log(r))
		}
		errs[k] = jackknife(without[k])
		if math.IsNaN(cost[k]) || !(errs[k] > 0) {
			cost[k] = math.Inf(1)
		}
		least = math.Min(least, cost[k])
	}
	if math.IsInf(least, 0) {
		return 0, 0, nil, false
	}
	weight, norm := make([]float64, n), 0.0
	for k := range weight {
		if !math.IsInf(cost[k], 1) {
			weight[k] = math.Exp((least-cost[k])/2) / math.Sqrt(errs[k])
			norm += weight[k]
		}
	}
	logs = make([]float64, len(t.f.without))
	for k := range weight {
		weight[k] /= norm
		if weight[k] == 0 {
			continue
		}
		lnTau += weight[k] * value[k]
		for b := range logs {
			logs[b] += weight[k] * without[k][b]
		}
	}
	spread, most := 0.0, 0.0
	for k, w := range weight {
		if w > most {
			most = w
			t.reduced = (cost[k] - 2*float64(k)) / float64(len(t.f.y)-k-2)
		}
		spread += w * (value[k] - lnTau) * (value[k] - lnTau)
	}
	return lnTau, math.Hypot(jackknife(logs), math.Sqrt(spread)), logs, true
}

// tail prepares the fit from lag k on.
func (t *tails) tail(k int, y []float64) *tailFit {
	n := len(y)
	fit := &tailFit{l: t.factors[k], times: t.f.times[k:], wrap: t.f.wrap, model: t.work[:n-k], y: t.work[n : 2*n-k]}
	copy(fit.y, y[k:])
	solveLower(fit.l, fit.y)
	return fit
}

// tailFit is a fit of one exponential in whitened coordinates, with its image
// exp(-rate (wrap - t)) on a ring of length wrap (0: none).
type tailFit struct {
	l        [][]float64
	times    []float64
	wrap     float64
	model, y []float64
}

// chi2 is minimised over the amplitude, which must be positive.
func (t *tailFit) chi2(rate float64) float64 {
	for i, s := range t.times {
		t.model[i] = math.Exp(-rate * (s - t.times[0]))
		if t.wrap > 0 {
			t.model[i] += math.Exp(-rate * (t.wrap - s - t.times[0]))
		}
	}
	solveLower(t.l, t.model)
	my := dot(t.model, t.y)
	yy := dot(t.y, t.y)
	if my <= 0 {
		return yy
	}
	return yy - my*my/dot(t.model, t.model)
}

// search looks for the rate on a grid between low and high, then refines.
func (t *tailFit) search(low, high float64) (rate, chi2 float64) {
	const grid = 60
	ratio := math.Pow(high/low, 1.0/grid)
	best, least := low, math.Inf(1)
	for i, r := 0, low; i <= grid; i, r = i+1, r*ratio {
		if x := t.chi2(r); x < least {
			best, least = r, x
		}
	}
	return t.refine(best/ratio, best*ratio)
}

// refine minimises over ln rate by golden section (precision 1e-4, far below
// any standard error).
func (t *tailFit) refine(low, high float64) (rate, chi2 float64) {
	x, chi2 := golden(math.Log(low), math.Log(high), 1e-4, func(x float64) float64 { return t.chi2(math.Exp(x)) })
	return math.Exp(x), chi2
}

// golden minimises f between a and b to the given width.
func golden(a, b, width float64, f func(float64) float64) (x, least float64) {
	const g = 0.6180339887498949
	c, d := b-g*(b-a), a+g*(b-a)
	fc, fd := f(c), f(d)
	for b-a > width {
		if fc < fd {
			b, d, fd = d, c, fc
			c = b - g*(b-a)
			fc = f(c)
		} else {
			a, c, fc = c, d, fd
			d = a + g*(b-a)
			fd = f(d)
		}
	}
	if fc < fd {
		return c, fc
	}
	return d, fd
}
