package pauli

import (
	"fmt"

	"sojourn/kinetic/lattice"
)

// SyntaxError tells what is wrong in the text of a polynomial, and where.
type SyntaxError struct {
	Offset  int // bytes before the fault
	Message string
}

func (e *SyntaxError) Error() string { return fmt.Sprintf("character %d: %s", e.Offset+1, e.Message) }

// ParsePolynomial reads a Laurent polynomial over Z_q in the first axes of the
// variables x, y, z, w, such as "1 + x^-1" or "2x*y^2 - 1". Integer
// coefficients stand before the variables; "0" is the zero polynomial. Errors
// are of type *SyntaxError.
func ParsePolynomial(src string, q, axes int) (Polynomial, error) {
	return nil, &SyntaxError{Message: "not yet"}
}

// ParsePart reads what stands on one site of the cell: a polynomial, or a
// product along whole axes, "line x", "plane x y" or "volume x y z", which is
// the polynomial 1 with that extent. Errors are of type *SyntaxError.
func ParsePart(src string, q, axes int) (Polynomial, [lattice.MaxAxes]bool, error) {
	p, err := ParsePolynomial(src, q, axes)
	return p, [lattice.MaxAxes]bool{}, err
}

// String writes the polynomial so that ParsePolynomial reads it back.
func (p Polynomial) String() string { return "" }
