package exact

import (
	"fmt"
	"math"
)

// quadrature returns the eigenvalues of the symmetric tridiagonal matrix with
// the given diagonal and off-diagonal (one shorter), unordered, and the squared
// first components of its normalised eigenvectors: the nodes and weights of
// Gauss quadrature for the measure that the matrix comes from (G. H. Golub,
// J. H. Welsch, Math. Comput. 23, 221 (1969)), by the implicit QL method. Its
// cost grows with the square of the length.
func quadrature(diagonal, off []float64) (nodes, weights []float64, err error) {
	n := len(diagonal)
	d := append([]float64(nil), diagonal...)
	e := append(append([]float64(nil), off...), 0)
	z := make([]float64, n)
	z[0] = 1
	for l := range n {
		for iteration := 0; ; iteration++ {
			m := l
			for m < n-1 && math.Abs(e[m]) > 0x1p-53*(math.Abs(d[m])+math.Abs(d[m+1])) {
				m++
			}
			if m == l {
				break
			}
			if iteration == 60 {
				return nil, nil, fmt.Errorf("an eigenvalue of a tridiagonal matrix did not converge")
			}
			g := (d[l+1] - d[l]) / (2 * e[l])
			r := math.Hypot(g, 1)
			g = d[m] - d[l] + e[l]/(g+math.Copysign(r, g))
			s, c, p := 1.0, 1.0, 0.0
			i := m - 1
			for ; i >= l; i-- {
				f, b := s*e[i], c*e[i]
				r = math.Hypot(f, g)
				e[i+1] = r
				if r == 0 {
					d[i+1] -= p
					e[m] = 0
					break
				}
				s, c = f/r, g/r
				g = d[i+1] - p
				r = (d[i]-g)*s + 2*c*b
				p = s * r
				d[i+1] = g + p
				g = c*r - b
				z[i], z[i+1] = c*z[i]-s*z[i+1], s*z[i]+c*z[i+1]
			}
			if r == 0 && i >= l {
				continue
			}
			d[l] -= p
			e[l], e[m] = g, 0
		}
	}
	for i := range z {
		z[i] *= z[i]
	}
	return d, z, nil
}
