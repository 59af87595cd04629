package kinetic

import (
	"testing"

	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// operator parses an operator on the given axes, q = 2; a part is one string
// per site of the cell.
func operator(t testing.TB, axes int, x, z []string) pauli.Operator {
	t.Helper()
	var o pauli.Operator
	part := func(src []string) (out []pauli.Polynomial) {
		for _, s := range src {
			p, extent, err := pauli.ParsePart(s, 2, axes)
			if err != nil {
				t.Fatal(err)
			}
			for a := range extent {
				o.Extent[a] = o.Extent[a] || extent[a]
			}
			out = append(out, p)
		}
		return out
	}
	o.X, o.Z = part(x), part(z)
	return o
}

func heatBath(names ...string) (out []BathOperator) {
	for _, n := range names {
		b := BathOperator{Name: n, Law: bath.Law{Kind: bath.HeatBath, Rate: 1}}
		if n == "X" || n == "Y" {
			b.X = 1
		}
		if n == "Z" || n == "Y" {
			b.Z = 1
		}
		out = append(out, b)
	}
	return out
}

func testLattice(t testing.TB, open bool, size ...int) lattice.Lattice {
	t.Helper()
	o := make([]bool, len(size))
	for i := range o {
		o[i] = open
	}
	l, err := lattice.New(size, o)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func isingSpec(t testing.TB, beta float64, open bool, size ...int) Spec {
	s := Spec{Lattice: testLattice(t, open, size...), Levels: 2, Sites: 1, Beta: beta, Bath: heatBath("X")}
	for a := range size {
		s.Families = append(s.Families, FamilySpec{
			Name: "bond-" + "xyzw"[a:a+1], Group: "bond", Coupling: 1,
			Operator: operator(t, len(size), nil, []string{"1 + " + "xyzw"[a:a+1]}),
		})
	}
	s.Tracked = []TrackedSpec{{Name: "spin", Order: true, Operator: operator(t, len(size), nil, []string{"1"})}}
	return s
}

func toricSpec(t testing.TB, beta float64, l int, couples ...string) Spec {
	return Spec{
		Lattice: testLattice(t, false, l, l), Levels: 2, Sites: 2, Beta: beta, Bath: heatBath(couples...),
		Families: []FamilySpec{
			{Name: "plaquette", Coupling: 1, Operator: operator(t, 2, nil, []string{"1 + y", "1 + x"})},
			{Name: "star", Coupling: 1, Operator: operator(t, 2, []string{"1 + x^-1", "1 + y^-1"}, nil)},
		},
		Tracked: []TrackedSpec{
			{Name: "loop-x", Operator: operator(t, 2, nil, []string{"line x", "0"})},
			{Name: "dual-loop-y", Operator: operator(t, 2, []string{"line y", "0"}, nil)},
		},
	}
}

func compiled(t testing.TB, s Spec) *Generator {
	t.Helper()
	g, err := Compile(s)
	if err != nil {
		t.Fatal(err)
	}
	return g
}
