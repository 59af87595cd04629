package analysis

import "math"

// jackknife returns the delete-one standard error of a statistic whose values
// without each block are given (R. G. Miller, Biometrika 61, 1 (1974), eq.
// 2.6):
//
//	SE^2 = (U-1)/U sum_b (x_b - mean)^2
func jackknife(without []float64) float64 {
	n := float64(len(without))
	mean := 0.0
	for _, x := range without {
		mean += x
	}
	mean /= n
	ss := 0.0
	for _, x := range without {
		ss += (x - mean) * (x - mean)
	}
	return math.Sqrt((n - 1) / n * ss)
}

// unbiased removes the bias of order 1/U from a statistic (M. H. Quenouille,
// Biometrika 43, 353 (1956)): U x - (U-1) mean of the values without each block.
func unbiased(x float64, without []float64) float64 {
	n := float64(len(without))
	mean := 0.0
	for _, v := range without {
		mean += v / n
	}
	return n*x - (n-1)*mean
}

// resampled evaluates a statistic without each block in turn; ok is false if it
// could not be had without one of them.
func resampled(blocks int, statistic func(out int) (float64, bool)) (without []float64, ok bool) {
	without = make([]float64, blocks)
	for b := range without {
		x, ok := statistic(b)
		if !ok || math.IsNaN(x) || math.IsInf(x, 0) {
			return nil, false
		}
		without[b] = x
	}
	return without, true
}

// jackCovariance returns the delete-one covariance matrix of a vector
// statistic, from its values without each block (block, entry).
func jackCovariance(without [][]float64) [][]float64 {
	u := float64(len(without))
	n := len(without[0])
	mean := make([]float64, n)
	for _, row := range without {
		for i, x := range row {
			mean[i] += x / u
		}
	}
	cov := square(n)
	for _, row := range without {
		for i := range n {
			for j := range i + 1 {
				cov[i][j] += (u - 1) / u * (row[i] - mean[i]) * (row[j] - mean[j])
			}
		}
	}
	for i := range n {
		for j := range i {
			cov[j][i] = cov[i][j]
		}
	}
	return cov
}

// square allocates an n by n matrix.
func square(n int) [][]float64 {
	flat := make([]float64, n*n)
	m := make([][]float64, n)
	for i := range m {
		m[i] = flat[i*n : (i+1)*n]
	}
	return m
}
