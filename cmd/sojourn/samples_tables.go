package main

import (
	"math"

	"sojourn/analysis"
	"sojourn/observables/table"
)

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
