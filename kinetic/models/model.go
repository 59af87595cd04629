package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// Model is a built-in Hamiltonian.
type Model struct {
	Name       string
	Summary    string      // one line
	Formula    string      // its terms
	Ground     string      // its ground states or encoded qubits, in words
	Paper      string      // where it is from
	MinAxes    int         // fewest axes it is defined on
	MaxAxes    int         // most axes
	Parameters []Parameter // beyond the lattice
	Classical  bool        // every term is diagonal; the bath acts by X
	Build      func(l lattice.Lattice, p Values) (Hamiltonian, error)
}

// Parameter is a number that a model takes.
type Parameter struct {
	Name    string // as in the study file: "coupling", "field"
	Default float64
	Doc     string
}

// Values are a model's parameters by name, defaults filled in.
type Values map[string]float64

// Hamiltonian is what a model contributes to a kinetic.Spec.
type Hamiltonian struct {
	Levels   int
	Sites    int
	Families []kinetic.FamilySpec
	Tracked  []kinetic.TrackedSpec
}
