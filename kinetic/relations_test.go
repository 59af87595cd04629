package kinetic

import (
	"math"
	"strings"
	"testing"

	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// operatorOf reads the X and Z parts of an operator, one entry per site.
func operatorOf(t testing.TB, q, axes int, x, z []string) pauli.Operator {
	t.Helper()
	var o pauli.Operator
	read := func(list []string) []pauli.Polynomial {
		var out []pauli.Polynomial
		for _, src := range list {
			p, extent, err := pauli.ParsePart(src, q, axes)
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
	o.X, o.Z = read(x), read(z)
	return o
}

func latticeOf(t testing.TB, open bool, size ...int) lattice.Lattice {
	t.Helper()
	edges := make([]bool, len(size))
	for i := range edges {
		edges[i] = open
	}
	l, err := lattice.New(size, edges)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func groundOf(t testing.TB, s Spec) Ground {
	t.Helper()
	g, err := GroundStates(s)
	if err != nil || !g.Known {
		t.Fatalf("%v: %+v, %v", s.Lattice.Size, g, err)
	}
	return g
}

func TestGroundStatesRing(t *testing.T) {
	for _, c := range []struct {
		n              int
		open           bool
		bond, field    float64
		encoded        float64
		satisfied, ref bool
	}{
		{1, false, 1, 0, 1, true, true}, // the bond is a constant
		{2, false, 1, 0, 1, true, true},
		{3, false, 1, 0, 1, true, true},
		{8, false, 1, 0, 1, true, true},
		{8, true, 1, 0, 1, true, true},
		{8, false, 0, 0, 8, true, true},
		{8, false, 1, 0.5, 0, true, true},
		{8, false, 1, -0.5, 0, true, false},
		{8, false, -1, 0, 1, true, false},
		{7, false, -1, 0, 1, false, false}, // an odd ring is frustrated
		{7, true, -1, 0, 1, true, false},
		{8, false, -1, 0.5, 0, false, false},
	} {
		s := Spec{Lattice: latticeOf(t, c.open, c.n), Levels: 2, Sites: 1, Families: []FamilySpec{
			{Name: "bond", Operator: operatorOf(t, 2, 1, nil, []string{"1 + x"}), Coupling: c.bond},
			{Name: "field", Operator: operatorOf(t, 2, 1, nil, []string{"1"}), Coupling: c.field},
		}}
		g := groundOf(t, s)
		if g.Encoded != c.encoded || g.Satisfied != c.satisfied || g.Reference != c.ref || !g.Classical {
			t.Errorf("%+v: got %+v", c, g)
		}
	}
}

// Potts bonds on a ring leave one of q levels; with q = 4 levels and bonds
// 2(1 - x), each site has one of two values besides a common one.
func TestGroundStatesPotts(t *testing.T) {
	for _, c := range []struct {
		q       int
		bond    string
		n       int
		encoded float64
	}{
		{3, "1 - x", 5, 1},
		{3, "1 + x", 5, 0}, // 2 s = 0 around an odd ring
		{3, "1 + x", 6, 1},
		{4, "1 - x", 5, 1},
		{4, "2 - 2x", 5, 1 + 4*0.5}, // 4 times 2^4 configurations
		{6, "3 - 3x", 4, 1 + 3*math.Log(3)/math.Log(6)},
	} {
		shape := make([]float64, c.q)
		shape[0] = 1
		s := Spec{Lattice: latticeOf(t, false, c.n), Levels: c.q, Sites: 1, Families: []FamilySpec{
			{Name: "bond", Operator: operatorOf(t, c.q, 1, nil, []string{c.bond}), Coupling: 1, Shape: shape},
		}}
		if g := groundOf(t, s); math.Abs(g.Encoded-c.encoded) > 1e-12 || !g.Reference {
			t.Errorf("%+v: got %+v", c, g)
		}
	}
}

// The Z_q toric code encodes two q-level systems (A. Yu. Kitaev, Ann. Phys.
// 303, 2 (2003)); with edges left out on open boundaries the count is that of
// the rank, done by hand for 2 x 2: one star and one plaquette on 8 sites.
func TestGroundStatesToricCode(t *testing.T) {
	for _, q := range []int{2, 3, 4, 5, 6} {
		shape := make([]float64, q)
		shape[0] = 1
		s := Spec{Levels: q, Sites: 2, Families: []FamilySpec{
			{Name: "star", Operator: operatorOf(t, q, 2, []string{"1 - x^-1", "1 - y^-1"}, nil), Coupling: 1, Shape: shape},
			{Name: "plaquette", Operator: operatorOf(t, q, 2, nil, []string{"1 - y", "-1 + x"}), Coupling: 1, Shape: shape},
		}}
		for _, size := range [][]int{{1, 1}, {1, 3}, {2, 2}, {3, 4}, {5, 5}} {
			s.Lattice = latticeOf(t, false, size...)
			if g := groundOf(t, s); g.Encoded != 2 || g.Classical || !g.Reference {
				t.Errorf("q = %d, %v: %+v", q, size, g)
			}
		}
		s.Lattice = latticeOf(t, true, 2, 2)
		if g := groundOf(t, s); g.Encoded != 6 {
			t.Errorf("q = %d, open: %+v", q, g)
		}
	}
}

func TestGroundStatesLarge(t *testing.T) {
	ising := Spec{Lattice: latticeOf(t, false, 4096, 4096), Levels: 2, Sites: 1, Families: []FamilySpec{
		{Name: "x", Operator: operatorOf(t, 2, 2, nil, []string{"1 + x"}), Coupling: 1},
		{Name: "y", Operator: operatorOf(t, 2, 2, nil, []string{"1 + y"}), Coupling: 1},
	}}
	if g := groundOf(t, ising); g.Encoded != 1 {
		t.Errorf("Ising: %+v", g)
	}
	ising.Lattice = latticeOf(t, true, 1<<13, 1<<13)
	if g, err := GroundStates(ising); g.Known || err != nil || !strings.Contains(g.Reason, "factors") {
		t.Errorf("beyond the limit: %+v, %v", g, err)
	}
}
