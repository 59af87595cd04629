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
	n, k := len(x), len(start)
	p := append([]float64(nil), start...)
	residuals := func(p []float64) ([]float64, float64) {
		r, chi2 := make([]float64, n), 0.0
		for i := range r {
			r[i] = (y[i] - model(x[i], p)) / se[i]
			chi2 += r[i] * r[i]
		}
		return r, chi2
	}
	r, chi2 := residuals(p)
	if math.IsNaN(chi2) || math.IsInf(chi2, 0) {
		return curveFit{}
	}
	jacobian := func() [][]float64 {
		j := make([][]float64, n)
		for i := range j {
			j[i] = make([]float64, k)
		}
		q := append([]float64(nil), p...)
		for c := range k {
			h := 1e-6 * math.Max(math.Abs(p[c]), 1e-3)
			for i := range j {
				q[c] = p[c] + h
				up := model(x[i], q)
				q[c] = p[c] - h
				j[i][c] = (up - model(x[i], q)) / (2 * h * se[i])
			}
			q[c] = p[c]
		}
		return j
	}
	normal := func(j [][]float64) ([][]float64, []float64) {
		a, g := square(k), make([]float64, k)
		for i := range j {
			for c := range k {
				g[c] += j[i][c] * r[i]
				for d := range k {
					a[c][d] += j[i][c] * j[i][d]
				}
			}
		}
		return a, g
	}
	lambda := 1e-3
	for range 200 {
		a, g := normal(jacobian())
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
			step := append([]float64(nil), g...)
			solveLower(l, step)
			solveUpper(l, step)
			trial := make([]float64, k)
			for c := range trial {
				trial[c] = p[c] + step[c]
			}
			rt, ct := residuals(trial)
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
	a, _ := normal(jacobian())
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
