package models

import (
	"sojourn/kinetic/lattice"
)

var isingGauge = Model{
	Name:    "ising-gauge",
	Summary: "spins on the edges, products of Z around the faces; flips around corners are not fixed",
	Formula: "H = -coupling sum_faces ZZZZ",
	Ground:  "2^(N - 1 + d) ground states on a torus of N cells in d dimensions: flips around corners and across the lattice cost nothing",
	Paper:   "F. J. Wegner, J. Math. Phys. 12, 2259 (1971)",
	MinAxes: 2,
	MaxAxes: lattice.MaxAxes,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of a face"},
	},
	Classical: true,
	Build: func(l lattice.Lattice, p Values) (Hamiltonian, error) {
		return Hamiltonian{
			Levels:   2,
			Sites:    l.Axes,
			Families: edgePlaquettes(l.Axes, 2, p["coupling"]),
			Tracked:  edgeLoops(l.Axes, 2),
		}, nil
	},
}
