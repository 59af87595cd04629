package kinetic

import (
	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// Spec is a thermal generator before compilation: a commuting Hamiltonian, its
// tracked operators, and the bath.
type Spec struct {
	Lattice  lattice.Lattice
	Levels   int // q, levels of a site
	Sites    int // sites per cell
	Families []FamilySpec
	Tracked  []TrackedSpec
	Bath     []BathOperator
	Beta     float64 // inverse temperature, >= 0

	// Absent lists sites that cells at open edges lack, as the rough edges of a
	// planar code do. Nothing acts on an absent site, and a term that would is
	// cut as if the lattice ended there.
	Absent []Absence
}

// Absence says that a site is missing from every cell at one edge: the cells
// with the first coordinate along an axis, or the last. Along a periodic axis it
// says nothing.
type Absence struct {
	Site int // of the cell
	Axis int
	Last bool
}

// FamilySpec is one term of the Hamiltonian per cell:
// E(s) = -Coupling*(-1)^s for q = 2, in general -Coupling*Shape[s].
type FamilySpec struct {
	Name     string // "bond-x"
	Group    string // families summed under one name: "bond"; "" for none
	Operator pauli.Operator
	Coupling float64   // J; a family with J = 0 is dropped by the compiler
	Shape    []float64 // for q > 2: E(s) = -J*Shape[s]; nil for q = 2
	Cut      Cut

	// Signs marks, by cell, the terms whose coupling is -J (1, else 0); nil for
	// none. The level of such a term is that of -1 times the operator, so that
	// 0 is still the satisfied one; q = 2 only.
	Signs []uint8
	// Couplings gives J term by term, by cell, where its size varies; nil for
	// Coupling everywhere, which then only says that the family is present.
	Couplings []float64
}

// TrackedSpec is a product operator without energy whose value is followed. It
// must commute with every family.
type TrackedSpec struct {
	Name     string
	Operator pauli.Operator
	// Order marks the operator whose lattice sum is the magnetization.
	Order bool
}

// BathOperator couples one site to the bath: on each listed site of every cell
// the operator X^X Z^Z fires at the rate of Law.
type BathOperator struct {
	Name  string // "X", "Y", "Z"
	X, Z  int    // powers
	Sites []int  // sites of the cell; nil for all
	Law   bath.Law
}
