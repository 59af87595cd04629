package analysis

import (
	"fmt"
	"math"
	"sort"
	"strings"
)

// series is one quantity over the points of a study.
type series struct {
	quantity, observable string
	of                   func(r *Result) Estimate
}

// fewestTrend is the fewest points that a trend is fitted to.
const fewestTrend = 3

// trends fits every quantity against length and inverse temperature, with all
// else fixed, and relaxation times against correlation lengths.
func trends(results []Result) []Trend {
	var out []Trend
	for _, s := range allSeries(results) {
		out = append(out, alongLength(results, s)...)
		if s.quantity != "approach" {
			out = append(out, alongBeta(results, s)...)
		}
		if s.quantity == "tau_int" || s.quantity == "tau_slow_mode" {
			out = append(out, alongXi(results, s)...)
		}
	}
	return out
}

// allSeries lists the quantities in order of first appearance.
func allSeries(results []Result) []series {
	var out []series
	seen := map[string]bool{}
	add := func(s series) {
		if key := s.quantity + "\x00" + s.observable; !seen[key] {
			seen[key] = true
			out = append(out, s)
		}
	}
	for i := range results {
		r := &results[i]
		for j := range r.Observables {
			name := r.Observables[j].Name
			add(series{"tau_int", name, func(r *Result) Estimate {
				return r.observable(name, func(o *ObservableResult) Estimate { return o.Integrated })
			}})
			if r.Observables[j].Single.OK {
				add(series{"tau_single", name, func(r *Result) Estimate {
					return r.observable(name, func(o *ObservableResult) Estimate { return o.Single })
				}})
			}
		}
		add(series{"tau_slow_mode", "", func(r *Result) Estimate { return r.SlowMode.Tau }})
		for j := range r.Decay {
			of, axis := r.Decay[j].Of, r.Decay[j].Axis
			add(series{"xi", fmt.Sprintf("%s, axis %d", of, axis), func(r *Result) Estimate {
				for k := range r.Decay {
					if r.Decay[k].Of == of && r.Decay[k].Axis == axis {
						return r.Decay[k].Xi
					}
				}
				return Estimate{}
			}})
		}
		for j := range r.Approach {
			name, start := r.Approach[j].Observable, r.Approach[j].Start
			add(series{"approach", name + " from " + start, func(r *Result) Estimate {
				for k := range r.Approach {
					if r.Approach[k].Observable == name && r.Approach[k].Start == start {
						return r.Approach[k].Time
					}
				}
				return Estimate{}
			}})
		}
	}
	return out
}

func (r *Result) observable(name string, of func(*ObservableResult) Estimate) Estimate {
	for i := range r.Observables {
		if r.Observables[i].Name == name {
			return of(&r.Observables[i])
		}
	}
	return Estimate{}
}

// shape names the lattice up to its first length: "3 equal axes", or the other
// lengths.
func (r *Result) shape() string {
	equal := true
	for _, l := range r.Size {
		equal = equal && l == r.Size[0]
	}
	open := strings.Trim(fmt.Sprint(r.Open), "[]")
	if equal {
		return fmt.Sprintf("%d equal axes, open %s", len(r.Size), open)
	}
	return fmt.Sprintf("other lengths %v, open %s", r.Size[1:], open)
}

// classes parts the results that have the quantity by a key, in order of first
// appearance, and returns the points of each class by increasing x.
func classes(results []Result, s series, key func(r *Result) string, x func(r *Result) float64) (keys []string, points map[string][]TrendPoint) {
	points = map[string][]TrendPoint{}
	for i := range results {
		r := &results[i]
		e := s.of(r)
		if !e.OK || !r.Equilibrated || !(e.Err > 0) || !(e.Value > 0) || len(r.Size) == 0 {
			continue
		}
		k := key(r)
		if points[k] == nil {
			keys = append(keys, k)
		}
		points[k] = append(points[k], TrendPoint{Result: i, X: x(r), Y: e.Value, Err: e.Err})
	}
	for _, k := range keys {
		p := points[k]
		sort.SliceStable(p, func(i, j int) bool { return p[i].X < p[j].X })
	}
	return keys, points
}

// distinct counts different x of sorted points.
func distinct(points []TrendPoint) int {
	n := 0
	for i := range points {
		if i == 0 || points[i].X != points[i-1].X {
			n++
		}
	}
	return n
}

func alongLength(results []Result, s series) []Trend {
	keys, points := classes(results, s,
		func(r *Result) string {
			return strings.TrimSuffix(fmt.Sprintf("beta %.10g, %s, %s", r.Beta, r.shape(), r.Group), ", ")
		},
		func(r *Result) float64 { return float64(r.Size[0]) })
	var out []Trend
	for _, k := range keys {
		p := points[k]
		if distinct(p) < fewestTrend {
			continue
		}
		t := Trend{Quantity: s.quantity, Observable: s.observable, Against: "length", Group: k, Points: p}
		t.Models = fitForms(sizeForms(len(results[p[0].Result].Size)), p)
		t.Regime = sizeRegime(&t)
		t.poor()
		out = append(out, t)
	}
	return out
}

