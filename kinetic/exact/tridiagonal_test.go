package exact

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// Band matrices against a dense solver: eigenvalues, and two rows of the
// eigenvectors through sum_k z_k^2 lambda_k^m = (A^m)_ii.
func TestBand(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 4))
	for _, c := range []struct{ n, width int }{{1, 1}, {2, 1}, {5, 1}, {5, 2}, {6, 5}, {12, 3}, {40, 4}, {41, 7}} {
		b := newBand(c.n, c.width)
		a := mat.NewSymDense(c.n, nil)
		for i := range c.n {
			for j := max(0, i-c.width); j <= i; j++ {
				v := r.NormFloat64()
				if r.IntN(5) == 0 {
					v = 0
				}
				b.set(i, j, v)
				a.SetSym(i, j, v)
			}
		}
		first, last := make([]float64, c.n), make([]float64, c.n)
		first[0], last[c.n-1] = 1, 1
		got, err := b.diagonalise([][]float64{first, last})
		if err != nil {
			t.Fatal(err)
		}
		var e mat.EigenSym
		e.Factorize(a, false)
		var square mat.Dense
		square.Mul(a, a)
		for _, row := range []struct {
			z []float64
			i int
		}{{first, 0}, {last, c.n - 1}} {
			var sum [3]float64
			for k, l := range got {
				w := row.z[k] * row.z[k]
				sum[0] += w
				sum[1] += w * l
				sum[2] += w * l * l
			}
			for m, want := range []float64{1, a.At(row.i, row.i), square.At(row.i, row.i)} {
				if math.Abs(sum[m]-want) > 1e-12*(1+math.Abs(want)) {
					t.Errorf("%+v: moment %d of row %d is %v, want %v", c, m, row.i, sum[m], want)
				}
			}
		}
		slices.Sort(got)
		for i, want := range e.Values(nil) {
			if math.Abs(got[i]-want) > 1e-12 {
				t.Errorf("%+v: eigenvalue %d is %v, want %v", c, i, got[i], want)
			}
		}
	}
}
