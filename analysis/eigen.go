package analysis

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// eigenSym returns the eigenvalues of a symmetric matrix in increasing order
// and its eigenvectors as rows, or false if an entry is not finite.
func eigenSym(a [][]float64) (values []float64, vectors [][]float64, ok bool) {
	n := len(a)
	s := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			x := (a[i][j] + a[j][i]) / 2
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return nil, nil, false
			}
			s.SetSym(i, j, x)
		}
	}
	var e mat.EigenSym
	if !e.Factorize(s, true) {
		return nil, nil, false
	}
	var v mat.Dense
	e.VectorsTo(&v)
	vectors = square(n)
	for k := range n {
		for i := range n {
			vectors[k][i] = v.At(i, k)
		}
	}
	return e.Values(nil), vectors, true
}

// largestGeneralized returns the largest eigenvalue of A v = mu B v and its
// vector, or false if B is not positive.
func largestGeneralized(a, b [][]float64) (mu float64, v []float64, ok bool) {
	values, vectors, l, ok := solveGeneralized(a, b)
	if !ok {
		return 0, nil, false
	}
	v = vectors[len(a)-1]
	solveUpper(l, v)
	return values[len(a)-1], v, true
}

// generalized returns the eigenvalues of A v = mu B v in increasing order.
func generalized(a, b [][]float64) ([]float64, bool) {
	values, _, _, ok := solveGeneralized(a, b)
	return values, ok
}

// solveGeneralized turns A v = mu B v with B = L L' into the ordinary problem
// of L^-1 A L'^-1, whose vectors are L'v.
func solveGeneralized(a, b [][]float64) (values []float64, vectors, l [][]float64, ok bool) {
	n := len(a)
	if l, ok = cholesky(b); !ok {
		return nil, nil, nil, false
	}
	if n == 1 {
		return []float64{a[0][0] / b[0][0]}, [][]float64{{1}}, l, true
	}
	w := square(n)
	for i := range n {
		copy(w[i], a[i])
		solveLower(l, w[i]) // rows of A L'^-1
	}
	column := make([]float64, n)
	for j := range n {
		for i := range n {
			column[i] = w[i][j]
		}
		solveLower(l, column)
		for i := range n {
			w[i][j] = column[i]
		}
	}
	values, vectors, ok = eigenSym(w)
	return values, vectors, l, ok
}
