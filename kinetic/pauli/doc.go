// Package pauli describes products of generalised Pauli operators by Laurent
// polynomials over Z_q (J. Haah, Commun. Math. Phys. 324, 351 (2013)).
//
// A translation-invariant family of operators is one polynomial per site of the
// cell for its X powers and one for its Z powers; the monomial x^a y^b z^c w^d
// is the cell at offset (a, b, c, d). The convention is Z X = w X Z with
// w = exp(2 pi i/q).
package pauli
