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
	p := append([]float64(nil), start...)
	r := residuals(p)
	chi2 := dot(r, r)
	if math.IsNaN(chi2) || math.IsInf(chi2, 0) {
		return curveFit{}
	}
	lambda := 1e-3
	for range 200 {
		a, g := normalEquations(residuals, p, r)
		improved := false
		for lambda < 1e12 {
			trial, ok := dampedStep(a, g, lambda)
			if !ok {
				lambda *= 10
				continue
			}
			for c := range trial {
				trial[c] += p[c]
			}
			rt := residuals(trial)
			ct := dot(rt, rt)
			if !(ct < chi2) {
				lambda *= 10
				continue
			}
			improved = chi2-ct >= 1e-12*(1+chi2)
			p, r, chi2 = trial, rt, ct
			lambda = math.Max(lambda/10, 1e-12)
			break
		}
		if !improved {
			break
		}
	}
	a, _ := normalEquations(residuals, p, r)
	l, ok := cholesky(a)
	if !ok {
		return curveFit{}
	}
	f := curveFit{p: p, chi2: chi2, ok: true}
	for c := range p {
		unit := make([]float64, len(p))
		unit[c] = 1
		solveLower(l, unit)
		f.err = append(f.err, math.Sqrt(dot(unit, unit)))
	}
	return f
}

// normalEquations returns J'J and J'r, with J minus the derivatives of the
// residuals by central differences.
func normalEquations(residuals func(p []float64) []float64, p, r []float64) (a [][]float64, g []float64) {
	k := len(p)
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

// dampedStep solves (A + lambda diag A) x = g.
func dampedStep(a [][]float64, g []float64, lambda float64) ([]float64, bool) {
	damped := square(len(g))
	for c := range g {
		copy(damped[c], a[c])
		damped[c][c] += lambda * math.Max(a[c][c], 1e-12)
	}
	l, ok := cholesky(damped)
	if !ok {
		return nil, false
	}
	x := append([]float64(nil), g...)
	solveLower(l, x)
	solveUpper(l, x)
	return x, true
}
