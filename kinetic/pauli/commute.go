package pauli

import "sojourn/kinetic/lattice"

// Commute reports whether a commutes with every translate of b on an infinite
// lattice: whether the polynomial
//
//	sum over sites of a_X conj(b_Z) - a_Z conj(b_X)
//
// vanishes mod q (J. Haah, Commun. Math. Phys. 324, 351 (2013)). If not, it
// returns the nearest offset to which b is moved against a where they fail.
// Along the extent of either operator the coefficients are summed, and the
// offset is 0. The condition is sufficient on every finite periodic lattice,
// not necessary: small ones fold.
func Commute(a, b Operator, q int) (offset lattice.Offset, ok bool) {
	var sum Polynomial
	for site := range max(len(a.X), len(a.Z)) {
		sum = append(sum, part(a.X, site).Mul(part(b.Z, site).Conj(), q)...)
		sum = append(sum, part(a.Z, site).Mul(part(b.X, site).Conj(), q).Scale(-1, q)...)
	}
	for i := range sum {
		for axis := range lattice.MaxAxes {
			if a.Extent[axis] || b.Extent[axis] {
				sum[i].Exp[axis] = 0
			}
		}
	}
	sum = collect(sum, q)
	for i, m := range sum {
		if i == 0 || distance(m.Exp) < distance(offset) {
			offset = m.Exp
		}
	}
	return offset, len(sum) == 0
}

// part returns the polynomial of one site; nil lists are zero.
func part(list []Polynomial, site int) Polynomial {
	if site >= len(list) {
		return nil
	}
	return list[site]
}

func distance(o lattice.Offset) int {
	d := 0
	for _, x := range o {
		d += max(x, -x)
	}
	return d
}
