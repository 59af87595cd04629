package exact

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// degenerate is the relative distance within which two rates are one: well
// above the rounding errors of the solvers, below physical splittings.
const degenerate = 1e-9

// equalRates reports whether two rates are one, as found by a solver whose
// rounding errors are those of the fastest.
func equalRates(a, b, fastest float64) bool {
	return math.Abs(a-b) <= degenerate*math.Abs(a)+1e-14*fastest
}

// Spectrum is the full eigen-decomposition of a generator.
type Spectrum struct {
	// Rates are the eigenvalues of -L, increasing; the first is exactly 0.
	Rates []float64

	states  *States
	vectors *mat.Dense // columns, orthonormal; the first is sqrt(pi)
}

// maxDense bounds the full decomposition: its cost grows with the third power
// of the number of states, its memory with the second.
const maxDense = 1 << 11

// Spectrum computes all eigenvalues and eigenvectors. Up to 2048 states are
// accepted, which take a minute; 500 take a second.
func (st *States) Spectrum() (*Spectrum, error) {
	n := st.Len()
	if n > maxDense {
		return nil, fmt.Errorf("a full spectrum of %d states; at most %d are possible", n, maxDense)
	}
	h := st.matrix.Dense()
	// Lifting the stationary vector to the top leaves the gap as the lowest
	// eigenvalue, uncontaminated however small it is.
	lift := 2 * st.matrix.norm()
	if lift == 0 {
		lift = 1
	}
	for i := range n {
		for j := i; j < n; j++ {
			h.SetSym(i, j, h.At(i, j)+lift*math.Sqrt(st.Weight[i]*st.Weight[j]))
		}
	}
	var e mat.EigenSym
	if !e.Factorize(h, true) {
		return nil, fmt.Errorf("the eigenvalues of the generator did not converge")
	}
	var v mat.Dense
	e.VectorsTo(&v)
	values := e.Values(nil)
	sp := &Spectrum{states: st, Rates: make([]float64, n), vectors: mat.NewDense(n, n, nil)}
	for k := 1; k < n; k++ {
		sp.Rates[k] = values[k-1]
		for i := range n {
			sp.vectors.Set(i, k, v.At(i, k-1))
		}
	}
	for i := range n {
		sp.vectors.Set(i, 0, math.Sqrt(st.Weight[i]))
	}
	return sp, nil
}

// Level is a distinct eigenvalue of -L.
type Level struct {
	Rate         float64
	Multiplicity int
	AtLeast      bool // the multiplicity is a lower bound
}

// Levels returns the distinct eigenvalues, increasing.
func (sp *Spectrum) Levels() []Level {
	var out []Level
	for _, r := range sp.Rates {
		if n := len(out) - 1; n >= 0 && equalRates(out[n].Rate, r, sp.Rates[len(sp.Rates)-1]) {
			out[n].Multiplicity++
			continue
		}
		out = append(out, Level{Rate: r, Multiplicity: 1})
	}
	return out
}

// Gap returns the lowest eigenvalue above 0, 0 if there is one state only.
func (sp *Spectrum) Gap() float64 {
	if len(sp.Rates) < 2 {
		return 0
	}
	return sp.Rates[1]
}

// Relaxation decomposes an observable into modes.
func (sp *Spectrum) Relaxation(o Observable) Relaxation {
	var modes []Mode
	r := sp.states.chain().statics(o, sp.states.Values, func(x []float64) {
		for k := 1; k < len(sp.Rates); k++ {
			c := 0.0
			for i, v := range x {
				c += v * sp.vectors.At(i, k)
			}
			modes = append(modes, Mode{sp.Rates[k], c * c})
		}
	})
	r.finish(modes, o.Norm)
	return r
}
