package analysis

import "math"

// shrunkCovariance estimates the covariance matrix of a vector statistic from
// its values without each block. The delete-one matrix S of few blocks is
// noisy, so in the coordinates in which the model covariance B is the unit
// matrix it is drawn towards a multiple of the unit matrix,
//
//	rho m I + (1 - rho) S,   m = tr S / n,
//
// with the intensity rho of O. Ledoit, M. Wolf, J. Multivariate Anal. 88, 365
// (2004), eqs. 9 to 14. Where the data disagree with B, rho falls.
func shrunkCovariance(without [][]float64, model [][]float64) (cov [][]float64, ok bool) {
	l, ok := cholesky(model)
	if !ok {
		return nil, false
	}
	u, n := len(without), len(model)
	// Rows x_b whose mean outer product is S.
	x := make([][]float64, u)
	mean := make([]float64, n)
	for _, row := range without {
		for i := range n {
			mean[i] += row[i] / float64(u)
		}
	}
	for b, row := range without {
		x[b] = make([]float64, n)
		for i := range n {
			x[b][i] = math.Sqrt(float64(u-1)) * (row[i] - mean[i])
		}
		solveLower(l, x[b])
	}
	s := square(n)
	for _, row := range x {
		for i := range n {
			for j := range n {
				s[i][j] += row[i] * row[j] / float64(u)
			}
		}
	}
	trace := 0.0
	for i := range n {
		trace += s[i][i]
	}
	m := trace / float64(n)
	if !(m > 0) {
		return nil, false
	}
	spread, noise := 0.0, 0.0
	for i := range n {
		for j := range n {
			d := s[i][j]
			if i == j {
				d -= m
			}
			spread += d * d
		}
	}
	for _, row := range x {
		for i := range n {
			for j := range n {
				d := row[i]*row[j] - s[i][j]
				noise += d * d
			}
		}
	}
	noise /= float64(u) * float64(u)
	rho := 1.0
	if spread > 0 {
		rho = math.Min(1, noise/spread)
	}
	for i := range n {
		for j := range n {
			s[i][j] *= 1 - rho
		}
		s[i][i] += rho * m
	}
	// Back to the original coordinates: L S L'.
	cov = square(n)
	tmp := square(n)
	for i := range n {
		for j := range n {
			for k := range i + 1 {
				tmp[i][j] += l[i][k] * s[k][j]
			}
		}
	}
	for i := range n {
		for j := range n {
			for k := range j + 1 {
				cov[i][j] += tmp[i][k] * l[j][k]
			}
		}
	}
	return cov, true
}

// exponential is one term c exp(-rate t).
type exponential struct {
	c, rate float64
}

// gaussianCovariance is the covariance of the estimates of C at the given lags
// from a Gaussian process observed for a total time T,
//
//	Cov(C(s), C(t)) = [phi(t-s) + phi(t+s)]/T,  phi(d) = integral C(u) C(u+d) du
//
// (M. S. Bartlett, J. R. Stat. Soc. Suppl. 8, 27 (1946)), for C a sum of
// exponentials.
func gaussianCovariance(times []float64, terms []exponential, total float64) [][]float64 {
	phi := func(d float64) float64 {
		s := 0.0
		for i, a := range terms {
			for j, b := range terms {
				if i == j || math.Abs(a.rate-b.rate) < 1e-6*a.rate {
					s += a.c * b.c * math.Exp(-a.rate*d) * (1/a.rate + d)
					continue
				}
				s += 2 * a.c * b.c * (a.rate*math.Exp(-b.rate*d) - b.rate*math.Exp(-a.rate*d)) / (a.rate*a.rate - b.rate*b.rate)
			}
		}
		return s
	}
	n := len(times)
	cov := square(n)
	for i := range n {
		for j := range i + 1 {
			cov[i][j] = (phi(times[i]-times[j]) + phi(times[i]+times[j])) / total
			cov[j][i] = cov[i][j]
		}
	}
	return cov
}
