package main

import (
	"math"

	"sojourn/analysis"
)

// The JSON of fit. Keys are stable; an estimate that could not be made is an
// absent key, with its reason among the warnings.

type fitJSON struct {
	Dir      string         `json:"dir"`
	Title    string         `json:"title,omitempty"`
	Complete bool           `json:"complete"`
	Points   []fitPointJSON `json:"points"`
	Samples  []samplesJSON  `json:"samples,omitempty"`
	Trends   []trendJSON    `json:"trends"`
	Warnings []warningJSON  `json:"warnings"`
}

type fitPointJSON struct {
	Point         int               `json:"point"`
	Key           string            `json:"key"`
	Model         string            `json:"model"`
	Beta          float64           `json:"beta"`
	Length        int               `json:"length"`
	Size          []int             `json:"size"`
	Scan          map[string]string `json:"scan,omitempty"`
	Units         int               `json:"units"`
	Trajectories  int               `json:"trajectories"`
	Jumps         float64           `json:"jumps"`
	Equilibrated  bool              `json:"equilibrated"`
	Observables   []observableJSON  `json:"observables"`
	EnergyPerSite *float64          `json:"energy_per_site,omitempty"`
	EnergyErr     *float64          `json:"energy_per_site_err,omitempty"`
	SlowMode      slowModeJSON      `json:"slow_mode"`
	Exact         *againstPointJSON `json:"exact,omitempty"`
	Decay         []decayJSON       `json:"decay"`
	Approach      []approachJSON    `json:"approach,omitempty"`
	Mixing        *mixingJSON       `json:"mixing,omitempty"`
	Tests         []testJSON        `json:"tests"`
	Advice        []adviceJSON      `json:"advice,omitempty"`
	Warnings      []warningJSON     `json:"warnings"`
}

type observableJSON struct {
	Name            string        `json:"name"`
	Mean            *float64      `json:"mean,omitempty"`
	MeanErr         *float64      `json:"mean_err,omitempty"`
	Variance        *float64      `json:"variance,omitempty"`
	VarianceErr     *float64      `json:"variance_err,omitempty"`
	Kurtosis        *float64      `json:"kurtosis,omitempty"`
	KurtosisErr     *float64      `json:"kurtosis_err,omitempty"`
	TauInitial      *float64      `json:"tau_initial,omitempty"`
	TauInitialErr   *float64      `json:"tau_initial_err,omitempty"`
	TauInt          *float64      `json:"tau_int,omitempty"`
	TauIntErr       *float64      `json:"tau_int_err,omitempty"`
	TauIntLow       *float64      `json:"tau_int_low,omitempty"`
	TauIntHigh      *float64      `json:"tau_int_high,omitempty"`
	TauIntFormula   *float64      `json:"tau_int_err_formula,omitempty"`
	Flips           *int64        `json:"flips,omitempty"`
	FlipLevel       *float64      `json:"flip_level,omitempty"`
	TauFlips        *float64      `json:"tau_flips,omitempty"`
	TauFlipsLow     *float64      `json:"tau_flips_low,omitempty"`
	TauFlipsHigh    *float64      `json:"tau_flips_high,omitempty"`
	TauFlipsBound   *float64      `json:"tau_flips_bound,omitempty"`
	TauIntModel     *float64      `json:"tau_int_model,omitempty"`
	TauIntModelErr  *float64      `json:"tau_int_model_err,omitempty"`
	TauSingle       *float64      `json:"tau_single,omitempty"`
	TauSingleErr    *float64      `json:"tau_single_err,omitempty"`
	TauSlowest      *float64      `json:"tau_slowest,omitempty"`
	TauSlowestBound *float64      `json:"tau_slowest_bound,omitempty"`
	TauSlowestLow   *float64      `json:"tau_slowest_low,omitempty"`
	TauSlowestHigh  *float64      `json:"tau_slowest_high,omitempty"`
	WeightFloor     *float64      `json:"weight_floor,omitempty"`
	Window          *float64      `json:"window,omitempty"`
	Shape           string        `json:"shape,omitempty"`
	Exact           *againstJSON  `json:"exact,omitempty"`
	Warnings        []warningJSON `json:"warnings"`
}

