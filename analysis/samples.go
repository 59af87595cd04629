package analysis

import (
	"math"
	"slices"
	"sort"

	"gonum.org/v1/gonum/stat/distuv"
)

// SampleSummary is what samples of random couplings say together about one
// point of a study. A sample is one draw: errors come from how samples differ,
// which includes the errors of each.
type SampleSummary struct {
	Samples       int
	Observables   []SampledObservable // in the order of the first sample's
	EnergyPerSite Estimate            // mean over samples
	SlowMode      SampledTime         // of the slow modes' times
	Curves        []SampledCurve      // mean covariances in time
	Warnings      []Warning
}

// SampledObservable is one observable over samples.
type SampledObservable struct {
	Name       string
	Mean       Estimate // mean over samples of the mean
	Variance   Estimate // mean over samples of the variance
	Initial    SampledTime
	Integrated SampledTime
}

// SampledTime is a relaxation time tau over samples. Times differ by factors
// from sample to sample, so it is their logarithms that are averaged.
type SampledTime struct {
	// MeanLn is the mean of ln tau, with Student's interval. It is missing if a
	// sample has no tau: what is left would be too fast.
	MeanLn Estimate
	// MedianLn is the median of ln tau. Low and High are order statistics that
	// enclose it with at least 95 %, whatever the distribution; High is +Inf
	// where samples that are too slow to be measured allow no limit.
	MedianLn Estimate
	Typical  Estimate // exp of MeanLn
	// Spread is the standard deviation of ln tau from sample to sample, beyond
	// what the errors of single samples explain; 0 if these explain all.
	Spread    float64
	Low, High float64 // smallest and largest tau measured
	Measured  int     // samples that have a tau
	TooSlow   int     // samples without one because it is too long to be measured
}

// SampledCurve is the mean over samples of C_fg(t), at the times that all
// samples have.
type SampledCurve struct {
	F, G  string
	Times []float64
	C     []float64
	Err   []float64 // one standard error, from sample to sample; 0 with one sample
}

// OverSamples summarises results of one point in several samples. It panics if
// there is none, or if they are of different observables.
func OverSamples(results []Result) SampleSummary {
	if len(results) == 0 {
		panic("analysis: no samples")
	}
	s := SampleSummary{Samples: len(results)}
	first := &results[0]
	for i := range first.Observables {
		name := first.Observables[i].Name
		for k := range results {
			if len(results[k].Observables) != len(first.Observables) || results[k].Observables[i].Name != name {
				panic("analysis: samples of different observables")
			}
		}
		of := func(pick func(o *ObservableResult) Estimate) []Estimate {
			return pickEach(results, func(r *Result) Estimate { return pick(&r.Observables[i]) })
		}
		o := SampledObservable{
			Name:       name,
			Mean:       meanOver(of(func(o *ObservableResult) Estimate { return o.Mean })),
			Variance:   meanOver(of(func(o *ObservableResult) Estimate { return o.Variance })),
			Initial:    timeOver(of(func(o *ObservableResult) Estimate { return o.Initial })),
			Integrated: timeOver(of(func(o *ObservableResult) Estimate { return o.Integrated })),
		}
		if t := &o.Integrated; t.Measured < len(results) {
			s.Warnings = append(s.Warnings, warn(codeSamples,
				"%s has no tau_int in %d of %d samples, in %d because it is too long for the run: no mean; the median counts these as slower than all others",
				name, len(results)-t.Measured, len(results), t.TooSlow))
		}
		s.Observables = append(s.Observables, o)
	}
	s.EnergyPerSite = meanOver(pickEach(results, func(r *Result) Estimate { return r.EnergyPerSite }))
	s.SlowMode = timeOver(pickEach(results, func(r *Result) Estimate { return r.SlowMode.Tau }))
	s.Curves = curvesOver(results)
	drifting := 0
	for i := range results {
		if !results[i].Equilibrated {
			drifting++
		}
	}
	if drifting > 0 {
		s.Warnings = append(s.Warnings, warn(codeDrift, "%d of %d samples are not equilibrated: averages over samples include them", drifting, len(results)))
	}
	return s
}

func pickEach(results []Result, pick func(r *Result) Estimate) []Estimate {
	out := make([]Estimate, len(results))
	for i := range results {
		out[i] = pick(&results[i])
	}
	return out
}

// meanOver is the mean of a quantity over samples; missing if a sample lacks
// it.
func meanOver(samples []Estimate) Estimate {
	values := make([]float64, len(samples))
	for i, e := range samples {
		if !e.OK {
			return missing(e.Code, e.Reason)
		}
		values[i] = e.Value
	}
	mean, se := meanAndError(values)
	if len(values) == 1 {
		return Estimate{Value: mean, Low: mean, High: mean, Units: 1, OK: true}
	}
	return symmetric(mean, se, len(values))
}

// meanAndError is the mean and its standard error from the scatter of values.
func meanAndError(values []float64) (mean, se float64) {
	n := float64(len(values))
	for _, x := range values {
		mean += x / n
	}
	ss := 0.0
	for _, x := range values {
		ss += (x - mean) * (x - mean)
	}
	if len(values) < 2 {
		return mean, 0
	}
	return mean, math.Sqrt(ss / (n * (n - 1)))
}

