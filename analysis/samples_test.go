package analysis

import (
	"math"
	"math/rand/v2"
	"testing"
)

// sampled makes a result of one sample with a given relaxation time.
func sampled(tau, err, mean float64, c ...float64) Result {
	r := Result{Equilibrated: true, EnergyPerSite: Estimate{Value: mean / 4, Units: 9, OK: true}}
	r.Observables = []ObservableResult{{
		Name: "spin", Mean: Estimate{Value: mean, Units: 9, OK: true}, Variance: Estimate{Value: 1, Units: 9, OK: true},
		Integrated: Estimate{Value: tau, Err: err, Units: 9, OK: true},
		Initial:    Estimate{Value: tau / 2, Units: 9, OK: true},
	}}
	r.SlowMode.Tau = missing(codeNoise, "there is none")
	curve := Curve{F: "spin", G: "spin", C: c}
	for k := range c {
		curve.Times = append(curve.Times, float64(k)/2)
	}
	r.Curves = []Curve{curve}
	return r
}

func TestOverSamples(t *testing.T) {
	s := OverSamples([]Result{
		sampled(1, 0.1, 3, 1, 0.5, 0.25), sampled(math.E, 0.1, 5, 3, 1.5), sampled(math.Exp(5), 1, 7, 2, 1, 0.5),
	})
	o := s.Observables[0]
	if o.Mean.Value != 5 || math.Abs(o.Mean.Err-2/math.Sqrt(3)) > 1e-12 || o.Mean.Units != 3 {
		t.Errorf("mean %+v, want 5 with the error 2/sqrt 3", o.Mean)
	}
	// Logarithms 0, 1, 5: mean 2, sum of squares 4+1+9.
	if x := o.Integrated; math.Abs(x.MeanLn.Value-2) > 1e-12 || math.Abs(x.MeanLn.Err-math.Sqrt(14.0/6)) > 1e-12 ||
		math.Abs(x.Typical.Value-math.Exp(2)) > 1e-9 || math.Abs(x.MedianLn.Value-1) > 1e-12 || x.Low != 1 || x.High != math.Exp(5) || x.Measured != 3 {
		t.Errorf("tau_int %+v", x)
	}
	if !math.IsInf(o.Integrated.MedianLn.High, 1) {
		t.Errorf("three numbers give the median the interval %v to %v", o.Integrated.MedianLn.Low, o.Integrated.MedianLn.High)
	}
	if c := s.Curves[0]; len(c.C) != 2 || c.C[0] != 2 || c.C[1] != 1 || math.Abs(c.Err[0]-1/math.Sqrt(3)) > 1e-12 || c.Times[1] != 0.5 {
		t.Errorf("curve %+v", c)
	}
	if s.SlowMode.MeanLn.OK || s.SlowMode.MeanLn.Code != codeNoise || len(s.Warnings) != 0 {
		t.Errorf("slow mode %+v, warnings %v", s.SlowMode, s.Warnings)
	}
	if e := s.EnergyPerSite; e.Value != 1.25 {
		t.Errorf("energy %+v", e)
	}
	one := OverSamples([]Result{sampled(2, 0.1, 3, 1)})
	if x := one.Observables[0].Integrated; x.MeanLn.Value != math.Log(2) || x.MeanLn.Units != 1 || x.Typical.Value != 2 {
		t.Errorf("one sample: %+v", x)
	}
}

// Samples that are too slow have no place in a mean, and the upper half of the
// ranks in the median.
func TestSlowSamples(t *testing.T) {
	var list []Result
	for i := range 9 {
		list = append(list, sampled(math.Exp(float64(i)), 0.01, 0))
	}
	for _, k := range []int{7, 8} {
		list[k].Observables[0].Integrated = missing(codeShortTotal, "the run is short")
	}
	list[3].Equilibrated = false
	s := OverSamples(list)
	x := s.Observables[0].Integrated
	if x.MeanLn.OK || x.MeanLn.Code != codeSamples || x.Typical.OK {
		t.Errorf("a mean without the slowest: %+v", x.MeanLn)
	}
	// The second of nine from either end: P(at most 1 of 9) = 10/512.
	if m := x.MedianLn; !m.OK || m.Value != 4 || m.Low != 1 || !math.IsInf(m.High, 1) || m.Units != 1 {
		t.Errorf("median %+v", m)
	}
	if x.TooSlow != 2 || x.Measured != 7 || len(s.Warnings) != 2 {
		t.Errorf("%+v, %v", x, s.Warnings)
	}
	list[0].Observables[0].Integrated = missing(codeCoarseStep, "the step is long")
	if m := OverSamples(list).Observables[0].Integrated.MedianLn; m.OK {
		t.Errorf("a sample that is slow or fast gives the median %+v", m)
	}
}

// Intervals hold what they promise for samples whose ln tau is exponentially
// distributed, which is skew: 95 % for the median, for the mean nearly so. The
// stated errors are those found. Tolerances are four standard errors.
func TestCoverageOverSamples(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	const trials, n = 4000, 25
	var meanIn, medianIn, sum, square, stated float64
	for range trials {
		list := make([]Result, n)
		for i := range list {
			list[i] = sampled(math.Exp(r.ExpFloat64()), 0, 0)
		}
		x := OverSamples(list).Observables[0].Integrated
		if x.MeanLn.Low <= 1 && 1 <= x.MeanLn.High {
			meanIn += 1.0 / trials
		}
		if x.MedianLn.Low <= math.Ln2 && math.Ln2 <= x.MedianLn.High {
			medianIn += 1.0 / trials
		}
		sum += x.MedianLn.Value / trials
		square += x.MedianLn.Value * x.MedianLn.Value / trials
		stated += x.MedianLn.Err * x.MedianLn.Err / trials
	}
	se := math.Sqrt(0.05 * 0.95 / trials)
	if meanIn < 0.92-4*se || meanIn > 0.96+4*se {
		t.Errorf("the interval of the mean covers %.3f", meanIn)
	}
	// k = 8: P(at most 7 of 25 on one side) = 0.0216, twice that outside.
	if math.Abs(medianIn-0.9567) > 4*se {
		t.Errorf("the interval of the median covers %.3f, want 0.957", medianIn)
	}
	if ratio := stated / (square - sum*sum); ratio < 0.9 || ratio > 1.3 {
		t.Errorf("the stated variance of the median is %.2f of that found", ratio)
	}
}

// The spread from sample to sample is freed of the errors of single samples.
func TestSpreadOverSamples(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	const n = 4000
	list := make([]Result, n)
	for i := range list {
		tau := math.Exp(0.5*r.NormFloat64() + 0.3*r.NormFloat64())
		list[i] = sampled(tau, 0.3*tau, 0)
	}
	// The variance of a sample variance is 2/n of its square.
	if x := OverSamples(list).Observables[0].Integrated; math.Abs(x.Spread*x.Spread-0.25) > 4*0.34*math.Sqrt(2.0/n) {
		t.Errorf("spread %v, want 0.5", x.Spread)
	}
}
