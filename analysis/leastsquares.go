package analysis

import "math"

// curveFit is a weighted least-squares fit of y = model(x, p).
type curveFit struct {
	p, err []float64 // parameters and standard errors
	chi2   float64
	ok     bool
}

// leastSquares fits by Levenberg and Marquardt's method (D. W. Marquardt, SIAM
// J. Appl. Math. 11, 431 (1963)) from each start, with numerical derivatives,
// and keeps the best. se are standard errors of y; those of the parameters
// follow from them, not from the scatter.
func leastSquares(model func(x float64, p []float64) float64, x, y, se []float64, starts [][]float64) curveFit {
	best := curveFit{chi2: math.Inf(1)}
	for _, s := range starts {
		if f := marquardt(model, x, y, se, s); f.ok && f.chi2 < best.chi2 {
			best = f
		}
	}
	return best
}

func marquardt(model func(x float64, p []float64) float64, x, y, se, start []float64) curveFit {
	return minimise(func(p []float64) []float64 {
		r := make([]float64, len(x))
		for i := range r {
			r[i] = (y[i] - model(x[i], p)) / se[i]
		}
		return r
	}, start)
}

// minimise finds the parameters with the least sum of squared residuals near
// the start.
func minimise(residuals func(p []float64) []float64, start []float64) curveFit {
	k := len(start)
	p := append([]float64(nil), start...)
	r := residuals(p)
	chi2 := dot(r, r)
	if math.IsNaN(chi2) || math.IsInf(chi2, 0) {
		return curveFit{}
	}
	normal := func() (a [][]float64, g []float64) {
		q := append([]float64(nil), p...)
		columns := make([][]float64, k)
		for c := range k {
			h := 1e-6 * math.Max(math.Abs(p[c]), 1e-3)
			q[c] = p[c] + h
			up := residuals(q)
			q[c] = p[c] - h
			down := residuals(q)
			q[c] = p[c]
			columns[c] = make([]float64, len(r))
			for i := range r {
				columns[c][i] = (down[i] - up[i]) / (2 * h)
			}
		}
		a, g = square(k), make([]float64, k)
		for c := range k {
			g[c] = dot(columns[c], r)
			for d := range k {
				a[c][d] = dot(columns[c], columns[d])
			}
		}
		return a, g
	}
	lambda := 1e-3
	for range 200 {
		a, g := normal()
		improved := false
		for lambda < 1e12 {
			damped := square(k)
			for c := range k {
				copy(damped[c], a[c])
				damped[c][c] += lambda * math.Max(a[c][c], 1e-12)
			}
			l, ok := cholesky(damped)
			if !ok {
				lambda *= 10
				continue
			}
			trial := append([]float64(nil), g...)
			solveLower(l, trial)
			solveUpper(l, trial)
			for c := range trial {
				trial[c] += p[c]
			}
			rt := residuals(trial)
			ct := dot(rt, rt)
			if !(ct < chi2) {
				lambda *= 10
				continue
			}
			done := chi2-ct < 1e-12*(1+chi2)
			p, r, chi2 = trial, rt, ct
			lambda = math.Max(lambda/10, 1e-12)
			improved = !done
			break
		}
		if !improved {
			break
		}
	}
	a, _ := normal()
	l, ok := cholesky(a)
	if !ok {
		return curveFit{}
	}
	f := curveFit{p: p, chi2: chi2, ok: true}
	for c := range k {
		unit := make([]float64, k)
		unit[c] = 1
		solveLower(l, unit)
		f.err = append(f.err, math.Sqrt(dot(unit, unit)))
	}
	return f
}
