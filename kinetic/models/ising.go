package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

var ising = Model{
	Name:    "ising",
	Summary: "one spin per cell, nearest-neighbour and diagonal bonds, uniform field",
	Formula: "H = -sum_<ij> coupling_a Z_i Z_j - next sum_<<ij>> Z_i Z_j - field sum_i Z_i; <ij>: neighbours along axis a, <<ij>>: across the diagonals of squares, on one axis second neighbours",
	Ground:  "2 ground states (all up, all down) if no coupling is negative and there is no field, 1 with a field",
	Paper:   "E. Ising, Z. Phys. 31, 253 (1925)",
	MinAxes: 1,
	MaxAxes: lattice.MaxAxes,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of a bond; positive favours equal spins"},
		{Name: "coupling_x", Follows: "coupling", Axes: 1, Doc: "energy of a bond along x"},
		{Name: "coupling_y", Follows: "coupling", Axes: 2, Doc: "energy of a bond along y"},
		{Name: "coupling_z", Follows: "coupling", Axes: 3, Doc: "energy of a bond along z"},
		{Name: "coupling_w", Follows: "coupling", Axes: 4, Doc: "energy of a bond along w"},
		{Name: "next", Default: 0, Doc: "energy of a next-nearest-neighbour bond"},
		{Name: "field", Default: 0, Doc: "energy of a spin in the field; positive favours +1"},
	},
	Classical: true,
	Build: func(l lattice.Lattice, p Values) (Hamiltonian, error) {
		h := Hamiltonian{Levels: 2, Sites: 1, Tracked: []kinetic.TrackedSpec{spin()}}
		for _, v := range axes[:l.Axes] {
			h.Families = append(h.Families, kinetic.FamilySpec{
				Name: "bond-" + v, Group: "bond", Operator: zs("1 + " + v), Coupling: p["coupling_"+v]})
		}
		next := func(name, operator string) {
			h.Families = append(h.Families, kinetic.FamilySpec{
				Name: "next-" + name, Group: "next", Operator: zs(operator), Coupling: p["next"]})
		}
		if l.Axes == 1 {
			next("x", "1 + x^2")
		}
		for _, ab := range planes(l.Axes) {
			a, b := axes[ab[0]], axes[ab[1]]
			next(a+b, "1 + "+a+" "+b)
			next(b+a, a+" + "+b)
		}
		h.Families = append(h.Families, field(p))
		return h, nil
	},
}

// spin is the spin of a model with one per cell.
func spin() kinetic.TrackedSpec {
	return kinetic.TrackedSpec{Name: "spin", Operator: zs("1"), Order: true}
}

// field is the uniform field of a model with one spin per cell.
func field(p Values) kinetic.FamilySpec {
	return kinetic.FamilySpec{Name: "field", Operator: zs("1"), Coupling: p["field"]}
}
