package main

import (
	"context"
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"runtime"
	"strconv"
	"strings"

	"sojourn/analysis"
	"sojourn/configs"
	"sojourn/observables/archive"
)

// compared is the largest number of states of a point that fit holds against
// exact values, so that it stays quick.
const compared = 1 << 14

// against is what fit --against-exact knows of one point: exact values, or the
// reason why there are none.
type against struct {
	exact  *exactPointJSON
	reason string
}

// compareExactly computes exact values for the points of a fit, from the study
// in the results directory.
func (c *console) compareExactly(d *archive.Dir, f *findings) error {
	study, err := configs.Load(filepath.Join(d.Path(), "study.toml"))
	if err != nil {
		return fmt.Errorf("the study in the directory is needed for --against-exact: %w", err)
	}
	points := map[string]*configs.Point{}
	for i := range study.Points {
		points[study.Points[i].Key] = &study.Points[i]
	}
	return untilSignal(func(ctx context.Context) error {
		faults := make([]error, len(f.points))
		inTurns(len(f.points), runtime.GOMAXPROCS(0), func(i int) {
			if ctx.Err() == nil {
				f.points[i].against, faults[i] = exactlyFor(points[f.points[i].key])
			}
		})
		return errors.Join(faults...)
	})
}

// exactlyFor computes the exact values of a point, or says why they cannot stand
// beside its estimates.
func exactlyFor(p *configs.Point) (*against, error) {
	if p == nil {
		return &against{reason: "this version of the program reads another point from the study"}, nil
	}
	if n := p.Spec.SiteCount(); n > enumerated {
		return &against{reason: fmt.Sprintf("%s have more than %d states", plural(n, "site"), compared)}, nil
	}
	q, err := prepare(p, 0)
	if err != nil {
		return nil, err
	}
	r, err := q.route(compared)
	if err != nil {
		return &against{reason: err.Error()}, nil
	}
	if r.sector {
		return &against{reason: fmt.Sprintf("the lattice has %s states, more than the limit of %d here; `sojourn exact` goes further", r.total, compared)}, nil
	}
	if _, reached := q.closedClasses(); p.Trajectory.Start != "reference" && reached != nil && *reached > 1 {
		return &against{reason: fmt.Sprintf("trajectories from start %s fall into %d closed classes, and exact values are of that of the reference state", p.Trajectory.Start, *reached)}, nil
	}
	x, err := q.solve(r, func(string, ...any) {})
	if err != nil {
		return &against{reason: err.Error()}, nil
	}
	return &against{exact: &x}, nil
}

// observable returns the exact values of one observable, nil if there are none.
func (a *against) observable(name string) *exactObservableJSON {
	if a == nil || a.exact == nil {
		return nil
	}
	for i := range a.exact.Observables {
		if o := &a.exact.Observables[i]; o.Name == name {
			return o
		}
	}
	return nil
}

// deviation is how many standard errors an estimate lies above the exact value;
// ok is false where there is no error to divide by.
func deviation(e analysis.Estimate, exact float64) (float64, bool) {
	if !e.OK || e.Units < 2 || !(e.Err > 0) {
		return 0, false
	}
	return (e.Value - exact) / e.Err, finite((e.Value - exact) / e.Err)
}

// comparedValue is an estimate beside its exact value.
type comparedValue struct {
	name     string
	estimate analysis.Estimate
	exact    float64
}

// comparedValues pairs the estimates of an observable with its exact values.
func comparedValues(o *analysis.ObservableResult, x *exactObservableJSON) []comparedValue {
	list := []comparedValue{{"mean", o.Mean, x.Mean}, {"variance", o.Variance, x.Variance}}
	if x.Variance > 0 {
		list = append(list, comparedValue{"tau_initial", o.Initial, x.TauInitial})
	}
	if x.TauInt > 0 {
		list = append(list, comparedValue{"tau_int", o.Integrated, x.TauInt})
	}
	return list
}

// againstJSON stands in an observable of the JSON of fit as "exact".
type againstJSON struct {
	Mean                float64  `json:"mean"`
	Variance            float64  `json:"variance"`
	TauInitial          *float64 `json:"tau_initial,omitempty"`
	TauInt              *float64 `json:"tau_int,omitempty"`
	TauSlowest          *float64 `json:"tau_slowest,omitempty"`
	MeanDeviation       *float64 `json:"mean_deviation,omitempty"` // in standard errors, as the others
	VarianceDeviation   *float64 `json:"variance_deviation,omitempty"`
	TauInitialDeviation *float64 `json:"tau_initial_deviation,omitempty"`
	TauIntDeviation     *float64 `json:"tau_int_deviation,omitempty"`
	BoundHolds          *bool    `json:"tau_slowest_bound_holds,omitempty"`
}

