package exact

import (
	"fmt"
	"math"
)

// diagonalise finds the eigenvalues of a symmetric tridiagonal matrix by the
// implicit QL method (H. Bowdler, R. S. Martin, C. Reinsch, J. H. Wilkinson,
// Numer. Math. 11, 293 (1968)): d, the diagonal, becomes the eigenvalues,
// unordered, and off, one shorter, is used up. The rotations act on the columns
// of rows, so that rows of the unit matrix become rows of the matrix of
// eigenvectors. The cost grows with the square of the length, times 1 +
// len(rows).
func diagonalise(d, off []float64, rows [][]float64) error {
	n := len(d)
	e := append(off, 0)
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
				return fmt.Errorf("an eigenvalue of a tridiagonal matrix did not converge")
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
				for _, z := range rows {
					z[i], z[i+1] = c*z[i]-s*z[i+1], s*z[i]+c*z[i+1]
				}
			}
			if r == 0 && i >= l {
				continue
			}
			d[l] -= p
			e[l], e[m] = g, 0
		}
	}
	return nil
}

// quadrature returns the eigenvalues of the symmetric tridiagonal matrix with
// the given diagonal and off-diagonal (one shorter), unordered, and the squared
// first components of its normalised eigenvectors: the nodes and weights of
// Gauss quadrature for the measure that the matrix comes from (G. H. Golub,
// J. H. Welsch, Math. Comput. 23, 221 (1969)).
func quadrature(diagonal, off []float64) (nodes, weights []float64, err error) {
	nodes = append([]float64(nil), diagonal...)
	weights = make([]float64, len(nodes))
	weights[0] = 1
	if err := diagonalise(nodes, append([]float64(nil), off...), [][]float64{weights}); err != nil {
		return nil, nil, err
	}
	for i := range weights {
		weights[i] *= weights[i]
	}
	return nodes, weights, nil
}

// band is a symmetric matrix of half-bandwidth width: entry (i, j), j <= i,
// stands at low[i*(width+2)+i-j]; one place per row is kept for the entry that
// a rotation creates beyond the band.
type band struct {
	n, width int
	low      []float64
}

func newBand(n, width int) *band {
	return &band{n, width, make([]float64, n*(width+2))}
}

func (b *band) at(i, j int) float64 {
	if i < j {
		i, j = j, i
	}
	if i-j > b.width+1 {
		return 0
	}
	return b.low[i*(b.width+2)+i-j]
}

func (b *band) set(i, j int, v float64) {
	if i < j {
		i, j = j, i
	}
	b.low[i*(b.width+2)+i-j] = v
}

// rotate applies the rotation of coordinates m-1 and m that takes (x, y) to
// (hypot(x, y), 0) from both sides, and to the columns of rows.
func (b *band) rotate(m int, x, y float64, rows [][]float64) {
	r := math.Hypot(x, y)
	if r == 0 {
		return
	}
	c, s := x/r, y/r
	a, d, o := b.at(m-1, m-1), b.at(m, m), b.at(m, m-1)
	for k := max(0, m-b.width-2); k < min(b.n, m+b.width+2); k++ {
		if k == m || k == m-1 {
			continue
		}
		p, q := b.at(m-1, k), b.at(m, k)
		if p == 0 && q == 0 {
			continue
		}
		if abs(m-1-k) <= b.width+1 {
			b.set(m-1, k, c*p+s*q)
		}
		if abs(m-k) <= b.width+1 {
			b.set(m, k, c*q-s*p)
		}
	}
	b.set(m-1, m-1, c*c*a+2*c*s*o+s*s*d)
	b.set(m, m, s*s*a-2*c*s*o+c*c*d)
	b.set(m, m-1, (c*c-s*s)*o+c*s*(d-a))
	for _, z := range rows {
		z[m-1], z[m] = c*z[m-1]+s*z[m], c*z[m]-s*z[m-1]
	}
}

func abs(a int) int { return max(a, -a) }

// diagonalise finds the eigenvalues of a band matrix, which it destroys: entry
// by entry it is made tridiagonal, each entry that appears beyond the band being
// chased off the end (H. R. Schwarz, Numer. Math. 12, 231 (1968)).
func (b *band) diagonalise(rows [][]float64) ([]float64, error) {
	for j := range max(0, b.n-2) {
		for r := min(b.width, b.n-1-j); r >= 2; r-- {
			col := j
			for m := j + r; m < b.n; m += b.width {
				y := b.at(m, col)
				if y == 0 {
					break
				}
				b.rotate(m, b.at(m-1, col), y, rows)
				b.set(m, col, 0)
				col = m - 1
			}
		}
	}
	d, e := make([]float64, b.n), make([]float64, max(0, b.n-1))
	for i := range d {
		d[i] = b.at(i, i)
		if i > 0 {
			e[i-1] = b.at(i, i-1)
		}
	}
	return d, diagonalise(d, e, rows)
}
