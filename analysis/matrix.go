package analysis

import "math"

// cholesky returns the lower factor L of a symmetric positive matrix, A = L L',
// or false if a pivot is not positive relative to its diagonal.
func cholesky(a [][]float64) ([][]float64, bool) {
	n := len(a)
	l := square(n)
	for j := range n {
		d := a[j][j]
		for k := range j {
			d -= l[j][k] * l[j][k]
		}
		if !(d > 1e-14*a[j][j]) {
			return nil, false
		}
		l[j][j] = math.Sqrt(d)
		for i := j + 1; i < n; i++ {
			s := a[i][j]
			for k := range j {
				s -= l[i][k] * l[j][k]
			}
			l[i][j] = s / l[j][j]
		}
	}
	return l, true
}

// solveLower overwrites x with L^-1 x.
func solveLower(l [][]float64, x []float64) {
	for i := range x {
		s := x[i]
		row := l[i]
		for k := range i {
			s -= row[k] * x[k]
		}
		x[i] = s / row[i]
	}
}

// solveUpper overwrites x with L'^-1 x.
func solveUpper(l [][]float64, x []float64) {
	for i := len(x) - 1; i >= 0; i-- {
		s := x[i]
		for k := i + 1; k < len(x); k++ {
			s -= l[k][i] * x[k]
		}
		x[i] = s / l[i][i]
	}
}

// dot is the scalar product.
func dot(a, b []float64) float64 {
	s := 0.0
	for i, x := range a {
		s += x * b[i]
	}
	return s
}

// minor returns rows and columns from..to-1.
func minor(a [][]float64, from, to int) [][]float64 {
	m := square(to - from)
	for i := range m {
		copy(m[i], a[from+i][from:to])
	}
	return m
}
