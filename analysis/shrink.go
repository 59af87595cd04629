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
	x := whitenedScatter(without, l)
	s := square(n)
	for _, row := range x {
		for i := range n {
			for j := range n {
				s[i][j] += row[i] * row[j] / float64(u)
			}
		}
	}
	m := 0.0
	for i := range n {
		m += s[i][i] / float64(n)
	}
	if !(m > 0) {
		return nil, false
	}
	rho := intensity(x, s, m)
	for i := range n {
		for j := range n {
			s[i][j] *= 1 - rho
		}
		s[i][i] += rho * m
	}
	return sandwich(l, s), true
}

// whitenedScatter returns rows x_b = sqrt(U-1) L^-1 (y_b - mean), whose mean
// outer product is the delete-one covariance matrix in whitened coordinates.
func whitenedScatter(without, l [][]float64) [][]float64 {
	u, n := len(without), len(l)
	mean := make([]float64, n)
	for _, row := range without {
		for i := range n {
			mean[i] += row[i] / float64(u)
		}
	}
	x := make([][]float64, u)
	for b, row := range without {
		x[b] = make([]float64, n)
		for i := range n {
			x[b][i] = math.Sqrt(float64(u-1)) * (row[i] - mean[i])
		}
		solveLower(l, x[b])
	}
	return x
}

// intensity is Ledoit and Wolf's b^2/d^2: how much of the distance of S, the mean
// outer product of the rows of x, from m I is noise.
func intensity(x, s [][]float64, m float64) float64 {
	n := len(s)
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
	noise /= float64(len(x)) * float64(len(x))
	if spread == 0 {
		return 1
	}
	return math.Min(1, noise/spread)
}

// sandwich is L S L' for a lower triangular L.
func sandwich(l, s [][]float64) [][]float64 {
	n := len(s)
	cov, half := square(n), square(n)
	for i := range n {
		for j := range n {
			half[i][j] = dot(l[i][:i+1], column(s, j)[:i+1])
		}
	}
	for i := range n {
		for j := range n {
			cov[i][j] = dot(half[i][:j+1], l[j][:j+1])
		}
	}
	return cov
}

// column copies a column of a matrix.
func column(a [][]float64, j int) []float64 {
	c := make([]float64, len(a))
	for i := range a {
		c[i] = a[i][j]
	}
	return c
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
