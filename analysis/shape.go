package analysis

import (
	"math"
	"sort"
)

// preferred is the weight from which another form than exponentials is named.
const preferred = 0.95

// decayForm is a form of C(t)/C(0) with parameters of which the first is the
// logarithm of the amplitude.
type decayForm struct {
	name, formula string
	parameters    []string
	at            func(t float64, p []float64) float64
	starts        func(tau float64) [][]float64
	valid         func(p []float64) bool
}

// All of them are completely monotone within the limits of their parameters, as
// C(t) of a reversible process must be.
var decayForms = []decayForm{
	{
		name: "exponential", formula: "c exp(-t/tau)", parameters: []string{"ln c", "ln tau"},
		at:     func(t float64, p []float64) float64 { return math.Exp(p[0] - t*math.Exp(-p[1])) },
		starts: func(tau float64) [][]float64 { return [][]float64{{0, math.Log(tau)}} },
	},
	{
		name: "two exponentials", formula: "c exp(-t/tau) + d exp(-t/sigma)", parameters: []string{"ln c", "ln tau", "ln d", "ln sigma"},
		at: func(t float64, p []float64) float64 {
			return math.Exp(p[0]-t*math.Exp(-p[1])) + math.Exp(p[2]-t*math.Exp(-p[3]))
		},
		starts: func(tau float64) [][]float64 {
			l := math.Log(tau)
			return [][]float64{{-0.7, l + 0.5, -0.7, l - 1}, {-1.5, l + 1, -0.25, l - 0.5}, {-0.1, l, -2.3, l - 2}}
		},
	},
	{
		name: "stretched", formula: "c exp(-(t/tau)^b), b < 1", parameters: []string{"ln c", "ln tau", "b"},
		at: func(t float64, p []float64) float64 {
			return math.Exp(p[0] - math.Pow(t*math.Exp(-p[1]), math.Abs(p[2])))
		},
		starts: func(tau float64) [][]float64 {
			l := math.Log(tau)
			return [][]float64{{0, l, 0.9}, {0, l - 0.5, 0.6}, {0, l - 1, 0.4}}
		},
		valid: func(p []float64) bool { return p[2] > 0.05 && p[2] < 1 },
	},
	{
		name: "power", formula: "c (1 + t/tau)^-x", parameters: []string{"ln c", "ln tau", "ln x"},
		at: func(t float64, p []float64) float64 {
			return math.Exp(p[0] - math.Exp(p[2])*math.Log1p(t*math.Exp(-p[1])))
		},
		starts: func(tau float64) [][]float64 {
			l := math.Log(tau)
			return [][]float64{{0, l, 0.5}, {0, l + 1, 1}, {0, l - 2, 0}}
		},
		valid: func(p []float64) bool { return p[2] < 3 }, // beyond exp(3) it is an exponential
	},
}

// fit finds the best parameters in coordinates whitened by l.
func (form *decayForm) fit(f *fitted, l [][]float64) curveFit {
	residuals := func(p []float64) []float64 {
		r := make([]float64, len(f.y))
		for i, t := range f.times {
			r[i] = f.y[i] - f.y[0]*form.at(t, p)
		}
		solveLower(l, r)
		return r
	}
	best := curveFit{chi2: math.Inf(1)}
	for _, start := range form.starts(f.tau) {
		if c := minimise(residuals, start); c.ok && c.chi2 < best.chi2 && (form.valid == nil || form.valid(c.p)) {
			best = c
		}
	}
	return best
}

// shape compares forms of the decay on the lags of fits, by the information
// criterion exp[-(chi^2 + 2 parameters)/2].
func shape(f *fitted) Shape {
	l, ok := cholesky(f.cov)
	if !ok {
		return Shape{Reason: "the autocorrelation's errors are degenerate"}
	}
	s := Shape{}
	var aic []float64
	for _, form := range decayForms {
		if len(form.parameters) >= len(f.y) {
			continue
		}
		best := form.fit(f, l)
		if !best.ok {
			continue
		}
		k := len(form.parameters)
		m := TrendModel{Name: form.name, Formula: form.formula, Chi2: best.chi2, Dof: len(f.y) - k}
		for i, name := range form.parameters {
			m.Parameters = append(m.Parameters, Parameter{name, best.p[i], best.err[i]})
		}
		s.Forms = append(s.Forms, m)
		aic = append(aic, best.chi2+2*float64(k))
	}
	if len(s.Forms) == 0 {
		s.Reason = "no form fits"
		return s
	}
	least, norm := math.Inf(1), 0.0
	for _, a := range aic {
		least = math.Min(least, a)
	}
	for i, a := range aic {
		s.Forms[i].Weight = math.Exp((least - a) / 2)
		norm += s.Forms[i].Weight
	}
	exponentials := 0.0
	for i := range s.Forms {
		s.Forms[i].Weight /= norm
		if s.Forms[i].Name == "exponential" || s.Forms[i].Name == "two exponentials" {
			exponentials += s.Forms[i].Weight
		}
	}
	sort.SliceStable(s.Forms, func(i, j int) bool { return s.Forms[i].Weight > s.Forms[j].Weight })
	s.OK = true
	switch best := s.Forms[0]; {
	case exponentials > 1-preferred:
		s.Prefers = "exponential" // not contradicted
	case best.Weight > preferred:
		s.Prefers = best.Name
	default:
		s.Prefers = "not exponential"
	}
	return s
}
