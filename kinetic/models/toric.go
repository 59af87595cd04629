package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// The qubits of the toric code are the edges of the lattice: site a of a cell
// is the edge that leaves its corner along axis a.
var toricCode = Model{
	Name:    "toric-code",
	Summary: "toric code: qubits on the edges, stars of X around corners, plaquettes of Z around faces",
	Formula: "H = -star sum_corners XX..X - plaquette sum_faces ZZZZ",
	Ground:  "2 encoded qubits in 2D, 3 in 3D (periodic)",
	Paper:   "A. Yu. Kitaev, Ann. Phys. 303, 2 (2003); E. Dennis, A. Kitaev, A. Landahl, J. Preskill, J. Math. Phys. 43, 4452 (2002)",
	MinAxes: 2,
	MaxAxes: 3,
	Parameters: []Parameter{
		{Name: "coupling", Default: 1, Doc: "energy of every term"},
		{Name: "star", Follows: "coupling", Doc: "energy of a star"},
		{Name: "plaquette", Follows: "coupling", Doc: "energy of a plaquette"},
	},
	Build: func(l lattice.Lattice, p Values) (Hamiltonian, error) {
		n := l.Axes
		h := Hamiltonian{Levels: 2, Sites: n}
		h.Families = edgePlaquettes(n, p["plaquette"])
		star := make([]string, n)
		for a := range star {
			star[a] = "1 + " + axes[a] + "^-1"
		}
		h.Families = append(h.Families, kinetic.FamilySpec{Name: "star", Operator: xs(star...), Coupling: p["star"]})
		for a := range n {
			h.Tracked = append(h.Tracked, kinetic.TrackedSpec{
				Name: "loop-" + axes[a], Operator: zs(only(n, a, "line "+axes[a])...)})
		}
		if n == 2 {
			// X on the edges that a line along x crosses, which lie along y.
			h.Tracked = append(h.Tracked,
				kinetic.TrackedSpec{Name: "dual-loop-x", Operator: xs("0", "line x")},
				kinetic.TrackedSpec{Name: "dual-loop-y", Operator: xs("line y", "0")})
			return h, nil
		}
		for _, ab := range planes(n) {
			normal := n - ab[0] - ab[1]
			h.Tracked = append(h.Tracked, kinetic.TrackedSpec{
				Name:     "membrane-" + axes[ab[0]] + axes[ab[1]],
				Operator: xs(only(n, normal, "plane "+axes[ab[0]]+" "+axes[ab[1]])...)})
		}
		return h, nil
	},
}

// edgePlaquettes returns the products of Z around the faces of the lattice, for
// qubits on edges: one family, or one for each plane, grouped.
func edgePlaquettes(n int, coupling float64) []kinetic.FamilySpec {
	if n == 2 {
		return []kinetic.FamilySpec{{Name: "plaquette", Operator: zs("1 + y", "1 + x"), Coupling: coupling}}
	}
	var out []kinetic.FamilySpec
	for _, ab := range planes(n) {
		a, b := ab[0], ab[1]
		parts := only(n, a, "1 + "+axes[b])
		parts[b] = "1 + " + axes[a]
		out = append(out, kinetic.FamilySpec{
			Name: "plaquette-" + axes[a] + axes[b], Group: "plaquette", Operator: zs(parts...), Coupling: coupling})
	}
	return out
}
