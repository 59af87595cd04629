package main

import (
	"fmt"
	"strings"

	"sojourn/analysis"
)

// sampleName is the scanned parameter that numbers the samples of random
// couplings.
const sampleName = "hamiltonian.disorder.sample"

// sampled is the points of a study that differ in nothing but the sample, and
// what they say together.
type sampled struct {
	points  []int     // into findings.points
	scan    []setting // scanned physical parameters other than beta, size and sample
	summary analysis.SampleSummary
}

// overSamples puts the samples of each point together, in order of first
// appearance; nil if no point has several.
func overSamples(points []finding) []sampled {
	var out []sampled
	at := map[string]int{}
	several := false
	for i := range points {
		p := &points[i]
		var others []setting
		random := false
		for _, s := range p.scan {
			if s.name == sampleName {
				random = true
			} else {
				others = append(others, s)
			}
		}
		if !random {
			continue
		}
		key := fmt.Sprint(p.model, p.beta, p.size, p.span, len(p.result.Observables), others)
		k, known := at[key]
		if !known {
			k = len(out)
			at[key] = k
			out = append(out, sampled{scan: others})
		}
		several = several || known
		out[k].points = append(out[k].points, i)
	}
	if !several {
		return nil
	}
	for k := range out {
		results := make([]analysis.Result, len(out[k].points))
		for i, n := range out[k].points {
			results[i] = points[n].result
		}
		out[k].summary = analysis.OverSamples(results)
	}
	return out
}

// trendsOverSamples fits trends to typical times in place of those of single
// samples. The points of a trend are the first samples.
func trendsOverSamples(f *findings) []analysis.Trend {
	typical := make([]analysis.Result, len(f.samples))
	for k := range f.samples {
		s := &f.samples[k]
		typical[k] = s.summary.Typical(&f.points[s.points[0]].result)
		typical[k].Group = settingsText(s.scan)
	}
	trends := analysis.Compare(typical).Trends
	for i := range trends {
		for j := range trends[i].Points {
			p := &trends[i].Points[j]
			p.Result = f.samples[p.Result].points[0]
		}
	}
	return trends
}

func settingsText(list []setting) string {
	words := make([]string, len(list))
	for i, s := range list {
		words[i] = s.String()
	}
	return strings.Join(words, ", ")
}

// String is the parameter as a heading has it.
func (s setting) String() string {
	if s.name == sampleName {
		return "sample " + s.value
	}
	return s.name + " " + s.value
}

// writeSamples prints what samples say together; the points one by one stand in
// fits/ and in the JSON.
func writeSamples(b *strings.Builder, f *findings) {
	for k := range f.samples {
		s := &f.samples[k]
		p := &f.points[s.points[0]]
		head := fmt.Sprintf("%s %s, beta %s", p.model, sizeText(p.size), shortest(p.beta))
		if len(s.scan) > 0 {
			head += ", " + settingsText(s.scan)
		}
		jumps, trajectories := 0.0, 0
		for _, n := range s.points {
			jumps += f.points[n].jumps
			trajectories += f.points[n].trajectories
		}
		tail := fmt.Sprintf("points %d to %d", p.point, f.points[s.points[len(s.points)-1]].point)
		fmt.Fprintf(b, "\n%s%s%s\n", head, strings.Repeat(" ", max(2, pageWidth-len(head)-len(tail))), tail)
		line := fmt.Sprintf("%s of random couplings, %s of %s from start %s, %s jumps", plural(s.summary.Samples, "sample"),
			plural(trajectories, "trajectory"), shortest(p.span), p.start, count(jumps))
		if s.summary.EnergyPerSite.OK {
			line += ", energy per site " + estimate(s.summary.EnergyPerSite)
		}
		for i, l := range wrap(line, pageWidth-2, "") {
			if i > 0 {
				l = "  " + l
			}
			fmt.Fprintf(b, "  %s\n", l)
		}
		t := newSheet("observable", "mean", "typical tau_int", "mean ln tau_int", "median ln tau_int", "spread", "fastest", "slowest")
		for i := range s.summary.Observables {
			o := &s.summary.Observables[i]
			addTimes(t, o.Name, estimate(o.Mean), &o.Integrated)
		}
		if m := &s.summary.SlowMode; m.Measured > 0 {
			addTimes(t, "slow mode", "", m)
		}
		t.write(b, "  ")
		for _, w := range s.summary.Warnings {
			writeWarning(b, "samples", w)
		}
	}
}

func addTimes(t *sheet, name, mean string, x *analysis.SampledTime) {
	cells := []string{name, mean, estimate(x.Typical), estimate(x.MeanLn), estimate(x.MedianLn), "", "", ""}
	if x.MeanLn.OK && x.MeanLn.Units > 1 {
		cells[5] = threeDigits(x.Spread)
	}
	if x.Measured > 0 {
		cells[6], cells[7] = threeDigits(x.Low), threeDigits(x.High)
	}
	if x.TooSlow > 0 {
		cells[7] = "not measured"
	}
	t.add(cells...)
}
