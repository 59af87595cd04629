package observables

import (
	"errors"
	"fmt"
	"math"

	"sojourn/kinetic"
)

// Plan says for how long a unit runs and what is taken besides the observables.
type Plan struct {
	Settle float64 // time before the first sample
	Span   float64 // time recorded
	Step   float64 // time between samples

	// Covariance names the family, group of families, or local tracked
	// operator whose spatial covariance is taken; "" for none. Every is the
	// time between snapshots, rounded to a multiple of Step. Limit is the
	// largest component of the displacements taken in all directions.
	Covariance string
	Every      float64
	Limit      int
}

// Samples returns the number of samples of a unit, round(Span/Step).
func (p Plan) Samples() int64 { return int64(math.Round(p.Span / p.Step)) }

// Check says everything that is wrong with the plan on the given generator.
func (p Plan) Check(g *kinetic.Generator) error {
	var faults []error
	finite := func(name string, v, least float64) {
		if math.IsNaN(v) || math.IsInf(v, 0) || v < least {
			faults = append(faults, fmt.Errorf("%s is %v; it must be a number of at least %v", name, v, least))
		}
	}
	finite("settle", p.Settle, 0)
	finite("span", p.Span, 0)
	finite("step", p.Step, 0)
	switch {
	case len(faults) > 0:
	case p.Step == 0:
		faults = append(faults, errors.New("step is 0; it must be positive"))
	case p.Step > p.Span:
		faults = append(faults, fmt.Errorf("step %v is longer than span %v", p.Step, p.Span))
	case (p.Settle+p.Span)/p.Step > 1<<52:
		faults = append(faults, fmt.Errorf("step %v is too short for settle + span = %v: times could not be told apart", p.Step, p.Settle+p.Span))
	}
	if p.Covariance != "" {
		families, err := FamiliesOf(g, p.Covariance)
		if err == nil {
			o := Observable{Kind: Local, Families: families}
			err = o.findComplex(g)
		}
		if err != nil {
			faults = append(faults, fmt.Errorf("covariance: %w", err))
		}
		if !(p.Every > 0) || math.IsInf(p.Every, 0) {
			faults = append(faults, fmt.Errorf("every is %v; it must be a positive time", p.Every))
		}
		if p.Limit < 0 {
			faults = append(faults, fmt.Errorf("limit is %d; it must not be negative", p.Limit))
		}
	}
	return errors.Join(faults...)
}