func alongBeta(results []Result, s series) []Trend {
	keys, points := classes(results, s,
		func(r *Result) string {
			return strings.TrimSuffix(fmt.Sprintf("size %v, open %v, %s", r.Size, r.Open, r.Group), ", ")
		},
		func(r *Result) float64 { return r.Beta })
	var out []Trend
	for _, k := range keys {
		p := points[k]
		if distinct(p) < fewestTrend {
			continue
		}
		t := Trend{Quantity: s.quantity, Observable: s.observable, Against: "beta", Group: k, Points: p}
		t.Models = fitForms(betaForms, p)
		t.Regime = betaRegime(&t)
		t.poor()
		out = append(out, t)
	}
	return out
}

// alongXi sets a relaxation time against the correlation length of the first
// family and axis, over all beta and sizes of a group.
func alongXi(results []Result, s series) []Trend {
	xi := func(r *Result) float64 {
		for k := range r.Decay {
			if r.Decay[k].Xi.OK {
				return r.Decay[k].Xi.Value
			}
		}
		return 0
	}
	var with []Result
	var index []int
	for i := range results {
		if xi(&results[i]) > 0 {
			with = append(with, results[i])
			index = append(index, i)
		}
	}
	keys, points := classes(with, s, func(r *Result) string { return r.Group }, xi)
	var out []Trend
	for _, k := range keys {
		p := points[k]
		if distinct(p) < fewestTrend {
			continue
		}
		for i := range p {
			p[i].Result = index[p[i].Result]
		}
		t := Trend{Quantity: s.quantity, Observable: s.observable, Against: "xi", Group: k, Points: p}
		t.Models = fitForms(powerForms, p)
		t.Regime = "time and length side by side; a short xi is necessary, not sufficient, for fast mixing"
		t.poor()
		out = append(out, t)
	}
	return out
}

// poor warns if no form fits: the best chi^2 exceeds its degrees of freedom by
// more than four of its standard deviations.
func (t *Trend) poor() {
	if len(t.Models) == 0 {
		return
	}
	m := t.Models[0]
	if excess := m.Chi2 - float64(m.Dof); excess > 4*math.Sqrt(2*float64(m.Dof)) {
		t.Warnings = append(t.Warnings, warn(codePoorFit, "no form fits: the best, %s, has chi^2 = %.1f for %d degrees of freedom", m.Name, m.Chi2, m.Dof))
	}
}

// A regime is named from this weight on; "flat" needs an exponent that is zero
// within this error.
const (
	decisive = 0.9
	flatness = 0.15
)

// sizeRegime puts the weights into words that do not overclaim.
func sizeRegime(t *Trend) string {
	if len(t.Models) == 0 {
		return "too few sizes to fit"
	}
	least, most := t.Points[0].X, t.Points[len(t.Points)-1].X
	kinds := map[string]float64{}
	for _, m := range t.Models {
		kinds[kindOf(m.Name)] += m.Weight
	}
	span := fmt.Sprintf("over L = %g to %g", least, most)
	if t.Quantity == "xi" {
		if kinds["constant"] > decisive {
			return "the same at all sizes " + span
		}
		return "changes with the size " + span + ": not yet the length of a large lattice"
	}
	if z, ok := t.exponent(); ok && t.Models[0].Name == "constant" && math.Abs(z.Value) < 2*z.Err && z.Err < flatness {
		return fmt.Sprintf("flat %s within errors (a power of L would have exponent %s): consistent with a gap that stays open, as far as this observable sees; it does not show rapid mixing",
			span, withError(z.Value, z.Err))
	}
	growth := kinds["power"] + kinds["exponential"] + kinds["logarithm"] + kinds["saturation"]
	switch {
	case growth > decisive && t.Points[len(t.Points)-1].Y < t.Points[0].Y:
		return "depends on the size but does not grow " + span + ": consistent with a gap that stays open, as far as this observable sees"
	case kinds["power"] > decisive:
		return "grows like a power of L " + span
	case kinds["exponential"] > decisive:
		return "grows exponentially " + span
	case kinds["logarithm"] > decisive:
		return "grows like ln L " + span
	case kinds["saturation"] > decisive:
		return "grows, then saturates " + span + ": the gap may stay open beyond"
	}
	var open []string
	for _, m := range t.Models {
		if m.Weight > 0.05 {
			open = append(open, m.Name)
		}
	}
	return "these sizes and errors do not decide between " + strings.Join(open, ", ")
}

// exponent is z of the fitted power.
func (t *Trend) exponent() (Parameter, bool) {
	for _, m := range t.Models {
		if m.Name == "power" {
			return m.Parameters[1], true
		}
	}
	return Parameter{}, false
}

func kindOf(name string) string {
	switch {
	case strings.HasPrefix(name, "exponential"):
		return "exponential"
	case name == "power, then saturation":
		return "saturation"
	case strings.HasPrefix(name, "power"):
		return "power"
	}
	return name
}

func betaRegime(t *Trend) string {
	if len(t.Models) == 0 {
		return "too few temperatures to fit"
	}
	best := t.Models[0]
	span := fmt.Sprintf("over beta = %.6g to %.6g", t.Points[0].X, t.Points[len(t.Points)-1].X)
	if best.Weight <= decisive {
		var open []string
		for _, m := range t.Models {
			if m.Weight > 0.05 {
				open = append(open, m.Name)
			}
		}
		return "these temperatures and errors do not decide between " + strings.Join(open, ", ")
	}
	switch best.Name {
	case "constant":
		return "the same at all temperatures " + span
	case "Arrhenius":
		return fmt.Sprintf("Arrhenius %s, with activation energy %s", span, withError(best.Parameters[1].Value, best.Parameters[1].Err))
	}
	return "grows faster than Arrhenius " + span
}
