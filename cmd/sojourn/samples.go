package main

import (
	"fmt"
	"math"
	"strings"

	"sojourn/analysis"
	"sojourn/observables/table"
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

// The JSON of samples.

type samplesJSON struct {
	Points        []int              `json:"points"`
	Beta          float64            `json:"beta"`
	Length        int                `json:"length"`
	Size          []int              `json:"size"`
	Scan          map[string]string  `json:"scan,omitempty"`
	Samples       int                `json:"samples"`
	EnergyPerSite *float64           `json:"energy_per_site,omitempty"`
	EnergyErr     *float64           `json:"energy_per_site_err,omitempty"`
	Observables   []sampledJSON      `json:"observables"`
	SlowMode      sampledTimeJSON    `json:"slow_mode"`
	Curves        []sampledCurveJSON `json:"curves"`
	Warnings      []warningJSON      `json:"warnings"`
}

type sampledJSON struct {
	Name        string          `json:"name"`
	Mean        *float64        `json:"mean,omitempty"`
	MeanErr     *float64        `json:"mean_err,omitempty"`
	Variance    *float64        `json:"variance,omitempty"`
	VarianceErr *float64        `json:"variance_err,omitempty"`
	TauInitial  sampledTimeJSON `json:"tau_initial"`
	TauInt      sampledTimeJSON `json:"tau_int"`
}

type sampledTimeJSON struct {
	MeanLn       *float64 `json:"mean_ln,omitempty"`
	MeanLnErr    *float64 `json:"mean_ln_err,omitempty"`
	MedianLn     *float64 `json:"median_ln,omitempty"`
	MedianLnErr  *float64 `json:"median_ln_err,omitempty"`
	MedianLnLow  *float64 `json:"median_ln_low,omitempty"`
	MedianLnHigh *float64 `json:"median_ln_high,omitempty"`
	Typical      *float64 `json:"typical,omitempty"`
	TypicalErr   *float64 `json:"typical_err,omitempty"`
	Spread       *float64 `json:"spread_ln,omitempty"`
	Measured     int      `json:"measured"`
	TooSlow      int      `json:"too_slow"`
}

type sampledCurveJSON struct {
	F             string    `json:"f"`
	G             string    `json:"g"`
	Times         []float64 `json:"times"`
	Covariance    []float64 `json:"covariance"`
	CovarianceErr []float64 `json:"covariance_err"`
}

func jsonOfSamples(s *sampled, f *findings) samplesJSON {
	p := &f.points[s.points[0]]
	j := samplesJSON{
		Beta: p.beta, Length: p.size[0], Size: p.size, Samples: s.summary.Samples,
		Observables: []sampledJSON{}, SlowMode: jsonOfSampledTime(&s.summary.SlowMode),
		Curves: []sampledCurveJSON{}, Warnings: jsonOfWarnings(s.summary.Warnings),
	}
	for _, n := range s.points {
		j.Points = append(j.Points, f.points[n].point)
	}
	for _, x := range s.scan {
		if j.Scan == nil {
			j.Scan = map[string]string{}
		}
		j.Scan[x.name] = x.value
	}
	j.EnergyPerSite, j.EnergyErr = valueAndError(s.summary.EnergyPerSite)
	for i := range s.summary.Observables {
		o := &s.summary.Observables[i]
		x := sampledJSON{Name: o.Name, TauInitial: jsonOfSampledTime(&o.Initial), TauInt: jsonOfSampledTime(&o.Integrated)}
		x.Mean, x.MeanErr = valueAndError(o.Mean)
		x.Variance, x.VarianceErr = valueAndError(o.Variance)
		j.Observables = append(j.Observables, x)
	}
	for _, c := range s.summary.Curves {
		if len(c.C) > 0 {
			j.Curves = append(j.Curves, sampledCurveJSON{c.F, c.G, c.Times, c.C, c.Err})
		}
	}
	return j
}

func jsonOfSampledTime(t *analysis.SampledTime) sampledTimeJSON {
	j := sampledTimeJSON{Measured: t.Measured, TooSlow: t.TooSlow}
	j.MeanLn, j.MeanLnErr = valueAndError(t.MeanLn)
	j.MedianLn, j.MedianLnErr = valueAndError(t.MedianLn)
	if t.MedianLn.OK {
		j.MedianLnLow, j.MedianLnHigh = number(t.MedianLn.Low), number(t.MedianLn.High)
	}
	j.Typical, j.TypicalErr = valueAndError(t.Typical)
	if t.MeanLn.OK && t.MeanLn.Units > 1 {
		j.Spread = number(t.Spread)
	}
	return j
}

// sampleTables are the tables in fits/ about samples taken together. Their rows
// bear point, key and sample of the first.
var sampleTables = []fitTable{
	{
		name: "samples", doc: "one observable over the samples of random couplings of a point, which bears the number of the first sample",
		columns: []table.Column{
			text("observable", "name of the observable; slow mode for the time of the slow modes"),
			integer("samples", "", "samples of random couplings"),
			integer("measured", "", "samples that have a tau_int"),
			integer("too_slow", "", "samples whose tau_int is too long for the run"),
			optional("mean", unitValue, "mean over samples of the mean"),
			optional("mean_err", unitValue, "its standard error, from sample to sample"),
			optional("mean_ln_tau_int", "ln("+unitTime+")", "mean over samples of ln tau_int"),
			optional("mean_ln_tau_int_err", "ln("+unitTime+")", "its standard error, from sample to sample"),
			optional("median_ln_tau_int", "ln("+unitTime+")", "median over samples of ln tau_int"),
			optional("median_ln_tau_int_err", "ln("+unitTime+")", "its standard error"),
			optional("median_ln_tau_int_low", "ln("+unitTime+")", "lower end of its 95 % interval"),
			optional("median_ln_tau_int_high", "ln("+unitTime+")", "upper end of its 95 % interval; missing if unbounded"),
			optional("tau_int_typical", unitTime, "exp of the mean of ln tau_int"),
			optional("tau_int_typical_err", unitTime, "its standard error"),
			optional("spread_ln_tau_int", "ln("+unitTime+")", "standard deviation of ln tau_int from sample to sample, freed of the errors of single samples"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for k := range f.samples {
				s := &f.samples[k]
				first := &f.points[s.points[0]]
				for i := range s.summary.Observables {
					o := &s.summary.Observables[i]
					row(first, sampleRow(o.Name, s.summary.Samples, o.Mean, &o.Integrated)...)
				}
				row(first, sampleRow("slow mode", s.summary.Samples, analysis.Estimate{}, &s.summary.SlowMode)...)
			}
		},
	},
	{
		name: "sample_curves", doc: "one pair of observables at one time difference: the mean covariance over samples of random couplings",
		columns: []table.Column{
			text("f", "name of the first observable"),
			text("g", "name of the second observable"),
			double("time", unitTime, "time difference"),
			double("covariance", "f g", "mean over samples of C_fg(time)"),
			double("covariance_err", "f g", "its standard error, from sample to sample"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for k := range f.samples {
				s := &f.samples[k]
				for _, c := range s.summary.Curves {
					for i := range c.C {
						row(&f.points[s.points[0]], c.F, c.G, c.Times[i], c.C[i], c.Err[i])
					}
				}
			}
		},
	},
}

func sampleRow(name string, samples int, mean analysis.Estimate, t *analysis.SampledTime) []any {
	row := append([]any{name, samples, t.Measured, t.TooSlow}, valueErr(mean)...)
	row = append(append(row, valueErr(t.MeanLn)...), valueErr(t.MedianLn)...)
	var low, high, spread any
	if t.MedianLn.OK {
		low, high = orMissing(t.MedianLn.Low), orMissing(t.MedianLn.High)
	}
	if t.MeanLn.OK && t.MeanLn.Units > 1 && !math.IsNaN(t.Spread) {
		spread = t.Spread
	}
	return append(append(append(row, low, high), valueErr(t.Typical)...), spread)
}
