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
	said := findRepeated(f)
	for i := range f.points {
		if f.samples != nil {
			break
		}
		b.WriteByte('\n')
		writePoint(&b, &f.points[i], said)
	}
	writeSamples(&b, f)
	writeAgainst(&b, f)
	writeTrends(&b, f)
	writeOverview(&b, f)
	writeWarnings(&b, f, said)
	writeCaution(&b, f)
	_, err := io.WriteString(w, b.String())
	return err
}

func writePoint(b *strings.Builder, p *finding, said *repeated) {
	head := fmt.Sprintf("%s %s, beta %s", p.model, sizeText(p.size), shortest(p.beta))
	for _, s := range p.scan {
		head += ", " + s.String()
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
	writeApproaches(b, r.Approach)
	if r.Mixing.Text != "" {
		writeNote(b, "mixing", r.Mixing.Text)
	}
	writeAdvice(b, r)
	said.write(b, r)
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
	if m.RayleighBound.OK && !m.Bound.OK {
		parts = append(parts, fmt.Sprintf("1/gap %s (%s %%, Rayleigh quotient)", bound(m.RayleighBound), shortest(100*m.RayleighBound.Confidence)))
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
