package analysis

import "math"

// plateaus fits constants to points with a known covariance, from each first
// point on.
type plateaus struct {
	factors [][][]float64 // Cholesky factors by first point
	weights [][]float64   // of the points, normalised
}

// newPlateaus leaves at least two points to each constant, if there are two.
func newPlateaus(cov [][]float64) (*plateaus, bool) {
	n := len(cov)
	p := &plateaus{}
	least := max(1, min(2, n-1))
	for k := 0; k+least <= n; k++ {
		l, ok := cholesky(minor(cov, k, n))
		if !ok {
			return nil, false
		}
		w := make([]float64, n-k)
		for i := range w {
			w[i] = 1
		}
		solveLower(l, w)
		solveUpper(l, w)
		norm := 0.0
		for _, x := range w {
			norm += x
		}
		for i := range w {
			w[i] /= norm
		}
		p.factors, p.weights = append(p.factors, l), append(p.weights, w)
	}
	return p, true
}

// average weighs the constants by exp[-(chi^2 + points cut away)/2]. It returns
// their mean, their weighted standard deviation and the first point of the one
// with most weight.
func (p *plateaus) average(y []float64) (mean, spread float64, best int) {
	values, cost := make([]float64, len(p.weights)), make([]float64, len(p.weights))
	residual := make([]float64, len(y))
	least := math.Inf(1)
	for k, w := range p.weights {
		values[k] = dot(w, y[k:])
		r := residual[:len(w)]
		for i := range r {
			r[i] = y[k+i] - values[k]
		}
		solveLower(p.factors[k], r)
		cost[k] = dot(r, r) + cutPrice*float64(k)
		if cost[k] < least {
			least, best = cost[k], k
		}
	}
	var sum, square, norm float64
	for k, v := range values {
		w := math.Exp((least - cost[k]) / 2)
		sum += w * v
		square += w * v * v
		norm += w
	}
	mean = sum / norm
	return mean, math.Sqrt(math.Max(0, square/norm-mean*mean)), best
}
