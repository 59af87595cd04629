package main

import (
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"sojourn/analysis"
)

// pageWidth is the width that the print is laid out for, in characters.
const pageWidth = 98

// writeReport lays out the findings for people: a heading and a table of
// observables for each point, then trends, then how far all this can be trusted.
func writeReport(w io.Writer, f *findings) error {
	var b strings.Builder
	units, jumps := 0, 0.0
	for i := range f.points {
		units += f.points[i].trajectories
		jumps += f.points[i].jumps
	}
	head := f.dir
	if f.title != "" {
		head += ": " + f.title
	}
	fmt.Fprintf(&b, "%s\n%s, %s, %s jumps\n", head, plural(len(f.points), "point"), plural(units, "trajectory"), count(jumps))
	if f.missing > 0 {
		fmt.Fprintf(&b, "Incomplete: %s not yet run; everything below rests on the others.\n", plural(f.missing, "unit"))
	}
	for i := range f.points {
		b.WriteByte('\n')
		writePoint(&b, &f.points[i])
	}
	if len(f.comparison.Trends) > 0 {
		b.WriteString("\nTrends\n")
		for i := range f.comparison.Trends {
			writeTrend(&b, &f.comparison.Trends[i])
		}
	}
	writeWarnings(&b, "study", f.comparison.Warnings)
	writeOverview(&b, f)
	writeCaution(&b, f)
	_, err := io.WriteString(w, b.String())
	return err
}

func writePoint(b *strings.Builder, p *finding) {
	head := fmt.Sprintf("%s %s, beta %s", p.model, sizeText(p.size), shortest(p.beta))
	for _, s := range p.scan {
		head += ", " + s.name + " " + s.value
	}
	tail := fmt.Sprintf("point %d", p.point)
	fmt.Fprintf(b, "%s%s%s\n", head, strings.Repeat(" ", max(2, pageWidth-len(head)-len(tail))), tail)
	r := &p.result
	line := fmt.Sprintf("%s of %s from start %s, %s jumps", plural(p.trajectories, "trajectory"), shortest(p.span), p.start, count(p.jumps))
	if p.seconds > 0 {
		line += fmt.Sprintf(" at %s", speed(p.jumps/p.seconds))
	}
	if r.EnergyPerSite.OK {
		line += ", energy per site " + estimate(r.EnergyPerSite)
	}
	fmt.Fprintf(b, "  %s\n", line)
	if !r.Equilibrated {
		b.WriteString("  NOT EQUILIBRATED: do not use the values below as equilibrium values\n")
	}
	t := newSheet("observable", "mean", "tau_initial", "tau_int", "tau_slowest", floorHead(r))
	for i := range r.Observables {
		o := &r.Observables[i]
		t.add(o.Name, estimate(o.Mean), estimate(o.Initial), estimate(o.Integrated), bound(o.SlowestBound), interval(o.SlowestInterval))
	}
	t.write(b, "  ")
	writeSlowMode(b, &r.SlowMode)
	writeDecays(b, r.Decay)
	for i := range r.Approach {
		writeApproach(b, &r.Approach[i])
	}
	writePointWarnings(b, r)
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
			others = append(others, s.name+" "+s.value)
		}
		name, tau := "", ""
		slowest := -1
		for k := range r.Observables {
			if x := &r.Observables[k]; x.Integrated.OK && (slowest < 0 || x.Integrated.Value > r.Observables[slowest].Integrated.Value) {
				slowest = k
				name, tau = x.Name, estimate(x.Integrated)
			}
		}
		xi, mark, warnings := "", "", 0
		for k := range r.Decay {
			if r.Decay[k].Xi.OK {
				xi = estimate(r.Decay[k].Xi)
				break
			}
		}
		eachWarning(r, func(string, analysis.Warning) { warnings++ })
		if warnings > 0 {
			mark = strconv.Itoa(warnings)
		}
		if !r.Equilibrated {
			mark += " not equilibrated"
		}
		slow := ""
		if r.SlowMode.Tau.OK {
			slow = estimate(r.SlowMode.Tau)
		}
		t.add(strconv.Itoa(p.point), shortest(p.beta), sizeText(p.size), strings.Join(others, ", "), name, tau, slow, gapBound(r), xi, mark)
	}
	t.write(b, "  ")
}

