package bath

import "math/big"

// Validate returns what is wrong with the law at inverse temperature beta, all
// faults joined, or nil.
func (l Law) Validate(beta float64) error { return nil }

// At returns G(w) at inverse temperature beta >= 0. It fails only for a table
// that lacks the energy.
func (l Law) At(w *big.Rat, beta float64) (float64, error) { return 0, nil }

// CheckKMS verifies G(-w) = exp(-beta w) G(w) to a relative 1e-12 at all given
// energies.
func CheckKMS(l Law, beta float64, energies []*big.Rat) error { return nil }

// AppendCanonical appends a form of the law that depends on its values only.
func (l Law) AppendCanonical(dst []byte) []byte { return dst }

// KindDoc is a law and one line about it.
type KindDoc struct {
	Kind    Kind
	Formula string
	Doc     string
	Keys    []string // of the study file, beyond law and rate
}

// Kinds lists the laws in the order in which help texts name them.
func Kinds() []KindDoc { return nil }
