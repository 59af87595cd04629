package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// The hexagons of a honeycomb torus have three colours. A cell holds one of
// each and six qubits, three on either sublattice, so that a torus of any size
// keeps the colours; its axes run along lines of hexagons of one colour.

var colourCode = Model{
	Name:    "colour-code",
	Summary: "qubits on the corners of a honeycomb, products of X and of Z around each hexagon; a cell is three hexagons, six qubits",
	Formula: "H = -x sum_hexagons XXXXXX - z sum_hexagons ZZZZZZ",
	Ground:  "4 encoded qubits on the torus",
	Paper:   "H. Bombin, M. A. Martin-Delgado, Phys. Rev. Lett. 97, 180501 (2006)",
	MinAxes: 2,
	MaxAxes: 2,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of every term"},
		{Name: "x", Follows: "coupling", Doc: "energy of a product of X"},
		{Name: "z", Follows: "coupling", Doc: "energy of a product of Z"},
	},
	Build: func(_ lattice.Lattice, p Values) (Hamiltonian, error) {
		h := Hamiltonian{Levels: 2, Sites: 6}
		hexagons := [3][]string{
			{"1", "1", "x^-1", "1", "x^-1", "x^-1"},
			{"x y", "1", "1", "x y", "1", "x^-1"},
			{"x^2 y", "x y", "1", "x y", "x y", "1"},
		}
		colours := [3]string{"red", "green", "blue"}
		for i, parts := range hexagons {
			h.Families = append(h.Families, kinetic.FamilySpec{
				Name: "z-" + colours[i], Group: "z", Operator: zs(parts...), Coupling: p["z"]})
		}
		for i, parts := range hexagons {
			h.Families = append(h.Families, kinetic.FamilySpec{
				Name: "x-" + colours[i], Group: "x", Operator: xs(parts...), Coupling: p["x"]})
		}
		// A string of a colour runs over the bonds between hexagons of that
		// colour. The string of the third colour is the product of the two.
		strings := []struct {
			name  string
			parts []string
		}{
			{"red-loop-x", []string{"0", "line x", "0", "0", "line x", "0"}},
			{"red-loop-y", []string{"0", "0", "line y", "x line y", "0", "0"}},
			{"green-loop-x", []string{"0", "0", "line x", "0", "0", "line x"}},
			{"green-loop-y", []string{"line y", "0", "0", "0", "x^-1 line y", "0"}},
		}
		for _, s := range strings {
			h.Tracked = append(h.Tracked, kinetic.TrackedSpec{Name: s.name, Operator: zs(s.parts...)})
		}
		for _, s := range strings {
			h.Tracked = append(h.Tracked, kinetic.TrackedSpec{Name: "dual-" + s.name, Operator: xs(s.parts...)})
		}
		return h, nil
	},
}
