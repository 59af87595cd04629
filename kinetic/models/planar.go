package models

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// planarCode is the toric code cut open. Both ends of x are rough: the edges
// along x that leave a corner there dangle, and the corners at x = 0 with their
// edges along y are not there. Both ends of y are smooth: no edge along y leaves
// the last corners. A plaquette loses factors at rough edges, a star at smooth
// ones.
var planarCode = Model{
	Name:    "planar-code",
	Summary: "the toric code on a plane with two rough and two smooth edges: qubits on edges, X around corners, Z around faces",
	Formula: "H = -star sum XX..X - plaquette sum ZZ..Z, three factors at the edges of the plane; for q > 2 of each the mean with its inverse, cos(2 pi s/q)",
	Ground:  "1 encoded qubit (q levels) in Lx Ly + (Lx - 1)(Ly - 1) sites; distance Lx for Z, Ly for X",
	Paper:   "S. B. Bravyi, A. Yu. Kitaev, arXiv:quant-ph/9811052; E. Dennis, A. Kitaev, A. Landahl, J. Preskill, J. Math. Phys. 43, 4452 (2002)",
	MinAxes: 2,
	MaxAxes: 2,
	Open:    true,
	Parameters: []Parameter{
		levels(2),
		{Name: "coupling", Default: 1, Doc: "energy of every term"},
		{Name: "star", Follows: "coupling", Doc: "energy of a product of X"},
		{Name: "plaquette", Follows: "coupling", Doc: "energy of a product of Z"},
	},
	Build: func(_ lattice.Lattice, p Values) (Hamiltonian, error) {
		q := int(p["levels"])
		h := edgeCode(2, p)
		for i := range h.Families {
			h.Families[i].Cut = kinetic.CutAlong(kinetic.Truncate, kinetic.Drop)
			if h.Families[i].Name == "star" {
				h.Families[i].Cut = kinetic.CutAlong(kinetic.Drop, kinetic.Truncate)
			}
		}
		h.Absent = []kinetic.Absence{{Site: 1, Axis: 0}, {Site: 1, Axis: 1, Last: true}}
		h.Tracked = []kinetic.TrackedSpec{
			// Z from one rough edge to the other.
			{Name: "string-x", Operator: zq(q, "line x", "0")},
			// X on the edges along x that a line from one smooth edge to the
			// other crosses.
			{Name: "dual-string-y", Operator: xq(q, "line y", "0")},
		}
		return h, nil
	},
}
