package analysis

import (
	"math"
)

// tails averages single exponentials c exp(-t/tau) fitted from each first lag
// on, with weights
//
//	exp[-(chi^2 + 2 (parameters) + 2 (lags cut away))/2]
//
// (W. I. Jay, E. T. Neil, Phys. Rev. D 103, 114502 (2021), eq. 50). For a sum
// of exponentials with positive weights ln C is convex: what is seen in any
// window is at most the slowest.
type tails struct {
	f       *fitted
	factors [][][]float64 // Cholesky factors of the tails' covariances, by first lag
	rates   []float64     // of the last full fit, by first lag
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
	t.rates = make([]float64, len(t.factors))
	return t, true
}

// average returns ln tau for the data y and the variance of ln tau between
// tails. first says whether the fits search over all rates (and remember where
// they ended) or near the remembered ones.
func (t *tails) average(y []float64, first bool) (lnTau, spread float64, ok bool) {
	n := len(y)
	var sum, squares, weight, least float64
	least = math.Inf(1)
	work := make([]float64, 2*n)
	for k, l := range t.factors {
		fit := tailFit{l: l, times: t.f.times[k:], wrap: t.f.wrap, model: work[:n-k], y: work[n : 2*n-k]}
		copy(fit.y, y[k:])
		solveLower(l, fit.y)
		var rate, chi2 float64
		if first {
			rate, chi2 = fit.search(t.f.low, t.f.high)
			t.rates[k] = rate
		} else {
			rate, chi2 = fit.refine(t.rates[k]/2, t.rates[k]*2)
		}
		aic := chi2 + 2*float64(k)
		if math.IsNaN(aic) || math.IsInf(aic, 0) {
			continue
		}
		if aic < least {
			if !math.IsInf(least, 1) {
				scale := math.Exp((aic - least) / 2)
				sum *= scale
				squares *= scale
				weight *= scale
			}
			least = aic
		}
		w := math.Exp((least - aic) / 2)
		sum -= w * math.Log(rate)
		squares += w * math.Log(rate) * math.Log(rate)
		weight += w
	}
	if weight == 0 {
		return 0, 0, false
	}
	lnTau = sum / weight
	return lnTau, math.Max(0, squares/weight-lnTau*lnTau), true
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
