//go:build long

package analysis

import (
	"math"
	"math/rand/v2"
	"sort"

	"gonum.org/v1/gonum/mat"
)

// spinChain is a small Ising model with heat-bath rates, enumerated: its
// spectrum gives C(t) exactly, and it is sampled spin by spin.
type spinChain struct {
	neighbours [][]int
	beta       float64
}

// torus3 is the 3 x 3 periodic square lattice.
func torus3(beta float64) spinChain {
	c := spinChain{beta: beta}
	for i := range 9 {
		x, y := i%3, i/3
		c.neighbours = append(c.neighbours, []int{(x+1)%3 + 3*y, (x+2)%3 + 3*y, x + 3*((y+1)%3), x + 3*((y+2)%3)})
	}
	return c
}

// ring is the periodic chain of n spins.
func ring(n int, beta float64) spinChain {
	c := spinChain{beta: beta}
	for i := range n {
		c.neighbours = append(c.neighbours, []int{(i + 1) % n, (i + n - 1) % n})
	}
	return c
}

func (c *spinChain) energy(s int) (e float64) {
	for i, nb := range c.neighbours {
		for _, j := range nb {
			e -= spin(s, i) * spin(s, j) / 2
		}
	}
	return e
}

func (c *spinChain) magnetization(s int) (m float64) {
	for i := range c.neighbours {
		m += spin(s, i)
	}
	return m
}

func spin(s, i int) float64 { return float64(1 - 2*(s>>i&1)) }

// flip is the heat-bath rate of spin i: 1/(1 + exp(beta dE)).
func (c *spinChain) flip(s, i int) float64 {
	h := 0.0
	for _, j := range c.neighbours[i] {
		h += spin(s, j)
	}
	return 1 / (1 + math.Exp(2*c.beta*spin(s, i)*h))
}

// process turns an observable of the chain into a process in units of its
// slowest time of weight above 1e-6. C(t) = sum over eigenvalues of
// the symmetrised generator.
func (c *spinChain) process(name string, f func(s int) float64) process {
	n := 1 << len(c.neighbours)
	pi, norm := make([]float64, n), 0.0
	for s := range pi {
		pi[s] = math.Exp(-c.beta * c.energy(s))
		norm += pi[s]
	}
	mean := 0.0
	for s := range pi {
		pi[s] /= norm
		mean += pi[s] * f(s)
	}
	g := mat.NewSymDense(n, nil)
	for s := range n {
		for i := range c.neighbours {
			r := c.flip(s, i)
			g.SetSym(s, s, g.At(s, s)+r)
			if t := s ^ 1<<i; t > s {
				g.SetSym(s, t, -r*math.Sqrt(pi[s]/pi[t]))
			}
		}
	}
	var e mat.EigenSym
	if !e.Factorize(g, true) {
		panic("analysis: no spectrum")
	}
	var v mat.Dense
	e.VectorsTo(&v)
	var terms []exponential
	variance := 0.0
	for k, rate := range e.Values(nil) {
		a := 0.0
		for s := range n {
			a += v.At(s, k) * math.Sqrt(pi[s]) * (f(s) - mean)
		}
		if k == 0 || a*a < 1e-20 {
			continue
		}
		variance += a * a
		terms = append(terms, exponential{a * a, rate})
	}
	sort.Slice(terms, func(i, j int) bool { return terms[i].rate < terms[j].rate })
	unit := 0.0
	for i := range terms {
		if terms[i].c > 1e-6*variance {
			unit = terms[i].rate
			break
		}
	}
	p := process{name: name}
	for _, t := range terms {
		if t.c > 1e-12*variance {
			p.terms = append(p.terms, exponential{t.c, t.rate / unit})
		}
	}
	values := make([]float64, n)
	for s := range values {
		values[s] = f(s)
	}
	forms := make([]float64, n) // in units of the slowest rate
	for s := range forms {
		for i := range c.neighbours {
			d := f(s^1<<i) - f(s)
			forms[s] += c.flip(s, i) * d * d / 2 / unit
		}
	}
	p.form = c.sampler(unit, pi, values, forms)
	return p
}

// sampler draws the chain from equilibrium by uniformisation; time is in units
// of 1/unit.
func (c *spinChain) sampler(unit float64, pi, values, forms []float64) func(rng *rand.Rand, x, e []float64, step float64) {
	n := len(c.neighbours)
	cumulative := make([]float64, len(pi))
	sum := 0.0
	for s := range pi {
		sum += pi[s]
		cumulative[s] = sum
	}
	rates := make([]float64, len(pi)*n)
	for s := range pi {
		for i := range n {
			rates[s*n+i] = c.flip(s, i)
		}
	}
	return func(rng *rand.Rand, x, e []float64, step float64) {
		s := sort.SearchFloat64s(cumulative, rng.Float64())
		s = min(s, len(pi)-1)
		next := rng.ExpFloat64() / float64(n)
		for i := range x {
			for t := float64(i) * step / unit; next < t; next += rng.ExpFloat64() / float64(n) {
				if k := rng.IntN(n); rng.Float64() < rates[s*n+k] {
					s ^= 1 << k
				}
			}
			x[i], e[i] = values[s], forms[s]
		}
	}
}
