package analysis

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Estimate is a number with its error, or the reason why there is none.
type Estimate struct {
	Value float64
	Err   float64 // one standard error
	Low   float64 // 95 % interval (Student t; relaxation times on the scale of their logarithm)
	High  float64
	Units int  // blocks that were resampled; degrees of freedom are one fewer
	OK    bool // false: all numbers are zero, and Code and Reason say why
	Code  string
	// Reason is a clause that continues "there is no tau_int: ".
	Reason string
}

// Bound is a one-sided limit at the stated confidence, or the reason why there
// is none.
type Bound struct {
	Value      float64
	Confidence float64 // 0.95
	OK         bool
	Code       string
	Reason     string
}

// Interval is a two-sided interval that rests on an assumption, without a best
// value inside it. High is +Inf where the data give no upper limit.
type Interval struct {
	Low, High  float64
	Confidence float64 // 0.95
	OK         bool
	Code       string
	Reason     string
}

func missing(code, reason string) Estimate {
	return Estimate{Code: known(code), Reason: reason}
}

func noBound(code, reason string) Bound {
	return Bound{Code: known(code), Reason: reason}
}

func noInterval(code, reason string) Interval {
	return Interval{Code: known(code), Reason: reason}
}

// studentT returns the quantile of Student's t that is exceeded with
// probability tail.
func studentT(tail float64, dof int) float64 {
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: float64(dof)}.Quantile(1 - tail)
}

// symmetric returns value +- t SE with units-1 degrees of freedom.
func symmetric(value, se float64, units int) Estimate {
	t := studentT(0.025, units-1)
	return Estimate{Value: value, Err: se, Low: value - t*se, High: value + t*se, Units: units, OK: true}
}

// logarithmic returns a positive quantity whose logarithm and its standard
// error are given; the interval is exp(ln +- t SE).
func logarithmic(ln, se float64, units int) Estimate {
	t := studentT(0.025, units-1)
	v := math.Exp(ln)
	return Estimate{Value: v, Err: v * se, Low: v * math.Exp(-t*se), High: v * math.Exp(t*se), Units: units, OK: true}
}

// withError prints a value with its error in the last digits: 12.41(7).
func withError(value, err float64) string {
	if !(err > 0) || math.IsInf(err, 0) {
		return fmt.Sprintf("%.4g", value)
	}
	place := int(math.Floor(math.Log10(err)))
	if err/math.Pow(10, float64(place)) < 2.95 { // two digits of a small leading one
		place--
	}
	unit := math.Pow(10, float64(place))
	switch {
	case place >= 0:
		return fmt.Sprintf("%.0f(%.0f)", math.Round(value/unit)*unit, math.Round(err/unit)*unit)
	case err >= 1: // the point is within the error
		return fmt.Sprintf("%.*f(%.*f)", -place, value, -place, err)
	}
	return fmt.Sprintf("%.*f(%.0f)", -place, value, err/unit)
}

// String gives the value with its error, or the reason.
func (e Estimate) String() string {
	if !e.OK {
		return "missing: " + e.Reason
	}
	return fmt.Sprintf("%.5g +- %.2g [%.5g, %.5g]", e.Value, e.Err, e.Low, e.High)
}
