package analysis

import (
	"fmt"
	"math"
	"strings"
)

// pruneBelow is the least eigenvalue of the correlation matrix that is kept.
const pruneBelow = 0.05

// basis is a set of scalar observables whose covariance matrices C(t) are known
// with and without each block, normalised to unit variances.
type basis struct {
	p       *Point
	pool    *pool
	obs     []int
	times   []float64
	c       [][][]float64   // lag, i, j
	without [][][][]float64 // block, lag, i, j
	scale   []float64       // standard deviations
}

// newBasis gathers the scalars that have relaxation times and all of whose
// pairs were recorded. It says what it left out.
func newBasis(p *Point, states []integrated, pools func(int) *pool) (b *basis, dropped []string) {
	b = &basis{p: p}
	slowest, last := 0.0, 0
	for o := range p.Observables {
		in := &states[o]
		if !p.Observables[o].Scalar {
			continue
		}
		name := p.Observables[o].Name
		switch {
		case in.constant:
			dropped = append(dropped, name+": it did not change")
			continue
		case in.logs == nil:
			dropped = append(dropped, name+": it has no relaxation time with an error")
			continue
		}
		whole := true
		for _, f := range b.obs {
			whole = whole && p.pairOf(f, o) >= 0
		}
		if !whole {
			dropped = append(dropped, name+": its covariance with the others was not recorded")
			continue
		}
		b.obs = append(b.obs, o)
		slowest = math.Max(slowest, in.tau)
		last = max(last, in.win.last)
	}
	if len(b.obs) == 0 {
		return b, dropped
	}
	k := p.pairOf(b.obs[0], b.obs[0])
	b.pool = pools(p.splitFor(slowest, len(p.Pairs[k].Sums[0])))
	b.times = b.pool.pairs[k].times
	b.c = b.matrices(all, last)
	for out := range b.pool.blocks {
		b.without = append(b.without, b.matrices(out, last))
		b.times = b.times[:min(len(b.times), len(b.without[out]))]
	}
	b.times = b.times[:min(len(b.times), len(b.c))]
	b.normalise()
	return b, dropped
}

// matrices returns C(t) without block out, each entry corrected for the
// covariance of the two grand means as in [pool.corrected].
func (b *basis) matrices(out, last int) [][][]float64 {
	q, n := b.pool, len(b.obs)
	curves := make([][]float64, n*n)
	shortest := math.MaxInt
	for i, f := range b.obs {
		for j := i; j < n; j++ {
			k := b.p.pairOf(f, b.obs[j])
			c := q.covariance(k, out, nil)
			shortest = min(shortest, len(c))
			if len(c) > 1 {
				at := min(last, len(c)-1)
				times := q.pairs[k].times
				sum := 0.0
				for l := range at {
					sum += (times[l+1] - times[l]) * (c[l] + c[l+1]) / 2
				}
				if i == j {
					sum = math.Max(sum, 0)
				}
				total := q.time(f, out)
				shift := 2 * sum * (1 + 2*times[at]/total) / total
				for l := range c {
					c[l] += shift
				}
			}
			curves[i*n+j], curves[j*n+i] = c, c
		}
	}
	m := make([][][]float64, shortest)
	for l := range m {
		m[l] = square(n)
		for i := range n {
			for j := range n {
				m[l][i][j] = curves[i*n+j][l]
			}
		}
	}
	return m
}

func (b *basis) normalise() {
	n := len(b.obs)
	b.scale = make([]float64, n)
	for i := range n {
		b.scale[i] = math.Sqrt(b.c[0][i][i])
	}
	divide := func(m [][]float64) {
		for i := range n {
			for j := range n {
				m[i][j] /= b.scale[i] * b.scale[j]
			}
		}
	}
	for _, m := range b.c {
		divide(m)
	}
	for _, w := range b.without {
		for _, m := range w {
			divide(m)
		}
	}
}

// dirichlet returns the matrix E(f,g) in the same normalisation.
func (b *basis) dirichlet(out int) ([][]float64, bool) {
	n := len(b.obs)
	e := square(n)
	for i, f := range b.obs {
		for j, g := range b.obs {
			x, ok := b.pool.dirichlet(b.p.pairOf(f, g), out)
			if !ok {
				return nil, false
			}
			e[i][j] = x / (b.scale[i] * b.scale[j])
		}
	}
	return e, true
}

func (b *basis) names() string {
	var s []string
	for _, o := range b.obs {
		s = append(s, b.p.Observables[o].Name)
	}
	return strings.Join(s, ", ")
}

// reduction holds combinations of observables (rows) whose correlation matrix
// is well conditioned.
type reduction [][]float64

// reduce drops eigenvectors of the correlation matrix C(0) with eigenvalues
// below pruneBelow: combinations that are nearly constant, whose noise would
// pose as slow modes.
func (b *basis) reduce() (r reduction, dropped string, ok bool) {
	values, vectors, ok := eigenSym(b.c[0])
	if !ok {
		return nil, "", false
	}
	var cut []string
	for k, value := range values {
		if value < pruneBelow {
			cut = append(cut, fmt.Sprintf("%.2g", value))
			continue
		}
		r = append(r, vectors[k])
	}
	if cut != nil {
		dropped = fmt.Sprintf("%d of %d combinations of %s: nearly proportional (correlation eigenvalue %s)",
			len(cut), len(values), b.names(), strings.Join(cut, ", "))
	}
	return r, dropped, len(r) > 0
}

// apply is R M R'.
func (r reduction) apply(m [][]float64) [][]float64 {
	out := square(len(r))
	column := make([]float64, len(m))
	for j, w := range r {
		for i := range m {
			column[i] = dot(m[i], w)
		}
		for i, v := range r {
			out[i][j] = dot(v, column)
		}
	}
	return out
}

// expand writes a vector over the combinations as one over the observables.
func (r reduction) expand(v []float64) []float64 {
	out := make([]float64, len(r[0]))
	for k, row := range r {
		for i, x := range row {
			out[i] += v[k] * x
		}
	}
	return out
}
