package pauli

import (
	"fmt"
	"strings"
	"unicode/utf8"

	"sojourn/kinetic/lattice"
)

// maxExponent bounds exponents, so that sums of offsets cannot overflow.
const maxExponent = 1 << 20

// SyntaxError tells what is wrong in the text of a polynomial, and where.
type SyntaxError struct {
	Offset  int // bytes before the fault
	Message string
}

func (e *SyntaxError) Error() string {
	return fmt.Sprintf("at character %d: %s", e.Offset+1, e.Message)
}

// ParsePolynomial reads a Laurent polynomial over Z_q in the first axes of the
// variables x, y, z, w: sums and differences of terms such as "1 + x^-1" or
// "2x*y^2 - 1". A term is an integer, a product of powers of variables, or
// both, the integer first; "*" and spaces between factors may be left out, and
// exponents may stand in braces. "0" is the zero polynomial. Errors are of type
// *SyntaxError. It panics if q < 2 or axes is not 1 to 4.
func ParsePolynomial(src string, q, axes int) (Polynomial, error) {
	if q < 2 || axes < 1 || axes > lattice.MaxAxes {
		panic(fmt.Sprintf("pauli: no polynomials over Z_%d on %d axes", q, axes))
	}
	r := reader{src: src, q: q, axes: axes}
	p, err := r.polynomial()
	if err != nil {
		return nil, err
	}
	if r.pos < len(r.src) {
		return nil, r.unexpected("'+', '-' or a variable")
	}
	return p, nil
}

// reader reads a polynomial from left to right. Its methods leave pos at the
// first byte that they did not use.
type reader struct {
	src     string
	pos     int
	q, axes int
}

func (r *reader) polynomial() (Polynomial, error) {
	var p Polynomial
	for first := true; ; first = false {
		sign := 1
		switch c := r.peek(); {
		case c == '-':
			sign = -1
			r.pos++
		case c == '+':
			r.pos++
		case !first:
			return collect(p, r.q), nil
		}
		m, err := r.term()
		if err != nil {
			return nil, err
		}
		m.Coeff = residue(sign*m.Coeff, r.q)
		p = append(p, m)
	}
}

// term reads an integer, variables, or both.
func (r *reader) term() (Monomial, error) {
	m := Monomial{Coeff: 1}
	c := r.peek()
	if !isDigit(c) && !isVariable(c) {
		return m, r.unexpected("a term: a number or one of the variables " + r.variables())
	}
	if isDigit(c) {
		m.Coeff = r.coefficient()
		c = r.peek()
	}
	for {
		star := c == '*'
		if star {
			r.pos++
			c = r.peek()
		}
		switch {
		case isVariable(c):
			if err := r.power(&m); err != nil {
				return m, err
			}
			c = r.peek()
		case isDigit(c):
			return m, r.fail("a number stands in front of the variables of its term; write 2x, and x^2 for a power")
		case star:
			return m, r.unexpected("a variable after '*'")
		default:
			return m, nil
		}
	}
}

// coefficient reads digits mod q.
func (r *reader) coefficient() int {
	n := 0
	for r.pos < len(r.src) && isDigit(r.src[r.pos]) {
		n = (n*10 + int(r.src[r.pos]-'0')) % r.q
		r.pos++
	}
	return n
}

// power reads a variable with its exponent and multiplies m by it.
func (r *reader) power(m *Monomial) error {
	start := r.pos
	axis := strings.IndexByte(axisNames, r.src[r.pos])
	if axis >= r.axes {
		return r.fail(fmt.Sprintf("'%c' is not an axis of this lattice; it has %s", r.src[r.pos], r.variables()))
	}
	r.pos++
	e := 1
	if r.peek() == '^' {
		r.pos++
		var err error
		if e, err = r.exponent(); err != nil {
			return err
		}
	}
	m.Exp[axis] += e
	if x := m.Exp[axis]; x > maxExponent || x < -maxExponent {
		r.pos = start
		return r.fail(fmt.Sprintf("the exponent of '%c' is beyond %d", axisNames[axis], maxExponent))
	}
	return nil
}

// exponent reads an integer with a sign, in braces or not.
func (r *reader) exponent() (int, error) {
	braced := r.peek() == '{'
	if braced {
		r.pos++
	}
	sign := 1
	if c := r.peek(); c == '-' || c == '+' {
		if c == '-' {
			sign = -1
		}
		r.pos++
	}
	if !isDigit(r.peek()) {
		return 0, r.unexpected("a whole number as exponent, as in x^-1")
	}
	n := 0
	for r.pos < len(r.src) && isDigit(r.src[r.pos]) {
		if n <= maxExponent { // beyond it, any value fails alike
			n = n*10 + int(r.src[r.pos]-'0')
		}
		r.pos++
	}
	if n > maxExponent {
		n = maxExponent + 1
	}
	if braced {
		if r.peek() != '}' {
			return 0, r.unexpected("'}' after the exponent")
		}
		r.pos++
	}
	return sign * n, nil
}

// peek skips white space and returns the next byte, or 0 at the end.
func (r *reader) peek() byte {
	for r.pos < len(r.src) && strings.IndexByte(" \t\r\n", r.src[r.pos]) >= 0 {
		r.pos++
	}
	if r.pos == len(r.src) {
		return 0
	}
	return r.src[r.pos]
}

// variables names the variables in use: "x", "x and y".
func (r *reader) variables() string {
	list := strings.Split(axisNames[:r.axes], "")
	if len(list) == 1 {
		return list[0]
	}
	return strings.Join(list[:len(list)-1], ", ") + " and " + list[len(list)-1]
}

// unexpected says what stands at pos and what would be right there.
func (r *reader) unexpected(right string) error {
	if r.pos >= len(r.src) {
		return r.fail("the text ends where " + right + " should follow")
	}
	c, _ := utf8.DecodeRuneInString(r.src[r.pos:])
	return r.fail(fmt.Sprintf("found %q, expected %s", c, right))
}

func (r *reader) fail(message string) error { return &SyntaxError{Offset: r.pos, Message: message} }

func isDigit(c byte) bool { return c >= '0' && c <= '9' }

func isVariable(c byte) bool { return c != 0 && strings.IndexByte(axisNames, c) >= 0 }
