package pauli

import (
	"encoding/binary"

	"sojourn/kinetic/lattice"
)

// Normal returns the operator moved so that the least exponent of all its
// factors is 0 along every axis. Two operators have equal normal forms if and
// only if one is a translate of the other.
func (o Operator) Normal() Operator {
	factors := o.Factors()
	if len(factors) == 0 {
		return o
	}
	low := factors[0].Exp
	for _, f := range factors {
		for a := range low {
			low[a] = min(low[a], f.Exp[a])
		}
	}
	return o.Shift(low.Neg())
}

// Shift returns the operator moved by e.
func (o Operator) Shift(e lattice.Offset) Operator {
	return Operator{X: shift(o.X, e), Z: shift(o.Z, e), Extent: o.Extent}
}

func shift(list []Polynomial, e lattice.Offset) []Polynomial {
	if list == nil {
		return nil
	}
	out := make([]Polynomial, len(list))
	for i, p := range list {
		out[i] = p.Shift(e)
	}
	return out
}

// AppendCanonical appends the operator's extent and factors to dst, in a form
// that depends on nothing else and that no other operator has. It keeps the
// operator where it is: see Normal.
func (o Operator) AppendCanonical(dst []byte) []byte {
	var extent byte
	for a, e := range o.Extent {
		if e {
			extent |= 1 << a
		}
	}
	dst = append(dst, extent)
	factors := o.Factors()
	dst = binary.AppendUvarint(dst, uint64(len(factors)))
	for _, f := range factors {
		for _, e := range f.Exp {
			dst = binary.AppendVarint(dst, int64(e))
		}
		dst = binary.AppendUvarint(dst, uint64(f.Site))
		dst = binary.AppendUvarint(dst, uint64(f.X))
		dst = binary.AppendUvarint(dst, uint64(f.Z))
	}
	return dst
}