// gapBound is the best lower bound on 1/gap that a point gives.
func gapBound(r *analysis.Result) string {
	best := analysis.Bound{}
	consider := func(x analysis.Bound) {
		if x.OK && (!best.OK || x.Value > best.Value) {
			best = x
		}
	}
	// Only the bounds of the slow mode: the largest of several bounds at 95 %
	// would not have that confidence.
	consider(r.SlowMode.Bound)
	if !best.OK {
		consider(r.SlowMode.RayleighBound)
	}
	if !best.OK {
		return ""
	}
	return bound(best)
}

// floorHead is the head of the column of intervals: the share of the variance
// that they assume in the slowest mode.
func floorHead(r *analysis.Result) string {
	for i := range r.Observables {
		if o := &r.Observables[i]; o.SlowestInterval.OK {
			return fmt.Sprintf("if weight > %s %%", shortest(100*o.WeightFloor))
		}
	}
	return "if weight"
}

func writeSlowMode(b *strings.Builder, m *analysis.SlowMode) {
	var parts []string
	if m.Tau.OK {
		parts = append(parts, "tau "+estimate(m.Tau))
	}
	if m.Bound.OK {
		parts = append(parts, fmt.Sprintf("1/gap %s (%s %%)", bound(m.Bound), shortest(100*m.Bound.Confidence)))
	}
	if m.RayleighBound.OK {
		parts = append(parts, fmt.Sprintf("Rayleigh quotient %s", bound(m.RayleighBound)))
	}
	if len(parts) == 0 {
		return
	}
	if len(m.Shares) > 0 {
		var shares []string
		for _, s := range m.Shares {
			if s.Value >= 0.01 {
				shares = append(shares, s.Name+" "+strconv.FormatFloat(s.Value, 'f', 2, 64))
			}
		}
		parts = append(parts, "made of "+strings.Join(shares, ", "))
	}
	writeNote(b, "slow mode", strings.Join(parts, "; "))
}

// writeDecays prints the correlation lengths of each family, axis by axis.
func writeDecays(b *strings.Builder, list []analysis.Decay) {
	for i := 0; i < len(list); {
		j := i
		var plain, second []string
		for ; j < len(list) && list[j].Of == list[i].Of; j++ {
			d := &list[j]
			along := " along " + axisName(d.Axis)
			switch {
			case d.NoDecay:
				plain = append(plain, "no decay"+along)
			case d.Xi.OK:
				plain = append(plain, "xi "+estimate(d.Xi)+along)
			default:
				plain = append(plain, "no xi"+along)
			}
			if d.SecondMoment.OK {
				second = append(second, estimate(d.SecondMoment))
			}
		}
		text := list[i].Of + ": " + strings.Join(plain, ", ")
		if len(second) > 0 {
			text += "; by second moment " + strings.Join(second, ", ")
		}
		writeNote(b, "in space", text)
		i = j
	}
}

func writeApproach(b *strings.Builder, a *analysis.Approach) {
	if !a.Time.OK && !a.Tau.OK {
		return
	}
	text := a.Observable + " from start " + a.Start + ":"
	if a.Time.OK {
		text += fmt.Sprintf(" within %s %% of its limit after %s", shortest(100*a.Epsilon), estimate(a.Time))
	}
	if a.Tau.OK {
		if a.Time.OK {
			text += ","
		}
		text += " last decay seen has tau " + estimate(a.Tau)
	}
	writeNote(b, "approach", text)
}

func writeTrend(b *strings.Builder, t *analysis.Trend) {
	head := t.Quantity
	if t.Observable != "" {
		head += " of " + t.Observable
	}
	head += " against " + t.Against
	if t.Group != "" {
		head += ", " + t.Group
	}
	fmt.Fprintf(b, "  %s\n", head)
	points := make([]string, len(t.Points))
	for i, p := range t.Points {
		points[i] = fmt.Sprintf("%s at %s", withError(p.Y, p.Err), shortest(p.X))
	}
	writeNote(b, "", strings.Join(points, ", "))
	for i := range t.Models {
		m := &t.Models[i]
		if m.Weight < 0.05 && i > 0 {
			break // sorted by weight
		}
		text := fmt.Sprintf("%s (weight %.2f)", m.Name, m.Weight)
		for _, p := range m.Parameters {
			text += fmt.Sprintf(", %s = %s", p.Name, withError(p.Value, p.Err))
		}
		writeNote(b, "", text)
	}
	if t.Regime != "" {
		writeNote(b, "", t.Regime)
	}
	writeWarnings(b, "trend", t.Warnings)
}

