// Package models holds the built-in Hamiltonians: their terms as polynomials
// over the cells of the lattice, with the tracked operators that belong to
// them. Each group of related models has a file of its own.
//
// Signs: a term with coupling J > 0 has the energy -J if satisfied and, with two
// levels, +J if not; every model has H = -sum of coupling times term. With more
// levels a term is worth [s = 0] (Potts) or cos(2 pi s/q).
package models
