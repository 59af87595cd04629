package main

import "sojourn/analysis"

// The JSON of samples taken together; absent keys are estimates that could not be
// made.

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
