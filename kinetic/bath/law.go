package bath

import "math/big"

// Kind names a law.
type Kind string

// The laws.
const (
	HeatBath   Kind = "heat-bath"
	Metropolis Kind = "metropolis"
	Power      Kind = "power"
	Symmetric  Kind = "symmetric"
	Table      Kind = "table"
)

// Law is the rate G(w) at which the bath accepts a jump that hands it the
// energy w = E(before) - E(after), at a given inverse temperature. The zero
// value is not valid; Validate lists what is wrong.
type Law struct {
	Kind     Kind
	Rate     float64   // Gamma, or kappa for Power; > 0
	Exponent float64   // p >= 1, Power only
	Cutoff   float64   // w_c > 0, Power only; 0 means none
	Energies []float64 // w >= 0, Table only, increasing
	Rates    []float64 // G at Energies, Table only
}

// Exact returns the rational number whose decimal expansion is the shortest one
// that denotes x: 1/10 for 0.1. Couplings are compared in this form, so that
// 0.1 + 0.2 - 0.3 is 0.
func Exact(x float64) *big.Rat { return exact(x) }
