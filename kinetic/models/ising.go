package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

var ising = Model{
	Name:    "ising",
	Summary: "Ising model: one spin per cell, equal nearest-neighbour bonds, uniform field",
	Formula: "H = -coupling sum_<ij> Z_i Z_j - field sum_i Z_i",
	Ground:  "2 ground states (all up, all down) without a field, 1 with",
	Paper:   "E. Ising, Z. Phys. 31, 253 (1925)",
	MinAxes: 1,
	MaxAxes: lattice.MaxAxes,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of a bond; positive favours equal spins"},
		{Name: "field", Default: 0, Doc: "energy of a spin in the field; positive favours +1"},
	},
	Classical: true,
	Build: func(l lattice.Lattice, p Values) (Hamiltonian, error) {
		h := Hamiltonian{Levels: 2, Sites: 1}
		for _, v := range axes[:l.Axes] {
			h.Families = append(h.Families, kinetic.FamilySpec{
				Name: "bond-" + v, Group: "bond", Operator: zs("1 + " + v), Coupling: p["coupling"]})
		}
		h.Families = append(h.Families, kinetic.FamilySpec{Name: "field", Operator: zs("1"), Coupling: p["field"]})
		h.Tracked = []kinetic.TrackedSpec{{Name: "spin", Operator: zs("1"), Order: true}}
		return h, nil
	},
}
