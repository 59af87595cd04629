package main

import (
	"fmt"
	"strings"

	"sojourn/analysis"
)

// repeated are the warnings that several points have in the same words: they
// are printed once, with their points.
type repeated struct {
	order  []said
	points map[said][]int // numbers of the points
}

// said is a warning and what it is about.
type said struct {
	about string
	analysis.Warning
}

// fewestRepeats is the number of points from which a warning is printed once for
// all of them.
const fewestRepeats = 3

func findRepeated(f *findings) *repeated {
	r := &repeated{points: map[said][]int{}}
	for i := range f.points {
		for _, s := range sayings(&f.points[i].result) {
			if r.points[s] == nil {
				r.order = append(r.order, s)
			}
			r.points[s] = append(r.points[s], f.points[i].point)
		}
	}
	return r
}

// sayings are the warnings about what is printed of a point, those that say the
// same of several things taken together.
func sayings(r *analysis.Result) []said {
	var order []analysis.Warning
	about := map[analysis.Warning][]string{}
	shown := map[*analysis.Approach]bool{}
	for _, a := range shownApproaches(r.Approach) {
		shown[a] = true
	}
	eachWarningBut(r, func(a *analysis.Approach) bool { return !shown[a] }, func(what string, w analysis.Warning) {
		if about[w] == nil {
			order = append(order, w)
		}
		about[w] = append(about[w], what)
	})
	out := make([]said, len(order))
	for i, w := range order {
		out[i] = said{strings.Join(about[w], ", "), w}
	}
	return out
}

// write prints the warnings that are a point's own.
func (r *repeated) write(b *strings.Builder, result *analysis.Result) {
	for _, s := range sayings(result) {
		if len(r.points[s]) < fewestRepeats {
			writeWarning(b, s.about, s.Warning)
		}
	}
}

// writeWarnings prints the warnings about the study and those that many points
// share.
func writeWarnings(b *strings.Builder, f *findings, r *repeated) {
	first := true
	write := func(about string, w analysis.Warning) {
		if first {
			b.WriteString("\nWarnings about several points\n")
			first = false
		}
		writeWarning(b, about, w)
	}
	for _, w := range f.comparison.Warnings {
		write("study", w)
	}
	for _, s := range r.order {
		if len(r.points[s]) < fewestRepeats {
			continue
		}
		who := ranges(r.points[s])
		if len(r.points[s]) == len(f.points) {
			who = "all points"
		}
		write(who+": "+s.about, s.Warning)
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
	if f.samples != nil {
		say("Errors of averages over samples of random couplings come from how samples differ. The typical time is exp of the mean of ln tau, spread the standard deviation of ln tau beyond the errors of single samples; each sample stands in fits/ and in the JSON.")
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
		if len(sayings(r)) > 0 || !r.Equilibrated {
			n++
		}
	}
	return n
}
