package pauli

import (
	"slices"
	"strconv"
	"strings"

	"sojourn/kinetic/lattice"
)

// axisNames are the variables of the axes, in order.
const axisNames = "xyzw"

// collect brings monomials into the canonical form of a Polynomial over Z_q:
// sorted, equal offsets added, zeros left out. It works in place.
func collect(p Polynomial, q int) Polynomial {
	slices.SortFunc(p, func(a, b Monomial) int {
		switch {
		case a.Exp.Less(b.Exp):
			return -1
		case b.Exp.Less(a.Exp):
			return 1
		}
		return 0
	})
	n := 0
	for i := 0; i < len(p); {
		m := p[i]
		m.Coeff = residue(m.Coeff, q)
		for i++; i < len(p) && p[i].Exp == m.Exp; i++ {
			m.Coeff = residue(m.Coeff+residue(p[i].Coeff, q), q)
		}
		if m.Coeff != 0 {
			p[n] = m
			n++
		}
	}
	if n == 0 {
		return nil
	}
	return p[:n]
}

// residue returns a mod q in 0..q-1.
func residue(a, q int) int {
	a %= q
	if a < 0 {
		a += q
	}
	return a
}

// Add returns p + r over Z_q.
func (p Polynomial) Add(r Polynomial, q int) Polynomial {
	return collect(slices.Concat(p, r), q)
}

// Scale returns c p over Z_q.
func (p Polynomial) Scale(c, q int) Polynomial {
	out := slices.Clone(p)
	for i := range out {
		out[i].Coeff *= residue(c, q)
	}
	return collect(out, q)
}

// Mul returns the product p r over Z_q.
func (p Polynomial) Mul(r Polynomial, q int) Polynomial {
	out := make(Polynomial, 0, len(p)*len(r))
	for _, a := range p {
		for _, b := range r {
			out = append(out, Monomial{Exp: a.Exp.Add(b.Exp), Coeff: residue(a.Coeff*b.Coeff, q)})
		}
	}
	return collect(out, q)
}

// Conj returns p with every exponent negated: the mirror image.
func (p Polynomial) Conj() Polynomial {
	out := slices.Clone(p)
	for i := range out {
		out[i].Exp = out[i].Exp.Neg()
	}
	slices.Reverse(out) // negation reverses the order
	return out
}

// Shift returns p times the monomial of exponent e.
func (p Polynomial) Shift(e lattice.Offset) Polynomial {
	out := slices.Clone(p)
	for i := range out {
		out[i].Exp = out[i].Exp.Add(e)
	}
	return out
}

// String writes the polynomial so that ParsePolynomial reads it back, the
// constant first: "1 + x^-1 + 2 x y".
func (p Polynomial) String() string {
	if len(p) == 0 {
		return "0"
	}
	var b strings.Builder
	write := func(m Monomial) {
		if b.Len() > 0 {
			b.WriteString(" + ")
		}
		b.WriteString(m.String())
	}
	for _, m := range p {
		if m.Exp == (lattice.Offset{}) {
			write(m)
		}
	}
	for _, m := range p {
		if m.Exp != (lattice.Offset{}) {
			write(m)
		}
	}
	return b.String()
}

// String writes the monomial: "1", "x^-1", "2 x y".
func (m Monomial) String() string {
	var parts []string
	if m.Coeff != 1 || m.Exp == (lattice.Offset{}) {
		parts = append(parts, strconv.Itoa(m.Coeff))
	}
	for a, e := range m.Exp {
		switch e {
		case 0:
		case 1:
			parts = append(parts, axisNames[a:a+1])
		default:
			parts = append(parts, axisNames[a:a+1]+"^"+strconv.Itoa(e))
		}
	}
	return strings.Join(parts, " ")
}
