package kinetictest

import (
	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// Operator reads one polynomial (or product along axes) per site of the cell
// for the X and the Z part, nil for none. It panics on text that does not
// parse.
func Operator(q, axes int, x, z []string) pauli.Operator {
	var o pauli.Operator
	part := func(text []string) []pauli.Polynomial {
		if text == nil {
			return nil
		}
		var out []pauli.Polynomial
		for _, t := range text {
			p, extent, err := pauli.ParsePart(t, q, axes)
			if err != nil {
				panic("kinetictest: " + t + ": " + err.Error())
			}
			for a, e := range extent {
				o.Extent[a] = o.Extent[a] || e
			}
			out = append(out, p)
		}
		return out
	}
	o.X, o.Z = part(x), part(z)
	return o
}

// Lattice returns a periodic lattice, or panics.
func Lattice(size ...int) lattice.Lattice {
	l, err := lattice.New(size, nil)
	if err != nil {
		panic("kinetictest: " + err.Error())
	}
	return l
}

// Paulis returns the bath operators named in which, letters of "XYZ", on every
// site and with the same law.
func Paulis(which string, law bath.Law) []kinetic.BathOperator {
	var out []kinetic.BathOperator
	for _, c := range which {
		b := kinetic.BathOperator{Name: string(c), Law: law}
		if c != 'Z' {
			b.X = 1
		}
		if c != 'X' {
			b.Z = 1
		}
		out = append(out, b)
	}
	return out
}

// HeatBath is the heat-bath law with Gamma = 1.
var HeatBath = bath.Law{Kind: bath.HeatBath, Rate: 1}

// Ising returns the ferromagnet with J = 1, its spins tracked, on a lattice of
// one to four axes, under single flips.
func Ising(l lattice.Lattice, beta float64, law bath.Law) kinetic.Spec {
	s := kinetic.Spec{Lattice: l, Levels: 2, Sites: 1, Beta: beta, Bath: Paulis("X", law)}
	for a := range l.Axes {
		v := string("xyzw"[a])
		s.Families = append(s.Families, kinetic.FamilySpec{
			Name: "bond-" + v, Group: "bond", Coupling: 1,
			Operator: Operator(2, l.Axes, nil, []string{"1 + " + v}),
		})
	}
	s.Tracked = []kinetic.TrackedSpec{{Name: "spin", Order: true, Operator: Operator(2, l.Axes, nil, []string{"1"})}}
	return s
}

// Potts returns the ferromagnetic Potts model with J = 1, its spins tracked,
// whose sites change to every other level.
func Potts(q int, l lattice.Lattice, beta float64, law bath.Law) kinetic.Spec {
	s := kinetic.Spec{Lattice: l, Levels: q, Sites: 1, Beta: beta}
	shape := make([]float64, q)
	shape[0] = 1
	for a := range l.Axes {
		v := string("xyzw"[a])
		s.Families = append(s.Families, kinetic.FamilySpec{
			Name: "bond-" + v, Group: "bond", Coupling: 1, Shape: shape,
			Operator: Operator(q, l.Axes, nil, []string{"1 - " + v}),
		})
	}
	s.Tracked = []kinetic.TrackedSpec{{Name: "spin", Order: true, Operator: Operator(q, l.Axes, nil, []string{"1"})}}
	for k := 1; k < q; k++ {
		s.Bath = append(s.Bath, kinetic.BathOperator{Name: "X", X: k, Law: law})
	}
	return s
}

// ToricCode returns the toric code in two dimensions with unit couplings: links
// along x are site 0 of a cell, links along y site 1. The operators named in
// which couple to the bath. tracked chooses among its bare logical operators:
// "z" and "x" for the loops made of Z and of X.
func ToricCode(l lattice.Lattice, beta float64, which string, law bath.Law, tracked string) kinetic.Spec {
	s := kinetic.Spec{
		Lattice: l, Levels: 2, Sites: 2, Beta: beta, Bath: Paulis(which, law),
		Families: []kinetic.FamilySpec{
			{Name: "star", Coupling: 1, Operator: Operator(2, 2, []string{"1 + x^-1", "1 + y^-1"}, nil)},
			{Name: "plaquette", Coupling: 1, Operator: Operator(2, 2, nil, []string{"1 + y", "1 + x"})},
		},
	}
	add := func(name string, x, z []string) {
		s.Tracked = append(s.Tracked, kinetic.TrackedSpec{Name: name, Operator: Operator(2, 2, x, z)})
	}
	for _, c := range tracked {
		switch c {
		case 'z':
			add("loop-z-x", nil, []string{"line x", "0"})
			add("loop-z-y", nil, []string{"0", "line y"})
		case 'x':
			add("loop-x-x", []string{"0", "line x"}, nil)
			add("loop-x-y", []string{"line y", "0"}, nil)
		default:
			panic("kinetictest: loops are made of x or z")
		}
	}
	return s
}
