package main

import (
	"sojourn/analysis"
	"sojourn/observables/archive"
	"sojourn/observables/table"
)

// fitFormat is the version of the layout of the tables in fits/.
const fitFormat = 1

// fitTable is one table in fits/: what its rows are, their columns after the
// leading ones, and how they are made.
type fitTable struct {
	name    string
	doc     string
	study   bool // rows belong to the study, not to a point: no leading columns
	columns []table.Column
	rows    func(f *findings, row func(p *finding, values ...any))
}

// Columns of estimates are missing where the estimate could not be made.
func optional(name, unit, meaning string) table.Column {
	return table.Column{Name: name, Type: table.Double, Unit: unit, Meaning: meaning, Optional: true}
}

func double(name, unit, meaning string) table.Column {
	return table.Column{Name: name, Type: table.Double, Unit: unit, Meaning: meaning}
}

func text(name, meaning string) table.Column {
	return table.Column{Name: name, Type: table.String, Meaning: meaning}
}

func integer(name, unit, meaning string) table.Column {
	return table.Column{Name: name, Type: table.Int32, Unit: unit, Meaning: meaning}
}

const (
	unitTime   = "1/rate"
	unitCells  = "cells"
	unitValue  = "f"
	unitEnergy = "energy"
)

// fitLeading are the columns that every table about points begins with; one for
// each scanned parameter follows.
var fitLeading = []table.Column{
	integer("point", "", "number of the point, in order of first appearance in the study"),
	text("point_key", "identifies the physical parameters, times and observables of the point"),
	double("beta", "1/energy", "inverse temperature"),
	integer("length", unitCells, "cells along the first axis"),
}