// writeNote prints a labelled paragraph under a point.
func writeNote(b *strings.Builder, label, text string) {
	const column = 10
	for i, line := range wrap(text, pageWidth-4-column, "") {
		if i > 0 {
			label = ""
		}
		b.WriteString(strings.TrimRight(fmt.Sprintf("  %-*s  %s", column, label, line), " "))
		b.WriteByte('\n')
	}
}

func writeWarnings(b *strings.Builder, about string, warnings []analysis.Warning) {
	for _, w := range warnings {
		writeWarning(b, about, w)
	}
}

// writePointWarnings prints every warning about a point, those that say the same
// of several things once.
func writePointWarnings(b *strings.Builder, r *analysis.Result) {
	var order []analysis.Warning
	about := map[analysis.Warning][]string{}
	eachWarning(r, func(what string, w analysis.Warning) {
		if about[w] == nil {
			order = append(order, w)
		}
		about[w] = append(about[w], what)
	})
	for _, w := range order {
		writeWarning(b, strings.Join(about[w], ", "), w)
	}
}

func writeWarning(b *strings.Builder, about string, w analysis.Warning) {
	for i, line := range wrap(fmt.Sprintf("%s: %s [%s]", about, w.Text, w.Code), pageWidth-4, "  ") {
		mark := "! "
		if i > 0 {
			mark = "  "
		}
		fmt.Fprintf(b, "  %s%s\n", mark, line)
	}
}

// writeCaution says once what the numbers above do not mean.
func writeCaution(b *strings.Builder, f *findings) {
	b.WriteString("\nHow to read this\n")
	say := func(text string) {
		for i, line := range wrap(text, pageWidth-4, "  ") {
			mark := "- "
			if i > 0 {
				mark = "  "
			}
			fmt.Fprintf(b, "  %s%s\n", mark, strings.TrimLeft(line, " "))
		}
	}
	say("tau_initial and tau_int belong to the observable, with one standard error; in each row tau_initial <= tau_int <= the slowest time in the observable <= 1/gap.")
	say("tau_slowest is a lower bound (95 %). The interval beside it holds only if the slowest mode carries that share of the observable's variance.")
	say("No finite set of observables certifies the gap: every relaxation time from data is a lower bound on 1/gap.")
	if hasDecay(f) {
		say("A short xi is necessary, not sufficient, for fast mixing: do not read it as evidence that the lattice relaxes fast.")
	}
	if n := warned(f); n > 0 {
		say(fmt.Sprintf("Lines marked ! say which numbers are not to be trusted, and why: %s.", plural(n, "point")))
	}
}

func hasDecay(f *findings) bool {
	for i := range f.points {
		if len(f.points[i].result.Decay) > 0 {
			return true
		}
	}
	return false
}

// warned counts the points with at least one warning.
func warned(f *findings) int {
	n := 0
	for i := range f.points {
		r := &f.points[i].result
		k := 0
		eachWarning(r, func(string, analysis.Warning) { k++ })
		if k > 0 || !r.Equilibrated {
			n++
		}
	}
	return n
}

func estimate(e analysis.Estimate) string {
	switch {
	case !e.OK:
		return "-"
	case e.Units < 2:
		return plain(e.Value)
	}
	return withError(e.Value, e.Err)
}

func bound(x analysis.Bound) string {
	if !x.OK {
		return "-"
	}
	return "> " + threeDigits(x.Value)
}

func interval(x analysis.Interval) string {
	switch {
	case !x.OK:
		return ""
	case math.IsInf(x.High, 1):
		return "> " + threeDigits(x.Low)
	}
	return threeDigits(x.Low) + " to " + threeDigits(x.High)
}

// threeDigits prints a bound, which has no error of its own.
func threeDigits(x float64) string {
	if x >= 100 && x < 1e6 {
		return strconv.FormatFloat(x, 'f', 0, 64)
	}
	return shortExponent(strconv.FormatFloat(x, 'g', 3, 64))
}

func sizeText(size []int) string {
	s := make([]string, len(size))
	for i, n := range size {
		s[i] = strconv.Itoa(n)
	}
	return strings.Join(s, " x ")
}

func axisName(axis int) string {
	if axis >= 0 && axis < 4 {
		return "xyzw"[axis : axis+1]
	}
	return "axis " + strconv.Itoa(axis)
}

// plural prints a number of things: 1 point, 2 points, 3 trajectories.
func plural(n int, thing string) string {
	if n != 1 {
		if s, ok := strings.CutSuffix(thing, "y"); ok {
			thing = s + "ie"
		}
		thing += "s"
	}
	return strconv.Itoa(n) + " " + thing
}
