// Package pauli describes products of generalised Pauli operators by Laurent
// polynomials over Z_q (J. Haah, Commun. Math. Phys. 324, 351 (2013)).
//
// A translation-invariant family of operators is one polynomial per site of the
// cell for its X powers and one for its Z powers; the monomial x^a y^b z^c w^d
// is the cell at offset (a, b, c, d). The convention is Z X = w X Z with
// w = exp(2 pi i/q). The operator with powers x, z on its sites has the phase
//
//	prod tau^(x z) X^x Z^z,
//
// tau = exp(i pi/q) for even q and w^((q+1)/2) for odd q, so that its q-th
// power is 1: Y = i X Z for q = 2. Its level s is that of the eigenvalue w^s.
package pauli