var fitTables = []fitTable{
	{
		name: "curves", doc: "one pair of observables at one time difference: the pooled covariance",
		columns: []table.Column{
			text("f", "name of the first observable"),
			text("g", "name of the second observable"),
			double("time", unitTime, "time difference"),
			double("covariance", "f g", "C_fg(time), corrected for the variance of the mean"),
			double("covariance_err", "f g", "its standard error, by leaving out one block at a time"),
			{Name: "pairs", Type: table.Int64, Meaning: "pairs of samples"},
			optional("rate", "rate", "effective rate -d ln C/dt up to the next time; f = g only"),
			optional("rate_err", "rate", "its standard error"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for i := range f.points {
				for _, c := range f.points[i].result.Curves {
					for k := range c.Times {
						var rate, rateErr any
						if k < len(c.Rate) && k < len(c.RateErr) && c.RateErr[k] >= 0 {
							rate, rateErr = c.Rate[k], c.RateErr[k]
						}
						row(&f.points[i], c.F, c.G, c.Times[k], c.C[k], c.Err[k], c.Pairs[k], rate, rateErr)
					}
				}
			}
		},
	},
	{
		name: "relaxation", doc: "one observable: its mean and its relaxation times",
		columns: []table.Column{
			text("observable", "name of the observable"),
			optional("mean", unitValue, "mean of the whole observable"),
			optional("mean_err", unitValue, "its standard error"),
			optional("variance", unitValue+"^2", "equilibrium variance C(0)"),
			optional("variance_err", unitValue+"^2", "its standard error"),
			optional("kurtosis", "", "fourth central moment over the squared variance"),
			optional("kurtosis_err", "", "its standard error"),
			optional("tau_initial", unitTime, "Var(f)/E(f,f): the inverse initial slope of C(t)/C(0)"),
			optional("tau_initial_err", unitTime, "its standard error"),
			optional("tau_int", unitTime, "integral of C(t)/C(0)"),
			optional("tau_int_err", unitTime, "its standard error"),
			optional("tau_int_low", unitTime, "lower end of its 95 % interval"),
			optional("tau_int_high", unitTime, "upper end of its 95 % interval"),
			optional("tau_int_model", unitTime, "the same from sums of exponentials; rests on the model"),
			optional("tau_int_model_err", unitTime, "its standard error"),
			optional("tau_single", unitTime, "relaxation time, where declared a single exponential"),
			optional("tau_single_err", unitTime, "its standard error"),
			optional("tau_slowest", unitTime, "slowest time that the data see, averaged over tails; estimates from below"),
			optional("tau_slowest_bound", unitTime, "with 95 % confidence the slowest time in the observable is longer"),
			optional("tau_slowest_low", unitTime, "lower end of its 95 % interval, if the slowest mode carries weight_floor"),
			optional("tau_slowest_high", unitTime, "upper end of that interval; missing if unbounded"),
			optional("weight_floor", "", "share of the variance that the interval assumes in the slowest mode"),
			optional("window", unitTime, "where the sum for tau_int stops"),
			optional("flips", "", "flips between the two wells of the observable, where it has two"),
			optional("flip_level", unitValue, "a flip leads from beyond +flip_level to beyond -flip_level, or back"),
			optional("tau_flips", unitTime, "relaxation time from the flips, T/(2 flips)"),
			optional("tau_flips_low", unitTime, "lower end of its 95 % interval"),
			optional("tau_flips_high", unitTime, "upper end of that interval"),
			optional("tau_flips_bound", unitTime, "with 95 % confidence the time from the flips is longer"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for i := range f.points {
				for k := range f.points[i].result.Observables {
					row(&f.points[i], relaxationRow(&f.points[i].result.Observables[k])...)
				}
			}
		},
	},
	{
		name: "slow_mode", doc: "one observable's part in the slow mode of the point's observables",
		columns: []table.Column{
			optional("tau", unitTime, "time of the slow mode, from the plateau of the generalised eigenvalue"),
			optional("tau_err", unitTime, "its standard error"),
			optional("tau_bound", unitTime, "one-sided lower bound on 1/gap"),
			optional("confidence", "", "confidence of the bound"),
			optional("tau_rayleigh", unitTime, "best Rayleigh quotient: a variational lower bound on 1/gap"),
			optional("tau_rayleigh_err", unitTime, "its standard error"),
			{Name: "observable", Type: table.String, Meaning: "name of the observable", Optional: true},
			optional("share", "", "squared correlation of the observable with the mode"),
			optional("share_err", "", "its standard error"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for i := range f.points {
				m := &f.points[i].result.SlowMode
				head := append(valueErr(m.Tau), boundOf(m.Bound), nil)
				if m.Bound.OK {
					head[3] = m.Bound.Confidence
				}
				head = append(head, valueErr(m.Rayleigh)...)
				if len(m.Shares) == 0 && (m.Tau.OK || m.Bound.OK || m.Rayleigh.OK) {
					row(&f.points[i], append(head, nil, nil, nil)...)
				}
				for _, s := range m.Shares {
					row(&f.points[i], append(append([]any{}, head...), s.Name, s.Value, s.Err)...)
				}
			}
		},
	},
	{
		name: "decay", doc: "the decay in space of one family along one axis",
		columns: []table.Column{
			text("of", "family or tracked operator"),
			integer("axis", "", "axis along which planes are apart, from 0"),
			optional("xi", unitCells, "correlation length of plane sums"),
			optional("xi_err", unitCells, "its standard error"),
			optional("xi_second_moment", unitCells, "correlation length by the second moment"),
			optional("xi_second_moment_err", unitCells, "its standard error"),
			optional("amplitude", "", "c in K(r) <= c K(0) exp(-r/xi)"),
			optional("amplitude_err", "", "its standard error"),
			integer("from", unitCells, "first distance that the fit rests on"),
			integer("to", unitCells, "last distance that the fit rests on"),
			integer("no_decay", "", "1 if the covariance does not decay within the lattice"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for i := range f.points {
				for _, d := range f.points[i].result.Decay {
					values := append([]any{d.Of, d.Axis}, valueErr(d.Xi)...)
					values = append(values, valueErr(d.SecondMoment)...)
					values = append(values, valueErr(d.Amplitude)...)
					row(&f.points[i], append(values, d.From, d.To, bit(d.NoDecay))...)
				}
			}
		},
	},
	{
		name: "spatial", doc: "the covariance in space at one displacement",
		columns: []table.Column{
			text("of", "family or tracked operator"),
			integer("axis", "", "-1 for pairs of terms; else pairs of plane sums, planes apart along this axis"),
			{Name: "displacement", Type: table.Int32List, Unit: unitCells, Meaning: "by axis; for plane sums one number, the distance"},
			double("covariance", "", "covariance of the two terms, or plane sums"),
			double("covariance_err", "", "its standard error"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for i := range f.points {
				for _, c := range f.points[i].result.Spatial {
					for k, d := range c.Displacements {
						row(&f.points[i], c.Of, c.Axis, int32s(d), c.K[k], c.Err[k])
					}
				}
			}
		},
	},
	{
		name: "approach", doc: "the mean of one observable at one time since a prepared start",
		columns: []table.Column{
			text("observable", "name of the observable"),
			text("start", "state in which the trajectories began; up-down: half the difference of the two"),
			double("time", unitTime, "time since the start"),
			double("mean", unitValue, "mean over trajectories"),
			double("mean_err", unitValue, "its standard error"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for i := range f.points {
				for _, a := range f.points[i].result.Approach {
					for k := range a.Times {
						row(&f.points[i], a.Observable, a.Start, a.Times[k], a.Mean[k], a.Err[k])
					}
				}
			}
		},
	},
	{
		name: "warnings", doc: "one thing to know about an estimate",
		columns: []table.Column{
			text("about", "observable, slow mode, family and axis, or point"),
			text("code", "stable code of the warning"),
			text("text", "the warning with its numbers"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for i := range f.points {
				eachWarning(&f.points[i].result, func(about string, w analysis.Warning) {
					row(&f.points[i], about, w.Code, w.Text)
				})
			}
		},
	},
	sampleTables[0],
	sampleTables[1],
	{
		name: "trends", study: true, doc: "one parameter of one form fitted to a quantity over the scan",
		columns: []table.Column{
			text("quantity", "what was fitted: tau_int, tau_slow_mode, xi, approach"),
			text("observable", "of which observable; empty where it is of none"),
			text("against", "length, beta or xi"),
			text("group", "what is fixed"),
			text("model", "name of the form"),
			double("weight", "", "weight of the form among those fitted"),
			double("chi2", "", "chi-squared of the fit"),
			integer("dof", "", "degrees of freedom"),
			text("parameter", "name of the parameter"),
			double("value", "", "its fitted value"),
			double("value_err", "", "its standard error"),
		},
		rows: func(f *findings, row func(p *finding, values ...any)) {
			for _, t := range f.comparison.Trends {
				for _, m := range t.Models {
					for _, p := range m.Parameters {
						row(nil, t.Quantity, t.Observable, t.Against, t.Group, m.Name, m.Weight, m.Chi2, m.Dof, p.Name, p.Value, p.Err)
					}
				}
			}
		},
	},
}

func relaxationRow(o *analysis.ObservableResult) []any {
	row := []any{o.Name}
	for _, e := range []analysis.Estimate{o.Mean, o.Variance, o.Kurtosis, o.Initial, o.Integrated} {
		row = append(row, valueErr(e)...)
	}
	if o.Integrated.OK {
		row = append(row, orMissing(o.Integrated.Low), orMissing(o.Integrated.High))
	} else {
		row = append(row, nil, nil)
	}
	row = append(append(row, valueErr(o.Model)...), valueErr(o.Single)...)
	var slowest, low, high, floor, window any
	if o.Slowest.OK {
		slowest = orMissing(o.Slowest.Value)
	}
	if o.SlowestInterval.OK {
		low, high, floor = orMissing(o.SlowestInterval.Low), orMissing(o.SlowestInterval.High), o.WeightFloor
	}
	if o.Integrated.OK {
		window = orMissing(o.Window)
	}
	row = append(row, slowest, boundOf(o.SlowestBound), low, high, floor, window)
	return append(row, switchingRow(&o.Switching)...)
}

func switchingRow(s *analysis.Switching) []any {
	if !s.OK {
		return []any{nil, nil, nil, nil, nil, nil}
	}
	row := []any{float64(s.Flips), s.Level, nil, nil, nil, s.Bound.Value}
	if s.Tau.OK {
		row[2], row[3], row[4] = s.Tau.Value, s.Tau.Low, s.Tau.High
	}
	return row
}

// writeFits writes every table of fits/ that has rows for the study.
func writeFits(d *archive.Dir, f *findings) error {
	m := d.Manifest()
	for _, t := range fitTables {
		schema := table.Schema{Name: t.name, Format: fitFormat, Tool: release}
		if !t.study {
			schema.Columns = append(append(schema.Columns, fitLeading...), scannedColumns(m)...)
		}
		schema.Columns = append(schema.Columns, t.columns...)
		b := table.NewBuilder(schema)
		t.rows(f, func(p *finding, values ...any) {
			var lead []any
			if p != nil {
				lead = append([]any{p.point, p.key, p.beta, p.size[0]}, scannedValues(m, m.Point(p.key))...)
			}
			b.Row(append(lead, values...)...)
		})
		if err := d.WriteFit(schema, b.Block()); err != nil {
			return err
		}
	}
	return nil
}

func valueErr(e analysis.Estimate) []any {
	if !e.OK || !finite(e.Value) {
		return []any{nil, nil}
	}
	if e.Units < 2 || !finite(e.Err) {
		return []any{e.Value, nil}
	}
	return []any{e.Value, e.Err}
}

func boundOf(b analysis.Bound) any {
	if !b.OK {
		return nil
	}
	return orMissing(b.Value)
}

// orMissing is x, or nothing where it is not finite.
func orMissing(x float64) any {
	if !finite(x) {
		return nil
	}
	return x
}

func bit(b bool) int {
	if b {
		return 1
	}
	return 0
}

func int32s(x []int) []int32 {
	out := make([]int32, len(x))
	for i := range x {
		out[i] = int32(x[i])
	}
	return out
}
