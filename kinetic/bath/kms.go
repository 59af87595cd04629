package bath

import (
	"encoding/binary"
	"fmt"
	"math"
	"math/big"
)

// At returns G(w) at inverse temperature beta. The law must be valid at beta.
// A rate below the smallest double is 0. It fails if a table lacks the energy
// (*MissingEnergyError) or if the rate is beyond the largest double.
func (l Law) At(w *big.Rat, beta float64) (float64, error) {
	var g float64
	e := float(w)
	switch l.Kind {
	case HeatBath:
		g = l.Rate * heatBath(beta*e)
	case Metropolis:
		g = l.Rate * metropolis(beta*e)
	case Symmetric:
		g = l.Rate * symmetric(beta*e)
	case Power:
		if !(beta > 0) {
			return 0, fmt.Errorf("a power law has no rates at beta = %v", beta)
		}
		g = l.Rate * power(e, beta, l.Exponent, l.Cutoff)
	case Table:
		return l.table(w, beta)
	default:
		return 0, fmt.Errorf("there is no law %q; there are %s", l.Kind, kindNames())
	}
	if math.IsInf(g, 0) || math.IsNaN(g) {
		return 0, fmt.Errorf("the rate of the %s law at the energy %v is beyond the largest number at beta = %v", l.Kind, e, beta)
	}
	return g, nil
}

// CheckKMS verifies
//
//	G(-w) = exp(-beta w) G(w)
//
// to a relative 1e-12 at all given energies. Rates below 1e-300, where doubles
// thin out, are compared to within that number.
func CheckKMS(l Law, beta float64, energies []*big.Rat) error {
	const relative, least = 1e-12, 1e-300
	for _, w := range energies {
		up := new(big.Rat).Abs(w)
		forth, err := l.At(up, beta)
		if err != nil {
			return err
		}
		back, err := l.At(new(big.Rat).Neg(up), beta)
		if err != nil {
			return err
		}
		// exp(-beta w) may vanish where the product does not.
		want := math.Exp(math.Log(forth) - beta*float(up))
		if x := math.Exp(-beta * float(up)); x > least {
			want = x * forth
		}
		if !(math.Abs(back-want) <= relative*want+least) {
			return fmt.Errorf("the %s law breaks detailed balance at the energy %v: G(-w) = %v, exp(-beta w) G(w) = %v",
				l.Kind, float(up), back, want)
		}
	}
	return nil
}

// AppendCanonical appends a form of the law that depends only on the numbers
// that its kind uses.
func (l Law) AppendCanonical(dst []byte) []byte {
	dst = binary.AppendUvarint(dst, uint64(len(l.Kind)))
	dst = append(dst, l.Kind...)
	number := func(x float64) {
		if x == 0 {
			x = 0 // not the negative zero
		}
		dst = binary.BigEndian.AppendUint64(dst, math.Float64bits(x))
	}
	if l.Kind == Table {
		dst = binary.AppendUvarint(dst, uint64(len(l.Energies)))
		for i, e := range l.Energies {
			number(e)
			number(l.Rates[i])
		}
		return dst
	}
	number(l.Rate)
	if l.Kind == Power {
		number(l.Exponent)
		number(l.Cutoff)
	}
	return dst
}
