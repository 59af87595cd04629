package models

import (
	"strings"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

var cluster = Model{
	Name:    "cluster",
	Summary: "X on each site with Z on its neighbours",
	Formula: "H = -coupling sum_i X_i prod_<ij> Z_j; at open edges with the neighbours that are there",
	Ground:  "1 ground state, the cluster state: no encoded qubit",
	Paper:   "H. J. Briegel, R. Raussendorf, Phys. Rev. Lett. 86, 910 (2001)",
	MinAxes: 1,
	MaxAxes: 2,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of a term"},
	},
	Build: func(l lattice.Lattice, p Values) (Hamiltonian, error) {
		var neighbours []string
		for _, v := range axes[:l.Axes] {
			neighbours = append(neighbours, v+"^-1 + "+v)
		}
		term := xs("1")
		term.Z = zs(strings.Join(neighbours, " + ")).Z
		h := Hamiltonian{Levels: 2, Sites: 1, Families: []kinetic.FamilySpec{
			{Name: "cluster", Operator: term, Coupling: p["coupling"], Cut: kinetic.Truncate}}}
		if l.Periodic() {
			// The product of all terms: each Z occurs an even number of times.
			parity := []string{"line x", "plane x y"}[l.Axes-1]
			h.Tracked = append(h.Tracked, kinetic.TrackedSpec{Name: "parity", Operator: xs(parity)})
		}
		return h, nil
	},
}
