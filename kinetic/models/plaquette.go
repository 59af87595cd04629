package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// Spin models without phase transition at positive temperature whose dynamics
// slows down like that of a glass.

var squarePlaquette = Model{
	Name:    "square-plaquette",
	Summary: "one spin per cell, products of four around the squares, uniform field",
	Formula: "H = -coupling sum_squares ZZZZ - field sum_i Z_i",
	Ground:  "2^(Lx + Ly - 1) ground states on a torus without a field: rows and columns turn at no cost",
	Paper:   "A. Lipowski, J. Phys. A 30, 7365 (1997)",
	MinAxes: 2,
	MaxAxes: 2,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of a square"},
		{Name: "field", Default: 0, Doc: "energy of a spin in the field; positive favours +1"},
	},
	Classical: true,
	Build: func(_ lattice.Lattice, p Values) (Hamiltonian, error) {
		return plaquetteModel("1 + x + y + x y", p), nil
	},
}

var trianglePlaquette = Model{
	Name:    "triangular-plaquette",
	Summary: "one spin per cell, products of three around the triangles of one orientation, uniform field",
	Formula: "H = -coupling sum_triangles ZZZ - field sum_i Z_i, a triangle being a cell and its neighbours along x and y",
	Ground:  "1 ground state on an L x L torus without a field if L is a power of 2; 2^d with d the degree of gcd((1 + x)^L + 1, x^L + 1) over two elements",
	Paper:   "M. E. J. Newman, C. Moore, Phys. Rev. E 60, 5068 (1999)",
	MinAxes: 2,
	MaxAxes: 2,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of a triangle"},
		{Name: "field", Default: 0, Doc: "energy of a spin in the field; positive favours +1"},
	},
	Classical: true,
	Build: func(_ lattice.Lattice, p Values) (Hamiltonian, error) {
		return plaquetteModel("1 + x + y", p), nil
	},
}

func plaquetteModel(term string, p Values) Hamiltonian {
	return Hamiltonian{
		Levels: 2,
		Sites:  1,
		Families: []kinetic.FamilySpec{
			{Name: "plaquette", Operator: zs(term), Coupling: p["coupling"]},
			field(p),
		},
		Tracked: []kinetic.TrackedSpec{spin()},
	}
}
