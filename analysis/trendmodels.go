package analysis

import (
	"fmt"
	"math"
	"sort"
)

// trendForm is a form that a trend may follow. It works on ln y.
type trendForm struct {
	name, formula string
	parameters    []string
	// ln is ln y at x.
	ln     func(x float64, p []float64) float64
	starts func(x, lnY []float64) [][]float64
	// valid rejects fits whose parameters make another form of it.
	valid func(p []float64) bool
}

// sizeForms are the forms of a relaxation time against the length L of a
// lattice of dimension d.
func sizeForms(d int) []trendForm {
	slope := func(x, y []float64) float64 {
		n := len(x)
		return (y[n-1] - y[0]) / math.Log(x[n-1]/x[0])
	}
	first := func(x, y []float64) float64 { return y[0] - slope(x, y)*math.Log(x[0]) }
	forms := []trendForm{
		constantForm,
		{
			name: "logarithm", formula: "a + b ln L", parameters: []string{"a", "b"},
			ln: func(x float64, p []float64) float64 { return math.Log(p[0] + p[1]*math.Log(x)) },
			starts: func(x, y []float64) [][]float64 {
				n := len(x)
				b := (math.Exp(y[n-1]) - math.Exp(y[0])) / math.Log(x[n-1]/x[0])
				return [][]float64{{math.Exp(y[0]) - b*math.Log(x[0]), b}, {math.Exp(y[0]), 0}}
			},
		},
		{
			name: "power", formula: "a L^z", parameters: []string{"ln a", "z"},
			ln:     func(x float64, p []float64) float64 { return p[0] + p[1]*math.Log(x) },
			starts: func(x, y []float64) [][]float64 { return [][]float64{{first(x, y), slope(x, y)}} },
		},
		{
			name: "power with correction", formula: "a L^z (1 + b L^-2)", parameters: []string{"ln a", "z", "b"},
			ln: func(x float64, p []float64) float64 { return p[0] + p[1]*math.Log(x) + math.Log(1+p[2]/(x*x)) },
			starts: func(x, y []float64) [][]float64 {
				return [][]float64{{first(x, y), slope(x, y), 0}, {first(x, y), slope(x, y), 0.5 * x[0] * x[0]}, {first(x, y), slope(x, y), -0.5 * x[0] * x[0]}}
			},
		},
		{
			name: "power, then saturation", formula: "s / (1 + (l/L)^z)", parameters: []string{"ln s", "ln l", "z"},
			ln: func(x float64, p []float64) float64 {
				return p[0] - math.Log1p(math.Exp(p[2]*(p[1]-math.Log(x))))
			},
			starts: func(x, y []float64) [][]float64 {
				n := len(x)
				var s [][]float64
				for _, l := range []float64{x[0], math.Sqrt(x[0] * x[n-1]), x[n-1]} {
					s = append(s, []float64{y[n-1], math.Log(l), 1}, []float64{y[n-1], math.Log(l), 3})
				}
				return s
			},
			valid: func(p []float64) bool { return p[2] > 0 && p[2] < 20 },
		},
	}
	for m := 1; m <= d; m++ {
		forms = append(forms, exponentialForm(m))
	}
	return forms
}

// exponentialForm is a exp((L/l)^m).
func exponentialForm(m int) trendForm {
	e := float64(m)
	name, formula := "exponential", "a exp(L/l)"
	if m > 1 {
		name, formula = fmt.Sprintf("exponential of L^%d", m), fmt.Sprintf("a exp((L/l)^%d)", m)
	}
	return trendForm{
		name: name, formula: formula, parameters: []string{"ln a", fmt.Sprintf("l^-%d", m)},
		ln: func(x float64, p []float64) float64 { return p[0] + p[1]*math.Pow(x, e) },
		starts: func(x, y []float64) [][]float64 {
			n := len(x)
			b := (y[n-1] - y[0]) / (math.Pow(x[n-1], e) - math.Pow(x[0], e))
			return [][]float64{{y[0] - b*math.Pow(x[0], e), b}}
		},
		valid: func(p []float64) bool { return p[1] > 0 },
	}
}

var constantForm = trendForm{
	name: "constant", formula: "a", parameters: []string{"ln a"},
	ln:     func(_ float64, p []float64) float64 { return p[0] },
	starts: func(_, y []float64) [][]float64 { return [][]float64{{y[0]}} },
}

// betaForms are the forms of a relaxation time against inverse temperature.
var betaForms = []trendForm{
	constantForm,
	{
		name: "Arrhenius", formula: "a exp(D beta)", parameters: []string{"ln a", "D"},
		ln: func(x float64, p []float64) float64 { return p[0] + p[1]*x },
		starts: func(x, y []float64) [][]float64 {
			n := len(x)
			b := (y[n-1] - y[0]) / (x[n-1] - x[0])
			return [][]float64{{y[0] - b*x[0], b}}
		},
	},
	{
		name: "super-Arrhenius", formula: "a exp(D beta + c beta^2)", parameters: []string{"ln a", "D", "c"},
		ln: func(x float64, p []float64) float64 { return p[0] + p[1]*x + p[2]*x*x },
		starts: func(x, y []float64) [][]float64 {
			n := len(x)
			b := (y[n-1] - y[0]) / (x[n-1] - x[0])
			return [][]float64{{y[0] - b*x[0], b, 0}}
		},
		valid: func(p []float64) bool { return p[2] > 0 },
	},
}

// powerForms are the forms of a relaxation time against a correlation length.
var powerForms = []trendForm{
	constantForm,
	{
		name: "power", formula: "a xi^z", parameters: []string{"ln a", "z"},
		ln: func(x float64, p []float64) float64 { return p[0] + p[1]*math.Log(x) },
		starts: func(x, y []float64) [][]float64 {
			n := len(x)
			b := (y[n-1] - y[0]) / math.Log(x[n-1]/x[0])
			return [][]float64{{y[0] - b*math.Log(x[0]), b}}
		},
	},
}

// fitForms fits every form that leaves at least one degree of freedom and
// weighs them by exp[-(chi^2 + 2 parameters)/2] (H. Akaike, IEEE Trans. Autom.
// Control 19, 716 (1974)), by decreasing weight.
func fitForms(forms []trendForm, points []TrendPoint) []TrendModel {
	n := len(points)
	x, y, se := make([]float64, n), make([]float64, n), make([]float64, n)
	for i, p := range points {
		x[i], y[i], se[i] = p.X, math.Log(p.Y), p.Err/p.Y
	}
	var models []TrendModel
	var aic []float64
	for _, form := range forms {
		k := len(form.parameters)
		if k >= n {
			continue
		}
		f := leastSquares(form.ln, x, y, se, form.starts(x, y))
		if !f.ok || form.valid != nil && !form.valid(f.p) {
			continue
		}
		m := TrendModel{Name: form.name, Formula: form.formula, Chi2: f.chi2, Dof: n - k}
		for i, name := range form.parameters {
			m.Parameters = append(m.Parameters, Parameter{name, f.p[i], f.err[i]})
		}
		models = append(models, m)
		aic = append(aic, f.chi2+2*float64(k))
	}
	least := math.Inf(1)
	for _, a := range aic {
		least = math.Min(least, a)
	}
	sum := 0.0
	for i := range models {
		models[i].Weight = math.Exp((least - aic[i]) / 2)
		sum += models[i].Weight
	}
	for i := range models {
		models[i].Weight /= sum
	}
	sort.SliceStable(models, func(i, j int) bool { return models[i].Weight > models[j].Weight })
	return models
}
