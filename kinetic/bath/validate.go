package bath

import (
	"errors"
	"fmt"
	"math"
)

// Validate returns what is wrong with the law at inverse temperature beta, all
// faults joined, or nil.
func (l Law) Validate(beta float64) error {
	var faults []error
	fault := func(format string, args ...any) { faults = append(faults, fmt.Errorf(format, args...)) }
	if !(beta >= 0) || math.IsInf(beta, 0) {
		fault("beta is %v; it must be a number from 0 up", beta)
	}
	known := false
	for _, k := range Kinds() {
		known = known || k.Kind == l.Kind
	}
	if !known {
		return errors.Join(append(faults, fmt.Errorf("there is no law %q; there are %s", l.Kind, kindNames()))...)
	}
	if l.Kind == Table {
		return errors.Join(append(faults, l.tableFaults()...)...)
	}
	if !(l.Rate > 0) || math.IsInf(l.Rate, 0) {
		fault("rate is %v; it must be a positive number", l.Rate)
	}
	if l.Kind == Power {
		if !(l.Exponent >= 1) || math.IsInf(l.Exponent, 0) {
			fault("exponent is %v; the rate at zero energy is finite only for 1 or more", l.Exponent)
		}
		if !(l.Cutoff >= 0) || math.IsInf(l.Cutoff, 0) {
			fault("cutoff is %v; it must be a positive energy, or left out for none", l.Cutoff)
		}
		if beta == 0 {
			fault("a power law has no rates at beta = 0: its bath holds infinitely many quanta")
		}
	}
	return errors.Join(faults...)
}

func (l Law) tableFaults() []error {
	if len(l.Energies) == 0 {
		return []error{errors.New("the table has no energies")}
	}
	if len(l.Rates) != len(l.Energies) {
		return []error{fmt.Errorf("the table has %d energies and %d rates; each energy needs one rate", len(l.Energies), len(l.Rates))}
	}
	var faults []error
	positive := false
	for i, e := range l.Energies {
		if !(e >= 0) || math.IsInf(e, 0) {
			faults = append(faults, fmt.Errorf("energy %v of the table: energies are finite and not negative, since negative ones follow from the temperature", e))
		} else if i > 0 && e <= l.Energies[i-1] {
			faults = append(faults, fmt.Errorf("energy %v of the table follows %v; energies must increase", e, l.Energies[i-1]))
		}
		if r := l.Rates[i]; !(r >= 0) || math.IsInf(r, 0) {
			faults = append(faults, fmt.Errorf("rate %v of the table: rates are finite and not negative", r))
		} else {
			positive = positive || r > 0
		}
	}
	if !positive && len(faults) == 0 {
		faults = append(faults, errors.New("all rates of the table are 0, so that nothing ever happens"))
	}
	return faults
}
