package pauli

import "sojourn/kinetic/lattice"

// Monomial is Coeff * x^Exp[0] y^Exp[1] z^Exp[2] w^Exp[3], a power of one
// generalised Pauli operator on the cell at offset Exp.
type Monomial struct {
	Exp   lattice.Offset
	Coeff int // 1..q-1
}

// Polynomial is a Laurent polynomial over Z_q: monomials in increasing order
// of Exp (lattice.Offset.Less), no offset twice, no zero coefficient. The
// empty polynomial is 0.
type Polynomial []Monomial

// Operator is a product of X^a Z^b over sites near one cell.
type Operator struct {
	X []Polynomial // powers of X, one polynomial per site of the cell; nil for none
	Z []Polynomial // powers of Z, likewise
	// Extent marks the axes along which the operator is the product over the
	// whole lattice: a line has one, a membrane two. The polynomials then give
	// its cross-section.
	Extent [lattice.MaxAxes]bool
}

// Extended reports whether the operator runs along at least one axis.
func (o Operator) Extended() bool { return o.Extent != [lattice.MaxAxes]bool{} }

// At returns the X and Z powers of the operator on the given site of the cell
// at offset e from the operator's own (its extent aside).
func (o Operator) At(site int, e lattice.Offset) (x, z int) {
	return coefficient(o.X, site, e), coefficient(o.Z, site, e)
}

func coefficient(p []Polynomial, site int, e lattice.Offset) int {
	if p == nil {
		return 0
	}
	for _, m := range p[site] {
		if m.Exp == e {
			return m.Coeff
		}
	}
	return 0
}

// Factor is one site's share in an operator: X^X Z^Z on Site of the cell at Exp.
type Factor struct {
	Site int
	Exp  lattice.Offset
	X, Z int
}

// Factors lists the operator's sites in increasing order of Exp, then Site.
func (o Operator) Factors() []Factor {
	index := map[Factor]int{}
	var out []Factor
	add := func(site int, m Monomial, x, z int) {
		key := Factor{Site: site, Exp: m.Exp}
		i, ok := index[key]
		if !ok {
			i = len(out)
			index[key] = i
			out = append(out, key)
		}
		out[i].X += x
		out[i].Z += z
	}
	for s, p := range o.X {
		for _, m := range p {
			add(s, m, m.Coeff, 0)
		}
	}
	for s, p := range o.Z {
		for _, m := range p {
			add(s, m, 0, m.Coeff)
		}
	}
	sortFactors(out)
	return out
}
