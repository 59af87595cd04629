package analysis

import (
	"math"
	"math/rand/v2"
	"sort"
)

// process is a stationary reversible process with known C(t) = sum c_k
// exp(-rate_k t).
type process struct {
	name   string
	terms  []exponential
	sample func(rng *rand.Rand, x []float64, step float64) // fills x
	// form, if not nil, is sample that also gives the Dirichlet form in the state
	// at each time; else it is a constant of the path.
	form func(rng *rand.Rand, x, e []float64, step float64)
}

// ou is a sum of independent Ornstein-Uhlenbeck processes with variances c.
func ou(name string, terms ...exponential) process {
	p := process{name: name, terms: terms}
	p.sample = func(rng *rand.Rand, x []float64, step float64) {
		clear(x)
		for _, t := range terms {
			a := math.Exp(-t.rate * step)
			b := math.Sqrt(t.c * (1 - a*a))
			y := math.Sqrt(t.c) * rng.NormFloat64()
			for i := range x {
				x[i] += y
				y = a*y + b*rng.NormFloat64()
			}
		}
	}
	return p
}

// telegraph flips between +1 and -1 so that C(t) = exp(-rate t).
func telegraph(name string, rate float64) process {
	p := process{name: name, terms: []exponential{{1, rate}}}
	p.sample = func(rng *rand.Rand, x []float64, step float64) {
		y := 1.0
		if rng.Uint64()&1 == 0 {
			y = -1
		}
		next := rng.ExpFloat64() * 2 / rate
		for i := range x {
			for next < float64(i)*step {
				y = -y
				next += rng.ExpFloat64() * 2 / rate
			}
			x[i] = y
		}
	}
	return p
}

func (p *process) variance() (v float64) {
	for _, t := range p.terms {
		v += t.c
	}
	return v
}

func (p *process) dirichlet() (e float64) {
	for _, t := range p.terms {
		e += t.c * t.rate
	}
	return e
}

func (p *process) tauInitial() float64 { return p.variance() / p.dirichlet() }

func (p *process) tauInt() (tau float64) {
	for _, t := range p.terms {
		tau += t.c / t.rate
	}
	return tau / p.variance()
}

func (p *process) tauSlowest() (tau float64) {
	for _, t := range p.terms {
		tau = math.Max(tau, 1/t.rate)
	}
	return tau
}

// lagGrid is 0..8, then (8+j) 2^k, up to a quarter of the samples.
func lagGrid(samples int) []int64 {
	var lags []int64
	most := int64(samples / 4)
	for t := int64(0); t <= 8 && t <= most; t++ {
		lags = append(lags, t)
	}
	for unit := int64(1); ; unit *= 2 {
		for j := int64(9); j <= 16; j++ {
			if j*unit > most {
				return lags
			}
			lags = append(lags, j*unit)
		}
	}
}

// record turns trajectories (unit, observable, sample) into a point, with time
// origins thinned in proportion to the lag. The products f g of every pair of
// observables are kept. dirichlet[f][g] is a constant of the path.
func record(x [][][]float64, step float64, dirichlet [][]float64) Point {
	samples := len(x[0][0])
	p := Point{
		Step: step, Span: step * float64(samples), Lanes: 1, Rate: 1,
		Size: []int{1}, Open: []bool{false}, Sites: 1,
	}
	for range x {
		p.Starts = append(p.Starts, "random")
	}
	names := []string{"a", "b", "c", "d"}
	for o := range x[0] {
		obs := Observable{Name: names[o], Kind: "terms", Scalar: true}
		for u := range x {
			segments := make([]Moment, 16)
			for i, v := range x[u][o] {
				segments[i*16/samples].add(Moment{1, v, v * v, v * v * v, v * v * v * v})
			}
			obs.Moments = append(obs.Moments, segments)
		}
		p.Observables = append(p.Observables, obs)
	}
	lags := lagGrid(samples)
	for f := range x[0] {
		for g := f; g < len(x[0]); g++ {
			pair := Pair{F: f, G: g, Lags: lags}
			for u := range x {
				pair.Sums = append(pair.Sums, lagged(x[u][f], x[u][g], lags, f == g))
				if dirichlet != nil {
					dir := make([]Sum, 4)
					for s := range dir {
						dir[s] = Sum{int64(samples / 4), dirichlet[f][g] * float64(samples/4)}
					}
					pair.Dirichlet = append(pair.Dirichlet, dir)
				}
			}
			p.Pairs = append(p.Pairs, pair)
		}
	}
	return p
}