type slowModeJSON struct {
	Tau           *float64           `json:"tau,omitempty"`
	TauErr        *float64           `json:"tau_err,omitempty"`
	TauBound      *float64           `json:"tau_bound,omitempty"`
	Confidence    *float64           `json:"confidence,omitempty"`
	TauRayleigh   *float64           `json:"tau_rayleigh,omitempty"`
	RayleighErr   *float64           `json:"tau_rayleigh_err,omitempty"`
	RayleighBound *float64           `json:"tau_rayleigh_bound,omitempty"`
	Shares        map[string]float64 `json:"shares,omitempty"`
	Dropped       []string           `json:"dropped,omitempty"`
	Warnings      []warningJSON      `json:"warnings"`
}

type decayJSON struct {
	Of              string        `json:"of"`
	Axis            int           `json:"axis"`
	Xi              *float64      `json:"xi,omitempty"`
	XiErr           *float64      `json:"xi_err,omitempty"`
	SecondMoment    *float64      `json:"xi_second_moment,omitempty"`
	SecondMomentErr *float64      `json:"xi_second_moment_err,omitempty"`
	Amplitude       *float64      `json:"amplitude,omitempty"`
	AmplitudeErr    *float64      `json:"amplitude_err,omitempty"`
	NoDecay         bool          `json:"no_decay"`
	Warnings        []warningJSON `json:"warnings"`
}

type approachJSON struct {
	Observable string        `json:"observable"`
	Start      string        `json:"start"`
	Epsilon    float64       `json:"epsilon"`
	Time       *float64      `json:"time,omitempty"`
	TimeErr    *float64      `json:"time_err,omitempty"`
	Tau        *float64      `json:"tau,omitempty"`
	TauErr     *float64      `json:"tau_err,omitempty"`
	Coupling   *float64      `json:"coupling_time,omitempty"`
	CouplErr   *float64      `json:"coupling_time_err,omitempty"`
	Warnings   []warningJSON `json:"warnings"`
}

// mixingJSON bounds the time to come within a distance of equilibrium, in total
// variation, from every start; the upper bound holds only if the slow mode's time
// is 1/gap.
type mixingJSON struct {
	Distance float64  `json:"distance"`
	Lower    *float64 `json:"lower,omitempty"`
	Upper    *float64 `json:"upper_if_gap,omitempty"`
	Text     string   `json:"text"`
}

type testJSON struct {
	Kind       string  `json:"kind"`
	Observable string  `json:"observable"`
	Statistic  float64 `json:"t"`
	Dof        float64 `json:"dof"`
	P          float64 `json:"p"`
	Adjusted   float64 `json:"p_adjusted"`
	Rejected   bool    `json:"rejected"`
}

type adviceJSON struct {
	Observable string   `json:"observable"`
	Quantity   string   `json:"quantity"`
	Precision  float64  `json:"precision"`
	Total      float64  `json:"total_time"`
	Factor     float64  `json:"factor"`
	Jumps      *float64 `json:"jumps,omitempty"`
	Seconds    *float64 `json:"seconds,omitempty"`
	Text       string   `json:"text"`
}

type trendJSON struct {
	Quantity   string           `json:"quantity"`
	Observable string           `json:"observable,omitempty"`
	Against    string           `json:"against"`
	Group      string           `json:"group,omitempty"`
	Points     []trendPointJSON `json:"points"`
	Models     []trendModelJSON `json:"models"`
	Regime     string           `json:"regime,omitempty"`
	Warnings   []warningJSON    `json:"warnings"`
}

type trendPointJSON struct {
	Point int     `json:"point"`
	X     float64 `json:"x"`
	Y     float64 `json:"y"`
	Err   float64 `json:"y_err"`
}

type trendModelJSON struct {
	Name       string          `json:"name"`
	Formula    string          `json:"formula,omitempty"`
	Weight     float64         `json:"weight"`
	Chi2       float64         `json:"chi2"`
	Dof        int             `json:"dof"`
	Parameters []fittedNumJSON `json:"parameters"`
}

type fittedNumJSON struct {
	Name  string  `json:"name"`
	Value float64 `json:"value"`
	Err   float64 `json:"err"`
}

