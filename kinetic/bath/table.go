package bath

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"
)

// table returns the rate listed for |w|, times exp(-beta |w|) if w < 0.
func (l Law) table(w *big.Rat, beta float64) (float64, error) {
	a := new(big.Rat).Abs(w)
	for i, e := range l.Energies {
		if Exact(e).Cmp(a) != 0 {
			continue
		}
		if w.Sign() < 0 {
			return l.Rates[i] * math.Exp(-beta*float(a)), nil
		}
		return l.Rates[i], nil
	}
	return 0, &MissingEnergyError{Energy: a, Listed: l.Energies}
}

// MissingEnergyError reports an energy that jumps exchange with the bath and
// that a table does not list.
type MissingEnergyError struct {
	Energy *big.Rat // absolute value
	Listed []float64
}

func (e *MissingEnergyError) Error() string {
	listed := make([]string, len(e.Listed))
	for i, w := range e.Listed {
		listed[i] = strconv.FormatFloat(w, 'g', -1, 64)
	}
	return fmt.Sprintf("the table gives no rate for the energy %s, which occurs; it lists %s",
		strconv.FormatFloat(float(e.Energy), 'g', -1, 64), strings.Join(listed, ", "))
}

// float returns the double nearest to w.
func float(w *big.Rat) float64 {
	x, _ := w.Float64()
	return x
}
