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
	Open       bool        // it is defined between edges: every axis must be open
	// Build returns the Hamiltonian. l has MinAxes to MaxAxes axes. A parameter
	// that p lacks has its default.
	Build func(l lattice.Lattice, p Values) (Hamiltonian, error)
}

// Parameter is a number that a model takes.
type Parameter struct {
	Name    string // as in the study file: "coupling", "field"
	Default float64
	// Follows names the parameter whose value this one takes if it is not
	// given; Default is then not used.
	Follows string
	// Axes is the fewest axes of a lattice on which it means something.
	Axes int
	// Whole says that it is a whole number, from Min to Max.
	Whole    bool
	Min, Max int
	Doc      string
}

// Values are a model's parameters by name.
type Values map[string]float64

// Resolve returns v with every parameter of the model filled in.
func (m Model) Resolve(v Values) Values {
	out := make(Values, len(m.Parameters))
	for _, p := range m.Parameters {
		x, given := v[p.Name]
		switch {
		case given:
		case p.Follows != "":
			x = out[p.Follows]
		default:
			x = p.Default
		}
		out[p.Name] = x
	}
	return out
}

// Hamiltonian is what a model contributes to a kinetic.Spec.
type Hamiltonian struct {
	Levels   int
	Sites    int // per cell
	Families []kinetic.FamilySpec
	Tracked  []kinetic.TrackedSpec
	Absent   []kinetic.Absence
	// Powers are those powers of X, of Z and of Y = XZ that a bath operator of
	// that name stands for, unless a study says otherwise; each comes with its
	// inverse. Nil is the first power.
	Powers []int
}
