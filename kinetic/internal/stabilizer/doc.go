// Package stabilizer answers two questions about a list of commuting products
// of generalised Pauli operators, the rows: how large is the group that they
// generate, and which eigenvalues can they have together (D. Gottesman,
// Caltech thesis (1997), arXiv:quant-ph/9705052, chapter 3).
//
// A row with powers x, z on its sites stands for
//
//	T = prod tau^(x z) X^x Z^z,
//
// with tau = exp(i pi/q) for even q (so that Y = i X Z for q = 2) and
// tau = exp(2 pi i/q)^((q+1)/2) for odd q. Then T^q = 1, and for odd q the
// product of commuting rows carries no phase. A row has level s if its
// eigenvalue is exp(2 pi i s/q); a relation, a product of rows that is a
// multiple of the identity, ties levels together.
//
// Four routes are tried in turn: rows that a site shows to be independent are
// set aside; what is left is counted by connected components if every site is
// in at most two rows or every row has at most two factors; otherwise it is
// eliminated, with bits for q = 2, along the order in which sites are numbered.
// Elimination is limited by a budget, counted in words, so that the outcome
// depends on the input alone.
package stabilizer