func lagged(f, g []float64, lags []int64, same bool) [][]Lagged {
	n := len(f)
	out := make([][]Lagged, 4)
	for s := range out {
		out[s] = make([]Lagged, len(lags))
	}
	for k, lag := range lags {
		l := int(lag)
		stride := 1 // doubles with each octave of lags above 8
		for l > 16*stride {
			stride *= 2
		}
		for s := range out {
			// First times in segment s that are multiples of the stride.
			first := (n*s + 3) / 4
			last := min((n*(s+1)+3)/4, n-l)
			first = (first + stride - 1) / stride * stride
			var v Lagged
			for i := first; i < last; i += stride {
				v.N++
				v.SF += f[i]
				v.SG += g[i+l]
				v.SFG += f[i] * g[i+l]
				if !same {
					v.N++
					v.SF += f[i+l]
					v.SG += g[i]
					v.SFG += f[i+l] * g[i]
				}
			}
			out[s][k] = v
		}
	}
	return out
}

// point draws one data set: units trajectories of the given span.
func (p *process) point(seed uint64, units int, span, step float64) Point {
	rng := rand.New(rand.NewPCG(seed, 0x50a7))
	n := int(math.Round(span / step))
	x := make([][][]float64, units)
	forms := make([][]Sum, units)
	e := make([]float64, n)
	for u := range x {
		x[u] = [][]float64{make([]float64, n)}
		if p.form == nil {
			p.sample(rng, x[u][0], step)
			continue
		}
		p.form(rng, x[u][0], e, step)
		forms[u] = make([]Sum, 4)
		for i, v := range e {
			s := &forms[u][i*4/n]
			s.N++
			s.S += v
		}
	}
	point := record(x, step, [][]float64{{p.dirichlet()}})
	if p.form != nil {
		point.Pairs[0].Dirichlet = forms
	}
	return point
}

// The processes of the coverage tables.
var (
	pureOU = ou("ou", exponential{1, 1})
	pureTS = telegraph("two-state", 1)
	hardC  = ou("mixC", exponential{.3, 1}, exponential{.3, 3}, exponential{.4, 10})
	hardD  = ou("mixD", exponential{.3, 1}, exponential{.7, 1.5})
	hardE  = ou("mixE", exponential{.6, 1}, exponential{.3, 2}, exponential{.1, 5})
	hardF  = ou("mixF", exponential{.15, 1}, exponential{.85, 4})
)

func quantile(x []float64, q float64) float64 {
	s := append([]float64(nil), x...)
	sort.Float64s(s)
	if len(s) == 0 {
		return math.NaN()
	}
	return s[min(len(s)-1, int(q*float64(len(s))))]
}

// mixture is a set of observables that are linear combinations of independent
// Ornstein-Uhlenbeck processes of unit variance.
type mixture struct {
	name    string
	rates   []float64
	weights [][]float64 // observable, process
}

// point draws one data set of all observables.
func (m *mixture) point(seed uint64, units int, span, step float64) Point {
	rng := rand.New(rand.NewPCG(seed, 0x3eed))
	n := int(math.Round(span / step))
	x := make([][][]float64, units)
	for u := range x {
		x[u] = make([][]float64, len(m.weights))
		for o := range x[u] {
			x[u][o] = make([]float64, n)
		}
		for k, rate := range m.rates {
			a := math.Exp(-rate * step)
			b := math.Sqrt(1 - a*a)
			y := rng.NormFloat64()
			for i := range n {
				for o := range x[u] {
					x[u][o][i] += m.weights[o][k] * y
				}
				y = a*y + b*rng.NormFloat64()
			}
		}
	}
	e := square(len(m.weights))
	for f := range e {
		for g := range e {
			for k, rate := range m.rates {
				e[f][g] += m.weights[f][k] * m.weights[g][k] * rate
			}
		}
	}
	return record(x, step, e)
}

// The sets of observables of the slow-mode tables: entries are amplitudes, so
// that the squares are the weights.
var (
	twoOfThree = mixture{"A", []float64{1, 3, 10}, [][]float64{
		{math.Sqrt(.3), math.Sqrt(.3), math.Sqrt(.4)}, {math.Sqrt(.6), -math.Sqrt(.3), math.Sqrt(.1)}}}
	threeOfThree = mixture{"A3", []float64{1, 3, 10}, [][]float64{
		{math.Sqrt(.3), math.Sqrt(.3), math.Sqrt(.4)}, {math.Sqrt(.6), -math.Sqrt(.3), math.Sqrt(.1)}, {math.Sqrt(.2), math.Sqrt(.5), -math.Sqrt(.3)}}}
)
