package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// Spin models of q levels on nearest-neighbour bonds.

var potts = Model{
	Name:    "potts",
	Summary: "one spin of q levels per cell, bonds that favour equal neighbours; the bath turns a spin to any other level",
	Formula: "H = -coupling sum_<ij> [s_i = s_j] - field sum_i [s_i = 0]",
	Ground:  "q ground states (all spins alike) if the coupling is positive and there is no field, 1 with a field",
	Paper:   "R. B. Potts, Proc. Camb. Phil. Soc. 48, 106 (1952); F. Y. Wu, Rev. Mod. Phys. 54, 235 (1982)",
	MinAxes: 1,
	MaxAxes: 3,
	Parameters: []Parameter{
		levels(3),
		{Name: "coupling", Default: 1, Doc: "energy of a bond; positive favours equal spins"},
		{Name: "field", Default: 0, Doc: "energy of a spin in the field; positive favours level 0"},
	},
	Classical: true,
	Build: func(l lattice.Lattice, p Values) (Hamiltonian, error) {
		q := int(p["levels"])
		shape := make([]float64, q)
		shape[0] = 1
		h := bonds(l, q, shape, p)
		for k := 1; k < q; k++ {
			h.Powers = append(h.Powers, k)
		}
		return h, nil
	},
}

var clock = Model{
	Name:    "clock",
	Summary: "one spin per cell that points along one of q directions in a plane; the bath turns it by one step",
	Formula: "H = -coupling sum_<ij> cos(2 pi (s_i - s_j)/q) - field sum_i cos(2 pi s_i/q)",
	Ground:  "q ground states (all spins alike) if the coupling is positive and there is no field, 1 with a field",
	Paper:   "R. B. Potts, Proc. Camb. Phil. Soc. 48, 106 (1952); J. V. Jose, L. P. Kadanoff, S. Kirkpatrick, D. R. Nelson, Phys. Rev. B 16, 1217 (1977)",
	MinAxes: 1,
	MaxAxes: 3,
	Parameters: []Parameter{
		levels(4),
		{Name: "coupling", Default: 1, Doc: "energy of a bond; positive favours equal spins"},
		{Name: "field", Default: 0, Doc: "energy of a spin in the field; positive favours level 0"},
	},
	Classical: true,
	Build: func(l lattice.Lattice, p Values) (Hamiltonian, error) {
		q := int(p["levels"])
		return bonds(l, q, clockShape(q), p), nil
	},
}

// bonds returns the spins of q levels with energies of one shape on bonds and in
// the field.
func bonds(l lattice.Lattice, q int, shape []float64, p Values) Hamiltonian {
	h := Hamiltonian{Levels: q, Sites: 1, Tracked: []kinetic.TrackedSpec{
		{Name: "spin", Operator: zq(q, "1"), Order: true}}}
	for _, v := range axes[:l.Axes] {
		h.Families = append(h.Families, kinetic.FamilySpec{
			Name: "bond-" + v, Group: "bond", Operator: zq(q, "1 - "+v), Coupling: p["coupling"], Shape: shape})
	}
	h.Families = append(h.Families, kinetic.FamilySpec{
		Name: "field", Operator: zq(q, "1"), Coupling: p["field"], Shape: shape})
	return h
}
