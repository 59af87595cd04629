package main

import (
	"fmt"
	"strconv"
	"strings"

	"sojourn/analysis"
)

// writeTrends prints how the slow mode goes with size and temperature, or where
// it could not be had the integrated times. All other trends are only counted:
// they stand in fits/trends.
func writeTrends(b *strings.Builder, f *findings) {
	list := f.comparison.Trends
	shown := func(quantity string) bool {
		for i := range list {
			if list[i].Quantity == quantity && list[i].Against != "xi" {
				return true
			}
		}
		return false
	}
	quantity := "tau_slow_mode"
	if !shown(quantity) {
		quantity = "tau_int"
	}
	if !shown(quantity) {
		return
	}
	b.WriteString("\nTrends\n")
	others := 0
	for i := range list {
		t := &list[i]
		if t.Quantity != quantity || t.Against == "xi" {
			others++
			continue
		}
		writeTrend(b, t, f)
	}
	if others > 0 {
		fmt.Fprintf(b, "  %s of other quantities: fits/trends.parquet, or --json\n", plural(others, "trend"))
	}
}

func writeTrend(b *strings.Builder, t *analysis.Trend, f *findings) {
	head := "slow mode"
	if t.Quantity != "tau_slow_mode" {
		head = t.Quantity + " of " + t.Observable
	}
	head += " against " + t.Against
	if len(t.Points) > 0 {
		p := &f.points[t.Points[0].Result]
		fixed := []string{"size " + sizeText(p.size)}
		if t.Against == "length" {
			fixed = []string{"beta " + shortest(p.beta)}
		}
		for _, s := range p.scan {
			if s.name != sampleName || f.samples == nil {
				fixed = append(fixed, s.String())
			}
		}
		head += " at " + strings.Join(fixed, ", ")
	}
	points := make([]string, len(t.Points))
	for i, p := range t.Points {
		points[i] = fmt.Sprintf("%s at %s", withError(p.Y, p.Err), shortest(p.X))
	}
	text := head + ": " + strings.Join(points, ", ")
	if len(t.Models) > 0 {
		m := &t.Models[0] // sorted by weight
		text += fmt.Sprintf("; best form %s (weight %.2f)", m.Name, m.Weight)
		for _, p := range m.Parameters {
			text += fmt.Sprintf(", %s = %s", p.Name, withError(p.Value, p.Err))
		}
	}
	if t.Regime != "" {
		text += "; " + t.Regime
	}
	for i, line := range wrap(text, pageWidth-4, "    ") {
		if i == 0 {
			line = "  " + line
		}
		fmt.Fprintf(b, "%s\n", line)
	}
	for _, w := range t.Warnings {
		writeWarning(b, "trend", w)
	}
}

// writeOverview puts the slowest thing seen at each point side by side.
func writeOverview(b *strings.Builder, f *findings) {
	if len(f.points) < 2 {
		return
	}
	b.WriteString("\nOverview\n")
	t := newSheet("point", "beta", "size", "", "slowest observable", "tau_int", "slow mode", "1/gap", "xi", "!").text(2, 3, 4)
	for i := range f.points {
		p := &f.points[i]
		r := &p.result
		var others []string
		for _, s := range p.scan {
			others = append(others, s.String())
		}
		name, tau := "", ""
		slowest := -1
		for k := range r.Observables {
			if x := &r.Observables[k]; x.Integrated.OK && (slowest < 0 || x.Integrated.Value > r.Observables[slowest].Integrated.Value) {
				slowest = k
				name, tau = x.Name, estimate(x.Integrated)
			}
		}
		xi, mark := "", ""
		for k := range r.Decay {
			if r.Decay[k].Xi.OK {
				xi = estimate(r.Decay[k].Xi)
				break
			}
		}
		if n := len(sayings(r)); n > 0 {
			mark = strconv.Itoa(n)
		}
		if !r.Equilibrated {
			mark += " not equilibrated"
		}
		slow := ""
		if r.SlowMode.Tau.OK {
			slow = estimate(r.SlowMode.Tau)
		}
		t.add(strconv.Itoa(p.point), shortest(p.beta), sizeText(p.size), strings.Join(others, ", "), name, tau, slow, gapBound(r, slowest), xi, mark)
	}
	t.write(b, "  ")
}

// inSlowMode reports whether the observable took part in the slow mode.
func inSlowMode(r *analysis.Result, name string) bool {
	for _, s := range r.SlowMode.Shares {
		if s.Name == name {
			return true
		}
	}
	return false
}

// gapBound is the best lower bound on 1/gap that a point gives; slowest is the
// observable with the longest tau_int, -1 for none.
func gapBound(r *analysis.Result, slowest int) string {
	best := analysis.Bound{}
	consider := func(x analysis.Bound) {
		if x.OK && (!best.OK || x.Value > best.Value) {
			best = x
		}
	}
	// Not the largest of all bounds, which would lack their confidence: that of
	// the slow mode, and that of the observable with the longest tau_int where it
	// is no scalar, and so has no part in the slow mode.
	consider(r.SlowMode.Bound)
	if !best.OK {
		consider(r.SlowMode.RayleighBound)
	}
	if slowest >= 0 && !inSlowMode(r, r.Observables[slowest].Name) {
		consider(r.Observables[slowest].SlowestBound)
	}
	if !best.OK {
		return ""
	}
	return bound(best)
}
