package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// Codes in three dimensions whose encoded qubits grow with the lattice.

var xCube = Model{
	Name:    "x-cube",
	Summary: "qubits on the edges, X around each cube, Z on the three crosses at each corner",
	Formula: "H = -cube sum_cubes X..X (12 edges) - cross sum_corners (ZZZZ in xy + in yz + in xz)",
	Ground:  "6 L - 3 encoded qubits on the L x L x L torus, in general 2 (Lx + Ly + Lz) - 3",
	Paper:   "S. Vijay, J. Haah, L. Fu, Phys. Rev. B 94, 235157 (2016)",
	MinAxes: 3,
	MaxAxes: 3,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of every term"},
		{Name: "cube", Follows: "coupling", Doc: "energy of a cube"},
		{Name: "cross", Follows: "coupling", Doc: "energy of a cross"},
	},
	Build: func(_ lattice.Lattice, p Values) (Hamiltonian, error) {
		h := Hamiltonian{Levels: 2, Sites: 3}
		for _, ab := range planes(3) {
			parts := only(3, ab[0], "1 + "+axes[ab[0]]+"^-1")
			parts[ab[1]] = "1 + " + axes[ab[1]] + "^-1"
			h.Families = append(h.Families, kinetic.FamilySpec{
				Name: "cross-" + planeName(ab), Group: "cross", Operator: zs(parts...), Coupling: p["cross"]})
		}
		h.Families = append(h.Families, kinetic.FamilySpec{
			Name: "cube", Operator: xs("1 + y + z + y z", "1 + x + z + x z", "1 + x + y + x y"), Coupling: p["cube"]})
		for a := range 3 {
			// X along a line of edges.
			h.Tracked = append(h.Tracked, kinetic.TrackedSpec{
				Name: "loop-" + axes[a], Operator: xs(only(3, a, "line "+axes[a])...)})
		}
		for a := range 3 {
			for b := range 3 {
				if a != b {
					// Z on the rungs along a of a ladder along b.
					h.Tracked = append(h.Tracked, kinetic.TrackedSpec{
						Name: "ladder-" + axes[a] + axes[b], Operator: zs(only(3, a, "line "+axes[b])...)})
				}
			}
		}
		return h, nil
	},
}

var cubicCode = Model{
	Name:    "cubic-code",
	Summary: "two qubits on each corner, one product of X and one of Z for each cube; no operator on a string moves a defect",
	Formula: "H = -x sum_cubes X(1 + x + y + z; 1 + xy + yz + zx) - z sum_cubes Z(conjugates, qubits exchanged)",
	Ground:  "k encoded qubits on the L x L x L torus, (k + 2)/4 the degree of gcd(1 + (1 + x)^L, 1 + (1 + wx)^L, 1 + (1 + w^2 x)^L) over the field {0, 1, w, w^2}",
	Paper:   "J. Haah, Phys. Rev. A 83, 042330 (2011); Commun. Math. Phys. 324, 351 (2013)",
	MinAxes: 3,
	MaxAxes: 3,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of every term"},
		{Name: "x", Follows: "coupling", Doc: "energy of a product of X"},
		{Name: "z", Follows: "coupling", Doc: "energy of a product of Z"},
	},
	Build: func(_ lattice.Lattice, p Values) (Hamiltonian, error) {
		return Hamiltonian{
			Levels: 2,
			Sites:  2,
			Families: []kinetic.FamilySpec{
				{Name: "z", Operator: zs("1 + x^-1 y^-1 + y^-1 z^-1 + x^-1 z^-1", "1 + x^-1 + y^-1 + z^-1"), Coupling: p["z"]},
				{Name: "x", Operator: xs("1 + x + y + z", "1 + x y + y z + x z"), Coupling: p["x"]},
			},
			Tracked: []kinetic.TrackedSpec{
				{Name: "membrane-xy", Operator: zs("0", "plane x y")},
				{Name: "membrane-yz", Operator: zs("0", "plane y z")},
				{Name: "membrane-xz", Operator: zs("0", "plane x z")},
				{Name: "dual-membrane-xy", Operator: xs("plane x y", "0")},
				{Name: "dual-membrane-yz", Operator: xs("plane y z", "0")},
				{Name: "dual-membrane-xz", Operator: xs("plane x z", "0")},
			},
		}, nil
	},
}
