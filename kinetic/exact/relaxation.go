package exact

import (
	"fmt"
	"math"
	"slices"
)

// Relaxation is what there is to know about the decay of one observable from
// equilibrium. Covariances are sums over components divided by the norm.
type Relaxation struct {
	Name      string
	Mean      float64 // of the components, divided by their number
	Variance  float64 // C(0)
	Dirichlet float64 // E(f,f) = 1/2 sum_ij pi_i r_ij (f_j - f_i)^2 = -C'(0)
	// TauInt is the integral of C(t)/C(0). It and the following are absent (0,
	// nil) for an observable without variance.
	TauInt float64
	// Modes decompose C(t) = sum Weight exp(-Rate t), slowest first. Modes of
	// equal rate stand together; those with less than 1e-12 of the variance are
	// left out.
	Modes []Mode
}

// Mode is one term of a covariance.
type Mode struct {
	Rate, Weight float64
}

// negligible is the share of the variance below which a mode is not counted:
// above the squared rounding errors of an eigenvector, far below any weight
// that data can show.
const negligible = 1e-12

// TauInitial is Var/E(f,f), the decay time at t = 0; 0 without variance.
func (r Relaxation) TauInitial() float64 {
	if r.Dirichlet == 0 {
		return 0
	}
	return r.Variance / r.Dirichlet
}

// Covariance returns C(t).
func (r Relaxation) Covariance(t float64) float64 {
	sum := 0.0
	for _, m := range r.Modes {
		sum += m.Weight * math.Exp(-m.Rate*t)
	}
	return sum
}

// TauSlowest returns the time beyond which slower modes together carry less
// than the share floor of the variance; floor = 0 gives the slowest mode of any
// weight. It is 0 without variance.
func (r Relaxation) TauSlowest(floor float64) float64 {
	sum, total := 0.0, 0.0
	for _, m := range r.Modes {
		total += m.Weight
	}
	for _, m := range r.Modes {
		// Rounding must not push a share that is exactly the floor below it.
		if sum += m.Weight; sum >= floor*total*(1-1e-12) {
			return 1 / m.Rate
		}
	}
	return 0
}

// chain is a reversible chain: its generator and stationary weights. Functions
// on a sector of it (see Sector) may change sign under a symmetry.
type chain struct {
	matrix *Matrix
	weight []float64
	sign   []int8 // by entry of the matrix, with which the function there counts; nil for 1
	odd    bool   // all functions change sign under a symmetry: no constants among them
	// leak is the rate out of each state to where every function is 0; nil for
	// none.
	leak []float64
}

func (c *chain) len() int { return len(c.weight) }

// root returns sqrt(pi), the stationary state of H; nil if it lies outside.
func (c *chain) root() []float64 {
	if c.odd {
		return nil
	}
	r := make([]float64, c.len())
	for i, w := range c.weight {
		r[i] = math.Sqrt(w)
	}
	return r
}

// relaxation decomposes an observable whose components values fills in.
func (c *chain) relaxation(o Observable, values func(component Component, dst []float64)) (Relaxation, error) {
	var modes []Mode
	var failed error
	r := c.statics(o, values, func(x []float64) {
		if failed != nil {
			return
		}
		m, err := c.measure(x)
		if err != nil {
			failed = fmt.Errorf("%s: %w", o.Name, err)
		}
		modes = append(modes, m...)
	})
	if failed != nil {
		return r, failed
	}
	r.finish(modes, o.Norm)
	return r, nil
}

// statics fills the mean, variance and Dirichlet form of an observable, and
// calls each with every centred component, scaled by sqrt(pi).
func (c *chain) statics(o Observable, values func(component Component, dst []float64), each func(x []float64)) Relaxation {
	r := Relaxation{Name: o.Name}
	f := make([]float64, c.len())
	for _, component := range o.Components {
		values(component, f)
		mean := 0.0
		for i, v := range f {
			mean += c.weight[i] * v
		}
		if c.odd {
			mean = 0
		}
		r.Mean += mean
		variance, form := c.forms(f, mean)
		scale := 0.0
		for _, v := range f {
			scale = math.Max(scale, math.Abs(v))
		}
		// A constant component is constant to rounding.
		if variance <= 1e-28*scale*scale {
			continue
		}
		r.Variance += variance / o.Norm
		r.Dirichlet += form / o.Norm
		for i := range f {
			f[i] = math.Sqrt(c.weight[i]) * (f[i] - mean)
		}
		each(f)
	}
	if o.Norm > 1 {
		r.Mean /= o.Norm
	}
	return r
}

// forms returns the variance and the Dirichlet form of a function.
func (c *chain) forms(f []float64, mean float64) (variance, form float64) {
	m := c.matrix
	for i, v := range f {
		variance += c.weight[i] * (v - mean) * (v - mean)
		sum := 0.0
		for k := m.Start[i]; k < m.Start[i+1]; k++ {
			there := f[m.To[k]]
			if c.sign != nil {
				there *= float64(c.sign[k])
			}
			sum += m.Rate[k] * (there - v) * (there - v)
		}
		form += c.weight[i] * sum / 2
		if c.leak != nil { // there and back
			form += c.weight[i] * c.leak[i] * v * v
		}
	}
	return variance, form
}

// finish sorts and merges modes and integrates.
func (r *Relaxation) finish(modes []Mode, norm float64) {
	slices.SortFunc(modes, func(a, b Mode) int {
		switch {
		case a.Rate < b.Rate:
			return -1
		case a.Rate > b.Rate:
			return 1
		}
		return 0
	})
	total, fastest := 0.0, 0.0
	for _, m := range modes {
		total += m.Weight
		fastest = math.Max(fastest, m.Rate)
	}
	for _, m := range modes {
		if n := len(r.Modes) - 1; n >= 0 && equalRates(r.Modes[n].Rate, m.Rate, fastest) {
			sum := r.Modes[n].Weight + m.Weight
			r.Modes[n].Rate += (m.Rate - r.Modes[n].Rate) * m.Weight / math.Max(sum, math.SmallestNonzeroFloat64)
			r.Modes[n].Weight = sum
			continue
		}
		r.Modes = append(r.Modes, m)
	}
	r.Modes = slices.DeleteFunc(r.Modes, func(m Mode) bool { return m.Weight < negligible*total })
	for i := range r.Modes {
		r.Modes[i].Weight /= norm
		r.TauInt += r.Modes[i].Weight / r.Modes[i].Rate
	}
	if r.Variance > 0 {
		r.TauInt /= r.Variance
	}
}
