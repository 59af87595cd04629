package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

var toricCode = Model{
	Name:    "toric-code",
	Summary: "qubits on the edges, X around corners, Z around faces; on 4 axes qubits on the faces, X around edges, Z around cubes",
	Formula: "H = -star sum XX..X - plaquette sum ZZ..Z; star: the edges at a corner (4 axes: the faces at an edge), plaquette: the edges of a face (the faces of a cube); for q > 2 factors have signs by direction, and a term of level s has the energy -coupling cos(2 pi s/q), the mean of the product and its inverse",
	Ground:  "2, 3 and 6 encoded qubits (of q levels) on the torus with 2, 3 and 4 axes",
	Paper:   "A. Yu. Kitaev, Ann. Phys. 303, 2 (2003); E. Dennis, A. Kitaev, A. Landahl, J. Preskill, J. Math. Phys. 43, 4452 (2002)",
	MinAxes: 2,
	MaxAxes: 4,
	Parameters: []Parameter{
		levels(2),
		{Name: "coupling", Default: 1, Doc: "energy of every term"},
		{Name: "star", Follows: "coupling", Doc: "energy of a product of X"},
		{Name: "plaquette", Follows: "coupling", Doc: "energy of a product of Z"},
	},
	Build: func(l lattice.Lattice, p Values) (Hamiltonian, error) {
		if l.Axes == 4 {
			return faceCode(p), nil
		}
		return edgeCode(l.Axes, p), nil
	},
}

// edgeCode is the toric code with qubits on the edges of a lattice of n = 2 or
// 3 axes: site a of a cell is the edge that leaves its corner along axis a.
func edgeCode(n int, p Values) Hamiltonian {
	q := int(p["levels"])
	star := make([]string, n)
	for a := range star {
		star[a] = "1 - " + axes[a] + "^-1"
	}
	h := Hamiltonian{Levels: q, Sites: n, Families: edgePlaquettes(n, q, p["plaquette"]), Tracked: edgeLoops(n, q)}
	h.Families = append(h.Families, kinetic.FamilySpec{
		Name: "star", Operator: xq(q, star...), Coupling: p["star"], Shape: clockShape(q)})
	if n == 2 {
		// X on the edges that a line along x crosses, which lie along y.
		h.Tracked = append(h.Tracked,
			kinetic.TrackedSpec{Name: "dual-loop-x", Operator: xq(q, "0", "line x")},
			kinetic.TrackedSpec{Name: "dual-loop-y", Operator: xq(q, "line y", "0")})
		return h
	}
	for _, ab := range planes(n) {
		// X on the edges that the plane crosses.
		normal := n - ab[0] - ab[1]
		h.Tracked = append(h.Tracked, kinetic.TrackedSpec{
			Name: "membrane-" + planeName(ab), Operator: xq(q, only(n, normal, planeSpan(ab))...)})
	}
	return h
}

// edgePlaquettes returns the products of Z around the faces of the lattice, for
// sites of q levels on edges: one family, or one for each plane, grouped. Along
// its way around a face an edge counts by its direction.
func edgePlaquettes(n, q int, coupling float64) []kinetic.FamilySpec {
	var out []kinetic.FamilySpec
	for _, ab := range planes(n) {
		a, b := ab[0], ab[1]
		parts := only(n, a, "1 - "+axes[b])
		parts[b] = "-1 + " + axes[a]
		f := kinetic.FamilySpec{Name: "plaquette", Operator: zq(q, parts...), Coupling: coupling, Shape: clockShape(q)}
		if n > 2 {
			f.Name, f.Group = "plaquette-"+planeName(ab), "plaquette"
		}
		out = append(out, f)
	}
	return out
}

// edgeLoops returns the products of Z along the straight lines of edges.
func edgeLoops(n, q int) []kinetic.TrackedSpec {
	var out []kinetic.TrackedSpec
	for a := range n {
		out = append(out, kinetic.TrackedSpec{
			Name: "loop-" + axes[a], Operator: zq(q, only(n, a, "line "+axes[a])...)})
	}
	return out
}

// faceCode is the toric code with qubits on the faces of a lattice of 4 axes,
// section X of Dennis, Kitaev, Landahl and Preskill: site i of a cell is the
// face that leaves its corner in plane i of planes(4).
func faceCode(p Values) Hamiltonian {
	q := int(p["levels"])
	all := planes(4)
	h := Hamiltonian{Levels: q, Sites: len(all)}
	for missing := 3; missing >= 0; missing-- {
		// The cube along the three other axes: its faces in each plane, at the
		// corner and, with the other sign, one step along the third axis. Signs
		// alternate from one third axis to the next.
		parts := make([]string, len(all))
		name := ""
		for a := range 4 {
			if a != missing {
				name += axes[a]
			}
		}
		for i, ab := range all {
			parts[i] = "0"
			if ab[0] != missing && ab[1] != missing {
				third := 6 - missing - ab[0] - ab[1]
				parts[i] = "-1 + " + axes[third]
				if ab[0] < third && third < ab[1] {
					parts[i] = "1 - " + axes[third]
				}
			}
		}
		h.Families = append(h.Families, kinetic.FamilySpec{
			Name: "plaquette-" + name, Group: "plaquette", Operator: zq(q, parts...), Coupling: p["plaquette"], Shape: clockShape(q)})
	}
	for a := range 4 {
		// The faces at the edge along a: in each plane that contains a, on both
		// sides along the other axis, with the sign that the edge has on the way
		// around the face.
		parts := make([]string, len(all))
		for i, ab := range all {
			parts[i] = "0"
			switch a {
			case ab[0]:
				parts[i] = "1 - " + axes[ab[1]] + "^-1"
			case ab[1]:
				parts[i] = "-1 + " + axes[ab[0]] + "^-1"
			}
		}
		h.Families = append(h.Families, kinetic.FamilySpec{
			Name: "star-" + axes[a], Group: "star", Operator: xq(q, parts...), Coupling: p["star"], Shape: clockShape(q)})
	}
	for i, ab := range all {
		h.Tracked = append(h.Tracked, kinetic.TrackedSpec{
			Name: "membrane-" + planeName(ab), Operator: zq(q, only(len(all), i, planeSpan(ab))...)})
	}
	for i, ab := range all {
		// X on the faces that meet the complementary plane in a point.
		var other []int
		for a := range 4 {
			if a != ab[0] && a != ab[1] {
				other = append(other, a)
			}
		}
		cd := [2]int{other[0], other[1]}
		h.Tracked = append(h.Tracked, kinetic.TrackedSpec{
			Name: "dual-membrane-" + planeName(cd), Operator: xq(q, only(len(all), i, planeSpan(cd))...)})
	}
	return h
}