type warningJSON struct {
	Code string `json:"code"`
	Text string `json:"text"`
}

func jsonOfFindings(f *findings) fitJSON {
	out := fitJSON{Dir: f.dir, Title: f.title, Complete: f.complete, Points: make([]fitPointJSON, len(f.points)),
		Trends: []trendJSON{}, Warnings: jsonOfWarnings(f.comparison.Warnings)}
	for i := range f.points {
		out.Points[i] = jsonOfPoint(&f.points[i])
	}
	for k := range f.samples {
		out.Samples = append(out.Samples, jsonOfSamples(&f.samples[k], f))
	}
	for i := range f.comparison.Trends {
		out.Trends = append(out.Trends, jsonOfTrend(&f.comparison.Trends[i], f))
	}
	return out
}

func jsonOfPoint(p *finding) fitPointJSON {
	r := &p.result
	out := fitPointJSON{
		Point: p.point, Key: p.key, Model: p.model, Beta: p.beta, Length: p.size[0], Size: p.size,
		Units: p.units, Trajectories: p.trajectories, Jumps: p.jumps, Equilibrated: r.Equilibrated,
		Observables: []observableJSON{}, SlowMode: jsonOfSlowMode(&r.SlowMode),
		Decay: []decayJSON{}, Tests: []testJSON{}, Warnings: jsonOfWarnings(r.Warnings),
	}
	if len(p.scan) > 0 {
		out.Scan = map[string]string{}
		for _, s := range p.scan {
			out.Scan[s.name] = s.value
		}
	}
	out.Exact = jsonOfAgainstPoint(p)
	out.EnergyPerSite, out.EnergyErr = valueAndError(r.EnergyPerSite)
	for i := range r.Observables {
		j := jsonOfObservable(&r.Observables[i])
		if x := p.against.observable(r.Observables[i].Name); x != nil {
			j.Exact = jsonOfAgainst(&r.Observables[i], x)
		}
		out.Observables = append(out.Observables, j)
	}
	for i := range r.Decay {
		d := &r.Decay[i]
		j := decayJSON{Of: d.Of, Axis: d.Axis, NoDecay: d.NoDecay, Warnings: jsonOfWarnings(d.Warnings)}
		j.Xi, j.XiErr = valueAndError(d.Xi)
		j.SecondMoment, j.SecondMomentErr = valueAndError(d.SecondMoment)
		j.Amplitude, j.AmplitudeErr = valueAndError(d.Amplitude)
		out.Decay = append(out.Decay, j)
	}
	for i := range r.Approach {
		a := &r.Approach[i]
		j := approachJSON{Observable: a.Observable, Start: a.Start, Epsilon: a.Epsilon, Warnings: jsonOfWarnings(a.Warnings)}
		j.Time, j.TimeErr = valueAndError(a.Time)
		j.Tau, j.TauErr = valueAndError(a.Tau)
		j.Coupling, j.CouplErr = valueAndError(a.Coupling)
		out.Approach = append(out.Approach, j)
	}
	if m := &r.Mixing; m.Text != "" {
		out.Mixing = &mixingJSON{Distance: m.Distance, Text: m.Text}
		if m.Lower.OK {
			out.Mixing.Lower = number(m.Lower.Value)
		}
		if m.Volume.OK {
			out.Mixing.Upper = number(m.Volume.Value)
		}
	}
	for _, t := range r.Tests {
		if t.OK && finite(t.Statistic) && finite(t.Dof) {
			out.Tests = append(out.Tests, testJSON{t.Kind, t.Observable, t.Statistic, t.Dof, t.P, t.Adjusted, t.Rejected})
		}
	}
	for _, a := range r.Advice {
		out.Advice = append(out.Advice, adviceJSON{a.Observable, a.Quantity, a.Precision, a.Total, a.Factor, positive(a.Jumps), positive(a.Seconds), a.Text})
	}
	return out
}

