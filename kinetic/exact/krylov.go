package exact

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas/blas64"
)

// maxSteps bounds the Lanczos steps from one function: enough for a spread of
// relaxation rates of 1e7.
const maxSteps = 20000

// Relaxation decomposes an observable into modes by the method of C. Lanczos
// (J. Res. Natl. Bur. Stand. 45, 255 (1950)), started from each of its
// components: the nodes and weights of the Gauss quadrature for
//
//	C(t) = integral exp(-lambda t) d mu(lambda).
//
// Steps are added until tau_int and tau_slowest at floors of 20 %, 1 % and none
// stand still to a relative 1e-10. The slow modes are then eigenvalues with
// their weights; the fast ones stand for the rest of the measure, whose C(t)
// they give as exactly. Rounding brings eigenvalues up again as near copies
// that share a weight (C. C. Paige, J. Inst. Maths Applics 18, 341 (1976)); they
// are merged. A rate is right to about 1e-15 of the fastest one: the slowest of a
// cold system to a relative 1e-8 where it is 1e-7 of that.
func (st *States) Relaxation(o Observable) (Relaxation, error) {
	return st.chain().relaxation(o, st.Values)
}

func (st *States) chain() *chain { return &chain{matrix: st.matrix, weight: st.Weight} }

// measure returns the spectral measure of a vector orthogonal to sqrt(pi).
func (c *chain) measure(x []float64) ([]Mode, error) {
	n := c.len()
	norm := blas64.Nrm2(vector(x))
	v, w := append([]float64(nil), x...), make([]float64, n)
	before := make([]float64, n)
	blas64.Scal(1/norm, vector(v))
	root := c.root()
	scale := c.matrix.norm()
	var diagonal, off []float64
	var last [4]float64
	for check := 16; ; {
		c.matrix.Mul(w, v)
		if k := len(off); k > 0 {
			blas64.Axpy(-off[k-1], vector(before), vector(w))
		}
		a := blas64.Dot(vector(v), vector(w))
		diagonal = append(diagonal, a)
		blas64.Axpy(-a, vector(v), vector(w))
		// Rounding must not bring back the stationary state.
		if root != nil {
			blas64.Axpy(-blas64.Dot(vector(root), vector(w)), vector(root), vector(w))
		}
		b := blas64.Nrm2(vector(w))
		exhausted := b <= 1e-13*scale || len(diagonal) == n
		if exhausted || len(diagonal) == check {
			modes, now, err := summary(diagonal, off, norm*norm)
			if err != nil {
				return nil, err
			}
			still := true
			for i := range now {
				still = still && math.Abs(now[i]-last[i]) <= 1e-10*now[i]
			}
			if exhausted || still {
				return modes, nil
			}
			last = now
			check += check / 4
		}
		if len(diagonal) == maxSteps {
			return nil, fmt.Errorf("no convergence in %d steps: the slowest rate is below %.1g of the fastest", maxSteps, 1/(last[3]*scale))
		}
		off = append(off, b)
		blas64.Scal(1/b, vector(w))
		before, v, w = v, w, before
	}
}

// summary turns a tridiagonal matrix into modes, and gives the numbers whose
// convergence is watched.
func summary(diagonal, off []float64, variance float64) (modes []Mode, watched [4]float64, err error) {
	nodes, weights, err := quadrature(diagonal, off[:len(diagonal)-1])
	if err != nil {
		return nil, watched, err
	}
	for i, l := range nodes {
		if l <= 0 {
			// An eigenvalue lost in rounding: its weight is too.
			if weights[i] > negligible {
				return nil, watched, fmt.Errorf("a relaxation rate of %.2g is lost in rounding", l)
			}
			continue
		}
		modes = append(modes, Mode{l, weights[i] * variance})
	}
	var r Relaxation
	r.Variance = variance
	r.finish(append([]Mode(nil), modes...), 1)
	return modes, [4]float64{r.TauInt, r.TauSlowest(0.2), r.TauSlowest(0.01), r.TauSlowest(0)}, nil
}

func vector(x []float64) blas64.Vector { return blas64.Vector{N: len(x), Data: x, Inc: 1} }