// againstPointJSON stands in a point of the JSON of fit as "exact".
type againstPointJSON struct {
	States     uint64   `json:"states,omitempty"`
	Gap        *float64 `json:"gap,omitempty"`
	TauGap     *float64 `json:"tau_gap,omitempty"`
	BoundHolds *bool    `json:"tau_bound_holds,omitempty"` // of slow_mode
	Reason     string   `json:"reason,omitempty"`          // why there are no exact values
}

func jsonOfAgainst(o *analysis.ObservableResult, x *exactObservableJSON) *againstJSON {
	j := &againstJSON{Mean: x.Mean, Variance: x.Variance}
	if x.Variance > 0 {
		j.TauInitial, j.TauInt, j.TauSlowest = positive(x.TauInitial), positive(x.TauInt), positive(x.TauSlowest)
	}
	for _, v := range comparedValues(o, x) {
		d, ok := deviation(v.estimate, v.exact)
		if !ok {
			continue
		}
		switch v.name {
		case "mean":
			j.MeanDeviation = &d
		case "variance":
			j.VarianceDeviation = &d
		case "tau_initial":
			j.TauInitialDeviation = &d
		case "tau_int":
			j.TauIntDeviation = &d
		}
	}
	if o.SlowestBound.OK && x.TauSlowest > 0 {
		holds := o.SlowestBound.Value <= x.TauSlowest
		j.BoundHolds = &holds
	}
	return j
}

func jsonOfAgainstPoint(p *finding) *againstPointJSON {
	a := p.against
	if a == nil {
		return nil
	}
	j := &againstPointJSON{Reason: a.reason}
	if a.exact != nil {
		j.States, j.Gap, j.TauGap = a.exact.States, positive(a.exact.Gap), positive(a.exact.GapTime)
		if b := p.result.SlowMode.Bound; b.OK && a.exact.GapTime > 0 {
			holds := b.Value <= a.exact.GapTime
			j.BoundHolds = &holds
		}
	}
	return j
}

// writeAgainst prints the estimates of each point beside the exact values.
func writeAgainst(b *strings.Builder, f *findings) {
	any := false
	for i := range f.points {
		any = any || f.points[i].against != nil
	}
	if !any {
		return
	}
	fmt.Fprintf(b, "\nAgainst exact values (points of at most %d states)\n", compared)
	count, sum, worst := 0, 0.0, 0.0
	for i := range f.points {
		p := &f.points[i]
		if p.against == nil {
			continue
		}
		if p.against.exact == nil {
			writeNote(b, fmt.Sprintf("point %d", p.point), "not compared: "+p.against.reason)
			continue
		}
		x := p.against.exact
		head := fmt.Sprintf("%d states", x.States)
		if x.Gap > 0 {
			head += ", 1/gap " + plain(x.GapTime)
			if s := p.result.SlowMode.Bound; s.OK {
				head += fmt.Sprintf(", bounded by %s (%s)", bound(s), holdsText(s.Value, x.GapTime))
			}
		}
		writeNote(b, fmt.Sprintf("point %d", p.point), head)
		t := newSheet("observable", "", "fit", "exact", "standard errors").text(1)
		for k := range p.result.Observables {
			o := &p.result.Observables[k]
			xo := p.against.observable(o.Name)
			if xo == nil {
				t.add(o.Name, "not computed", "", "", "")
				continue
			}
			name := o.Name
			for _, v := range comparedValues(o, xo) {
				apart := "-"
				if d, ok := deviation(v.estimate, v.exact); ok {
					apart = fmt.Sprintf("%+.1f", d)
					count++
					sum += d * d
					worst = math.Max(worst, math.Abs(d))
				}
				t.add(name, v.name, estimate(v.estimate), sixDigits(v.exact), apart)
				name = ""
			}
			if xo.TauSlowest > 0 {
				holds := ""
				if o.SlowestBound.OK {
					holds = holdsText(o.SlowestBound.Value, xo.TauSlowest)
				}
				t.add(name, "tau_slowest", bound(o.SlowestBound), sixDigits(xo.TauSlowest), holds)
			}
		}
		t.write(b, "  ")
		for _, w := range x.Warnings {
			writeWarning(b, "exact", analysis.Warning{Code: w.Code, Text: w.Text})
		}
	}
	if count > 0 {
		fmt.Fprintf(b, "  %s: %.2f standard errors in the root mean square (1 is to be expected), %.1f at most\n",
			plural(count, "deviation"), math.Sqrt(sum/float64(count)), worst)
	}
}

// sixDigits prints an exact value, finer than most errors.
func sixDigits(x float64) string { return shortExponent(strconv.FormatFloat(x, 'g', 6, 64)) }

// holdsText says whether a lower bound is one. One in twenty bounds at 95 % may
// exceed the value.
func holdsText(bound, value float64) string {
	if bound <= value {
		return "holds"
	}
	return "exceeds"
}