func jsonOfObservable(o *analysis.ObservableResult) observableJSON {
	j := observableJSON{Name: o.Name, Warnings: jsonOfWarnings(o.Warnings)}
	j.Mean, j.MeanErr = valueAndError(o.Mean)
	j.Variance, j.VarianceErr = valueAndError(o.Variance)
	j.Kurtosis, j.KurtosisErr = valueAndError(o.Kurtosis)
	j.TauInitial, j.TauInitialErr = valueAndError(o.Initial)
	j.TauInt, j.TauIntErr = valueAndError(o.Integrated)
	if o.Integrated.OK {
		j.TauIntLow, j.TauIntHigh = number(o.Integrated.Low), number(o.Integrated.High)
		j.Window, j.TauIntFormula = positive(o.Window), positive(o.FormulaErr)
	}
	j.TauIntModel, j.TauIntModelErr = valueAndError(o.Model)
	j.TauSingle, j.TauSingleErr = valueAndError(o.Single)
	if o.Slowest.OK {
		j.TauSlowest = number(o.Slowest.Value)
	}
	if o.SlowestBound.OK {
		j.TauSlowestBound = number(o.SlowestBound.Value)
	}
	if o.SlowestInterval.OK {
		j.TauSlowestLow, j.TauSlowestHigh = number(o.SlowestInterval.Low), number(o.SlowestInterval.High)
		j.WeightFloor = number(o.WeightFloor)
	}
	if s := &o.Switching; s.OK {
		j.Flips, j.FlipLevel, j.TauFlipsBound = &s.Flips, number(s.Level), number(s.Bound.Value)
		if s.Tau.OK {
			j.TauFlips, j.TauFlipsLow, j.TauFlipsHigh = number(s.Tau.Value), number(s.Tau.Low), number(s.Tau.High)
		}
	}
	if o.Shape.OK {
		j.Shape = o.Shape.Prefers
	}
	return j
}

func jsonOfSlowMode(m *analysis.SlowMode) slowModeJSON {
	j := slowModeJSON{Dropped: m.Dropped, Warnings: jsonOfWarnings(m.Warnings)}
	j.Tau, j.TauErr = valueAndError(m.Tau)
	j.TauRayleigh, j.RayleighErr = valueAndError(m.Rayleigh)
	if m.Bound.OK {
		j.TauBound, j.Confidence = number(m.Bound.Value), number(m.Bound.Confidence)
	}
	if m.RayleighBound.OK {
		j.RayleighBound = number(m.RayleighBound.Value)
	}
	for _, s := range m.Shares {
		if j.Shares == nil {
			j.Shares = map[string]float64{}
		}
		j.Shares[s.Name] = s.Value
	}
	return j
}

func jsonOfTrend(t *analysis.Trend, f *findings) trendJSON {
	j := trendJSON{Quantity: t.Quantity, Observable: t.Observable, Against: t.Against, Group: t.Group, Regime: t.Regime,
		Points: []trendPointJSON{}, Models: []trendModelJSON{}, Warnings: jsonOfWarnings(t.Warnings)}
	for _, p := range t.Points {
		j.Points = append(j.Points, trendPointJSON{f.points[p.Result].point, p.X, p.Y, p.Err})
	}
	for _, m := range t.Models {
		n := trendModelJSON{Name: m.Name, Formula: m.Formula, Weight: m.Weight, Chi2: m.Chi2, Dof: m.Dof, Parameters: []fittedNumJSON{}}
		for _, p := range m.Parameters {
			n.Parameters = append(n.Parameters, fittedNumJSON{p.Name, p.Value, p.Err})
		}
		j.Models = append(j.Models, n)
	}
	return j
}

func jsonOfWarnings(list []analysis.Warning) []warningJSON {
	out := make([]warningJSON, len(list))
	for i, w := range list {
		out[i] = warningJSON{w.Code, w.Text}
	}
	return out
}

// valueAndError returns the two fields of an estimate; both are absent if there
// is none, the error alone if nothing could be resampled.
func valueAndError(e analysis.Estimate) (value, err *float64) {
	if !e.OK {
		return nil, nil
	}
	if e.Units < 2 {
		return number(e.Value), nil
	}
	return number(e.Value), number(e.Err)
}

// number is x as a JSON field; absent where x is no number, which JSON cannot say.
func number(x float64) *float64 {
	if !finite(x) {
		return nil
	}
	return &x
}

func positive(x float64) *float64 {
	if x <= 0 {
		return nil
	}
	return number(x)
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }
