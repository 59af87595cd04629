package exact

import (
	"math"
	"runtime"
	"slices"
	"sync"

	"gonum.org/v1/gonum/mat"
)

// Matrix is a generator on n states by rows (CSR): entry k of row i, for
// Start[i] <= k < Start[i+1], leads to state To[k] at rate Rate[k]. Jumps
// between the same two states are added up.
type Matrix struct {
	Start []int
	To    []int32
	Rate  []float64
	// Symmetric[k] is sqrt(Rate there * rate back), -H_ij in the package's
	// notation.
	Symmetric []float64
	// Exit is the total rate out of each state, H_ii.
	Exit []float64
}

func (m *Matrix) begin() { m.Start = append(m.Start, 0) }

// grow makes room for a number of entries.
func (m *Matrix) grow(entries int) {
	m.To = slices.Grow(m.To, entries)
	m.Rate = slices.Grow(m.Rate, entries)
	m.Symmetric = slices.Grow(m.Symmetric, entries)
}

// add puts a jump into the current row.
func (m *Matrix) add(to int, rate, symmetric float64) {
	for k := m.Start[len(m.Start)-1]; k < len(m.To); k++ {
		if m.To[k] == int32(to) {
			m.Rate[k] += rate
			m.Symmetric[k] += symmetric
			return
		}
	}
	m.To = append(m.To, int32(to))
	m.Rate = append(m.Rate, rate)
	m.Symmetric = append(m.Symmetric, symmetric)
}

func (m *Matrix) endRow() {
	sum := 0.0
	for _, r := range m.Rate[m.Start[len(m.Start)-1]:] {
		sum += r
	}
	m.Exit = append(m.Exit, sum)
	m.Start = append(m.Start, len(m.To))
}

// Len returns the number of states.
func (m *Matrix) Len() int { return len(m.Exit) }

// Mul computes dst = H x for the symmetrised H = -D L D^-1, D = diag(sqrt(pi)).
// dst and x must have Len entries and not overlap.
func (m *Matrix) Mul(dst, x []float64) {
	if len(dst) != m.Len() || len(x) != m.Len() {
		panic("exact: vector of the wrong length")
	}
	parallel(m.Len(), func(first, end int) {
		for i := first; i < end; i++ {
			sum := m.Exit[i] * x[i]
			from, to := m.Start[i], m.Start[i+1]
			values := m.Symmetric[from:to]
			for k, j := range m.To[from:to] {
				sum -= values[k] * x[j]
			}
			dst[i] = sum
		}
	})
}

// mulBlock computes dst = H x for width vectors, interleaved: component i of
// vector c stands at i*width+c.
func (m *Matrix) mulBlock(dst, x []float64, width int) {
	parallel(m.Len(), func(from, to int) {
		for i := from; i < to; i++ {
			out := dst[i*width : (i+1)*width]
			for c, v := range x[i*width : (i+1)*width] {
				out[c] = m.Exit[i] * v
			}
			for k := m.Start[i]; k < m.Start[i+1]; k++ {
				s := m.Symmetric[k]
				j := int(m.To[k]) * width
				for c, v := range x[j : j+width] {
					out[c] -= s * v
				}
			}
		}
	})
}

// parallel calls f on parts of the range 0..n, on as many cores as there are.
// What f computes must not depend on the division.
func parallel(n int, f func(from, to int)) {
	parts := min(runtime.GOMAXPROCS(0), n>>12)
	if parts < 2 {
		f(0, n)
		return
	}
	var wait sync.WaitGroup
	for p := range parts {
		wait.Go(func() { f(n*p/parts, n*(p+1)/parts) })
	}
	wait.Wait()
}

// Apply computes dst = L f, the rate of change of the mean of f from each
// state. dst and f must have Len entries and not overlap.
func (m *Matrix) Apply(dst, f []float64) {
	if len(dst) != m.Len() || len(f) != m.Len() {
		panic("exact: vector of the wrong length")
	}
	for i := range dst {
		sum := 0.0
		for k := m.Start[i]; k < m.Start[i+1]; k++ {
			sum += m.Rate[k] * (f[m.To[k]] - f[i])
		}
		dst[i] = sum
	}
}

// Dense returns H as a dense matrix.
func (m *Matrix) Dense() *mat.SymDense {
	h := mat.NewSymDense(m.Len(), nil)
	for i, e := range m.Exit {
		h.SetSym(i, i, e)
		for k := m.Start[i]; k < m.Start[i+1]; k++ {
			if j := int(m.To[k]); j > i {
				h.SetSym(i, j, -m.Symmetric[k])
			}
		}
	}
	return h
}

// norm returns a bound on the largest eigenvalue of H (Gershgorin).
func (m *Matrix) norm() float64 {
	bound := 0.0
	for i, e := range m.Exit {
		for _, v := range m.Symmetric[m.Start[i]:m.Start[i+1]] {
			e += math.Abs(v)
		}
		bound = math.Max(bound, e)
	}
	return bound
}

// Propagate returns exp(L^T t) applied to a distribution: the probabilities at
// time t if the chain begins with the given ones. It is computed by
// uniformisation (A. Jensen, Skand. Aktuarietidskr. 36, 87 (1953)) as a
// Poisson mixture of non-negative terms, whose total is 1 to within 1e-14 n.
func (m *Matrix) Propagate(p []float64, t float64) []float64 {
	if len(p) != m.Len() {
		panic("exact: vector of the wrong length")
	}
	if !(t >= 0) {
		panic("exact: negative time")
	}
	fastest := 0.0
	for _, e := range m.Exit {
		fastest = math.Max(fastest, e)
	}
	current := append([]float64(nil), p...)
	if fastest == 0 || t == 0 {
		return current
	}
	// Steps of a few Poisson means each keep the first weight far from
	// underflow.
	steps := int(math.Ceil(fastest * t / 32))
	mean := fastest * t / float64(steps)
	next, sum := make([]float64, len(p)), make([]float64, len(p))
	for range steps {
		clear(sum)
		weight, left := math.Exp(-mean), 1.0
		for k := 0; ; k++ {
			for i, x := range current {
				sum[i] += weight * x
			}
			left -= weight
			weight *= mean / float64(k+1)
			if left < 1e-15 || float64(k) > mean && weight < 1e-17 {
				break
			}
			for i, x := range current {
				next[i] = x * (1 - m.Exit[i]/fastest)
			}
			for i, x := range current {
				for k := m.Start[i]; k < m.Start[i+1]; k++ {
					next[m.To[k]] += x * m.Rate[k] / fastest
				}
			}
			current, next = next, current
		}
		current, sum = sum, current
	}
	return current
}
