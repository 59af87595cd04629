package exact

import (
	"cmp"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// Lowest returns the count lowest distinct eigenvalues of -L above 0, with
// their multiplicities, or all of them if there are fewer.
//
// The method is block Lanczos from random vectors (G. H. Golub, R. Underwood,
// in Mathematical Software III, Academic Press (1977)). The block has a
// component in every eigenspace; an eigenvalue is found as often as its
// multiplicity, at most as often as the block is wide, and the multiplicity is
// the rank of the components. If that is the full width, which is 6, a block of
// 18 is tried; beyond, the multiplicity is a lower bound. All eigenvalues up to
// the one after the last returned must have converged, so that none is missed
// but for random vectors that are orthogonal to an eigenspace to many digits.
func (st *States) Lowest(count int) ([]Level, error) { return st.chain().lowest(count) }

func (c *chain) lowest(count int) ([]Level, error) {
	if c.dimension() == 0 {
		return nil, nil
	}
	const narrow, wide = 6, 18
	levels, full, err := c.attempt(count, min(narrow, c.dimension()))
	if err == nil && full {
		levels, _, err = c.attempt(count, min(wide, c.dimension()))
	}
	return levels, err
}

// dimension is that of the functions orthogonal to the constants.
func (c *chain) dimension() int {
	if c.odd {
		return c.len()
	}
	return c.len() - 1
}

// attempt runs one width; full tells that a multiplicity may exceed it.
func (c *chain) attempt(count, width int) (levels []Level, full bool, err error) {
	k := newBlockLanczos(c, width)
	for check := 12; ; check += max(4, check/5) {
		exhausted := false
		for k.steps < check && !exhausted {
			exhausted = !k.step()
		}
		found, err := k.converged(count+1, exhausted)
		if err != nil {
			return nil, false, err
		}
		if found != nil {
			found = found[:min(count, len(found))]
			for i := range found {
				l := &found[i]
				l.AtLeast = l.Multiplicity >= width && width < c.dimension()
				full = full || l.AtLeast
			}
			return found, full, nil
		}
		if k.steps*width >= maxSteps {
			return nil, false, fmt.Errorf("no convergence of the %d lowest eigenvalues in %d steps", count, k.steps)
		}
	}
}

// vanishing is the norm, against that of H, below which a direction out of the
// Krylov space counts as rounding. Leaving out a true one of this size moves
// eigenvalues by its square over their distance.
const vanishing = 1e-9

// blockLanczos builds an orthonormal block basis of the Krylov space in which H
// is a band matrix. Vectors of a block are interleaved: component i of vector c
// stands at i*width+c.
type blockLanczos struct {
	c     *chain
	root  []float64
	width int // of the first block
	scale float64

	now, before, next []float64
	columns           int // in the present block
	steps             int
	diagonal          []*mat.Dense // by step: columns x columns
	below             []*mat.Dense // by step: next columns x columns
	past              [][]float64  // all blocks, if they are kept
}

// keepPast is the number of states up to which all blocks are kept and new ones
// made orthogonal to them: there the Krylov space may fill the whole space, and
// what rounding brings back would crowd it.
const keepPast = 1 << 13

func newBlockLanczos(c *chain, width int) *blockLanczos {
	n := c.len()
	k := &blockLanczos{
		c: c, root: c.root(), width: width, columns: width, scale: c.matrix.norm(),
		now: make([]float64, n*width), before: make([]float64, n*width), next: make([]float64, n*width),
	}
	r := rand.New(rand.NewPCG(0x6c6f77657374, uint64(n)))
	for i := range k.now {
		k.now[i] = r.NormFloat64()
	}
	k.removeRoot(k.now)
	k.orthonormalise(k.now)
	k.keep()
	return k
}

// removeRoot makes every vector of a block orthogonal to the stationary state.
func (k *blockLanczos) removeRoot(v []float64) {
	sum := make([]float64, k.width)
	for i, r := range k.root {
		for c, x := range v[i*k.width : (i+1)*k.width] {
			sum[c] += r * x
		}
	}
	for i, r := range k.root {
		row := v[i*k.width : (i+1)*k.width]
		for c := range row {
			row[c] -= r * sum[c]
		}
	}
}

// orthonormalise replaces the columns of a block by an orthonormal basis of
// their span, twice by the method of Gram and Schmidt, and returns its
// coefficients: old = new r. Columns below vanishing are left out, the others
// move up.
func (k *blockLanczos) orthonormalise(v []float64) *mat.Dense {
	n, w := k.c.len(), k.width
	r := mat.NewDense(k.columns, k.columns, nil)
	kept := 0
	for c := range k.columns {
		for range 2 {
			for b := range kept {
				dot := 0.0
				for i := range n {
					dot += v[i*w+b] * v[i*w+c]
				}
				r.Set(b, c, r.At(b, c)+dot)
				for i := range n {
					v[i*w+c] -= dot * v[i*w+b]
				}
			}
		}
		norm := 0.0
		for i := range n {
			norm += v[i*w+c] * v[i*w+c]
		}
		norm = math.Sqrt(norm)
		if k.steps > 0 && norm <= vanishing*k.scale {
			continue
		}
		r.Set(kept, c, norm)
		for i := range n {
			v[i*w+kept] = v[i*w+c] / norm
		}
		kept++
	}
	for i := range n {
		clear(v[i*w+kept : (i+1)*w])
	}
	if kept == 0 {
		return nil
	}
	return mat.DenseCopyOf(r.Slice(0, kept, 0, k.columns))
}

// step adds a block; it returns false if the Krylov space is exhausted.
func (k *blockLanczos) step() bool {
	k.c.matrix.mulBlock(k.next, k.now, k.width)
	if k.steps > 0 {
		k.subtract(k.before, k.below[k.steps-1], true)
	}
	a := mat.DenseCopyOf(k.overlap(k.now, k.next).Slice(0, k.columns, 0, k.columns))
	for c := range k.columns { // symmetric but for rounding
		for d := range c {
			mean := (a.At(c, d) + a.At(d, c)) / 2
			a.Set(c, d, mean)
			a.Set(d, c, mean)
		}
	}
	k.diagonal = append(k.diagonal, a)
	k.subtract(k.now, a, false)
	k.removeRoot(k.next)
	for range 2 {
		for _, v := range k.past {
			k.subtract(v, k.overlap(v, k.next), false)
		}
	}
	k.steps++
	b := k.orthonormalise(k.next)
	if b == nil {
		return false
	}
	k.removeRoot(k.next) // a short column carries more of it than rounding
	k.below = append(k.below, b)
	k.columns, _ = b.Dims()
	k.before, k.now, k.next = k.now, k.next, k.before
	k.keep()
	return true
}

func (k *blockLanczos) keep() {
	if k.c.len() <= keepPast {
		k.past = append(k.past, slices.Clone(k.now))
	}
}

// overlap returns the products v^T u of all columns.
func (k *blockLanczos) overlap(v, u []float64) *mat.Dense {
	w := k.width
	sum := make([]float64, w*w)
	for i := range k.c.len() {
		row := u[i*w : (i+1)*w]
		for a, x := range v[i*w : (i+1)*w] {
			for b, y := range row {
				sum[a*w+b] += x * y
			}
		}
	}
	return mat.NewDense(w, w, sum)
}

// subtract computes next -= v m, or v m^T.
func (k *blockLanczos) subtract(v []float64, m *mat.Dense, transpose bool) {
	w := k.width
	rows, columns := m.Dims()
	coefficient := make([]float64, w*w)
	for a := range rows {
		for b := range columns {
			if transpose {
				coefficient[b*w+a] = m.At(a, b)
			} else {
				coefficient[a*w+b] = m.At(a, b)
			}
		}
	}
	for i := range k.c.len() {
		out := k.next[i*w : (i+1)*w]
		for a, x := range v[i*w : (i+1)*w] {
			if x == 0 {
				continue
			}
			for b, c := range coefficient[a*w : (a+1)*w] {
				out[b] -= x * c
			}
		}
	}
}

// ritz is an eigenvalue of H in the Krylov space.
type ritz struct {
	value    float64
	residual float64
	first    []float64 // components in the first block
}

// converged returns the count lowest levels if they, and all approximate
// eigenvalues below them, have converged; all levels if the space is exhausted.
//
// Once an eigenvector has converged, rounding brings it up again: as an
// approximation from above whose components in the first block begin at the
// level of rounding and grow as it settles. Before it has settled it is told by
// these components, of which a true one has 1/n, give or take what chance does.
func (k *blockLanczos) converged(count int, exhausted bool) ([]Level, error) {
	values, err := k.ritz(exhausted)
	if err != nil {
		return nil, err
	}
	least := 1e-6 / float64(k.c.len())
	values = slices.DeleteFunc(values, func(v ritz) bool { return v.weight() < least })
	var out []Level
	for i := 0; i < len(values) && len(out) < count; {
		// Approximations of one eigenvalue count with the rank of their
		// components, so that repeated ones do not.
		j, best := i, i
		for j < len(values) && equalRates(values[i].value, values[j].value, k.scale) {
			if values[j].residual < values[best].residual {
				best = j
			}
			j++
		}
		if values[best].residual > 1e-10*k.scale {
			return nil, nil
		}
		out = append(out, Level{Rate: values[best].value, Multiplicity: k.rank(values[i:j])})
		i = j
	}
	if len(out) < count && !exhausted {
		return nil, nil
	}
	return out, nil
}

// weight is the squared length of an approximate eigenvector's part in the
// first block.
func (r ritz) weight() float64 {
	sum := 0.0
	for _, x := range r.first {
		sum += x * x
	}
	return sum
}

// ritz diagonalises H in the Krylov space.
func (k *blockLanczos) ritz(exhausted bool) ([]ritz, error) {
	n := 0
	start := make([]int, 0, k.steps)
	for _, a := range k.diagonal {
		start = append(start, n)
		c, _ := a.Dims()
		n += c
	}
	b := newBand(n, k.width)
	for s, a := range k.diagonal {
		c, _ := a.Dims()
		for i := range c {
			for j := range i + 1 {
				b.set(start[s]+i, start[s]+j, a.At(i, j))
			}
		}
		if s+1 < k.steps {
			rows, columns := k.below[s].Dims()
			for i := range rows {
				for j := range columns {
					if v := k.below[s].At(i, j); v != 0 {
						b.set(start[s+1]+i, start[s]+j, v)
					}
				}
			}
		}
	}
	lastColumns, _ := k.diagonal[k.steps-1].Dims()
	rows := make([][]float64, k.width+lastColumns)
	for i := range rows {
		rows[i] = make([]float64, n)
		if i < k.width {
			rows[i][i] = 1
		} else {
			rows[i][start[k.steps-1]+i-k.width] = 1
		}
	}
	values, err := b.diagonalise(rows)
	if err != nil {
		return nil, err
	}
	out := make([]ritz, n)
	for e := range out {
		out[e].value = values[e]
		for c := range k.width {
			out[e].first = append(out[e].first, rows[c][e])
		}
		if !exhausted {
			last := mat.NewVecDense(lastColumns, nil)
			for c := range lastColumns {
				last.SetVec(c, rows[k.width+c][e])
			}
			var r mat.VecDense
			r.MulVec(k.below[k.steps-1], last)
			out[e].residual = mat.Norm(&r, 2)
		}
	}
	slices.SortFunc(out, func(a, b ritz) int { return cmp.Compare(a.value, b.value) })
	return out, nil
}

// rank counts the directions of the first block in which approximate
// eigenvectors have components: those whose squared components lie within 1e-8
// of the largest, which random vectors exceed by far and rounding does not
// reach.
func (k *blockLanczos) rank(values []ritz) int {
	g := mat.NewSymDense(k.width, nil)
	for _, v := range values {
		for a := range k.width {
			for b := a; b < k.width; b++ {
				g.SetSym(a, b, g.At(a, b)+v.first[a]*v.first[b])
			}
		}
	}
	var e mat.EigenSym
	if !e.Factorize(g, false) {
		panic("exact: the eigenvalues of a small matrix did not converge")
	}
	list := e.Values(nil)
	rank := 0
	for _, l := range list {
		if l > 1e-8*list[len(list)-1] {
			rank++
		}
	}
	return rank
}