// tooSlow are the reasons for which a relaxation time is missing because it is
// long against what was run.
var tooSlow = map[string]bool{codeShortTotal: true, codeShortSpan: true, codeFrozen: true, codeConstant: true}

// timeOver puts relaxation times of samples together.
func timeOver(samples []Estimate) SampledTime {
	var t SampledTime
	var logs []float64
	noise := 0.0
	unknown := Estimate{}
	for _, e := range samples {
		switch {
		case e.OK && e.Value > 0:
			x := math.Log(e.Value)
			if t.Measured == 0 || e.Value < t.Low {
				t.Low = e.Value
			}
			t.High = math.Max(t.High, e.Value)
			t.Measured++
			logs = append(logs, x)
			noise += (e.Err / e.Value) * (e.Err / e.Value)
		case tooSlow[e.Code]:
			t.TooSlow++
			unknown = e
		default:
			unknown = e
		}
	}
	n := len(samples)
	why := missing(codeSamples, "some samples have none")
	if t.Measured == 0 && unknown.Code != "" {
		why = missing(unknown.Code, unknown.Reason)
	}
	t.MeanLn, t.MedianLn, t.Typical = why, why, why
	if t.Measured == n {
		mean, se := meanAndError(logs)
		t.MeanLn = Estimate{Value: mean, Low: mean, High: mean, Units: 1, OK: true}
		t.Typical = Estimate{Value: math.Exp(mean), Low: math.Exp(mean), High: math.Exp(mean), Units: 1, OK: true}
		if n > 1 {
			t.MeanLn = symmetric(mean, se, n)
			t.Typical = logarithmic(mean, se, n)
			t.Spread = math.Sqrt(math.Max(0, se*se*float64(n)-noise/float64(n)))
		}
	}
	if t.Measured+t.TooSlow == n {
		for range t.TooSlow {
			logs = append(logs, math.Inf(1))
		}
		t.MedianLn = median(logs)
	}
	return t
}

// median returns the median of numbers, some of which may be +Inf, with an
// interval of order statistics that encloses that of the population with
// probability 0.95 or more, whatever the distribution (R. A. Fisher's sign
// test inverted): the k-th from either end, where k-1 successes or fewer of n
// tosses have a probability of at most 0.025. The standard error is that of the
// sample median under resampling, in closed form (J. S. Maritz, R. G. Jarrett,
// J. Am. Stat. Assoc. 73, 194 (1978)). Fewer than six numbers have no such
// interval, and numbers with +Inf no such error.
func median(x []float64) Estimate {
	x = slices.Clone(x)
	sort.Float64s(x)
	n := len(x)
	m := (x[(n-1)/2] + x[n/2]) / 2
	if math.IsInf(m, 1) {
		return missing(codeSamples, "half of the samples or more are too slow")
	}
	e := Estimate{Value: m, Low: math.Inf(-1), High: math.Inf(1), Units: 1, OK: true}
	b := distuv.Binomial{N: float64(n), P: 0.5}
	for k := n / 2; k >= 1; k-- {
		if b.CDF(float64(k-1)) <= 0.025 {
			e.Low, e.High = x[k-1], x[n-k]
			break
		}
	}
	if n < 2 || math.IsInf(x[n-1], 1) {
		return e
	}
	half := float64(n+1) / 2
	beta := distuv.Beta{Alpha: half, Beta: half}
	m1, m2, below := 0.0, 0.0, 0.0
	for i := range x {
		upTo := beta.CDF(float64(i+1) / float64(n))
		m1 += (upTo - below) * x[i]
		m2 += (upTo - below) * (x[i] - m) * (x[i] - m)
		below = upTo
	}
	e.Err = math.Sqrt(math.Max(0, m2-(m1-m)*(m1-m)))
	e.Units = n
	return e
}

// curvesOver averages covariances in time.
func curvesOver(results []Result) []SampledCurve {
	var out []SampledCurve
	first := results[0].Curves
	for i := range first {
		shared := len(first[i].Times)
		for k := range results {
			c := results[k].Curves
			if len(c) != len(first) || c[i].F != first[i].F || c[i].G != first[i].G {
				return nil // some samples lack pairs of observables
			}
			n := 0
			for n < min(shared, len(c[i].C)) && c[i].Times[n] == first[i].Times[n] {
				n++
			}
			shared = n
		}
		curve := SampledCurve{F: first[i].F, G: first[i].G, Times: first[i].Times[:shared]}
		values := make([]float64, len(results))
		for at := range shared {
			for k := range results {
				values[k] = results[k].Curves[i].C[at]
			}
			mean, se := meanAndError(values)
			curve.C = append(curve.C, mean)
			curve.Err = append(curve.Err, se)
		}
		out = append(out, curve)
	}
	return out
}

// Typical is a result with typical times, for trends: those of the first sample
// with its relaxation times replaced by exp of the mean logarithm.
func (s *SampleSummary) Typical(first *Result) Result {
	r := Result{Beta: first.Beta, Size: first.Size, Open: first.Open, Equilibrated: true}
	for i := range s.Observables {
		r.Observables = append(r.Observables, ObservableResult{Name: s.Observables[i].Name, Integrated: s.Observables[i].Integrated.Typical})
	}
	r.SlowMode.Tau = s.SlowMode.Typical
	return r
}
