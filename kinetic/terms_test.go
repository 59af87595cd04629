package kinetic

import (
	"fmt"
	"testing"

	"sojourn/kinetic/pauli"
)

func TestTerm(t *testing.T) {
	bond := operatorOf(t, 2, 2, nil, []string{"1 + x"})
	plaquette := operatorOf(t, 2, 2, nil, []string{"1 + y", "1 + x"})
	triple := operatorOf(t, 3, 2, []string{"1 + 2x^2"}, []string{"x^-1"})
	line := operatorOf(t, 2, 2, nil, []string{"line x", "0"})
	double := operatorOf(t, 2, 2, []string{"0", "(1 + x) line y"}, nil)
	for _, c := range []struct {
		name  string
		o     pauli.Operator
		q     int
		sites int
		size  []int
		open  bool
		cut   Cut
		cell  int
		want  string // factors as {site x z}; "absent" if there is none
	}{
		{"bond", bond, 2, 1, []int{3, 2}, false, Drop, 1, "[{1 0 1} {2 0 1}]"},
		{"bond around the wrap", bond, 2, 1, []int{3, 2}, false, Drop, 5, "[{3 0 1} {5 0 1}]"},
		{"bond on two cells", bond, 2, 1, []int{2, 1}, false, "", 1, "[{0 0 1} {1 0 1}]"},
		{"bond that folds to a constant", bond, 2, 1, []int{1, 2}, false, Drop, 1, "[]"},
		{"bond beyond the edge", bond, 2, 1, []int{3, 2}, true, Drop, 2, "absent"},
		{"bond beyond the edge, default cut", bond, 2, 1, []int{3, 2}, true, "", 2, "absent"},
		{"bond cut", bond, 2, 1, []int{3, 2}, true, Truncate, 2, "[{2 0 1}]"},
		{"plaquette", plaquette, 2, 2, []int{3, 2}, false, Drop, 2, "[{1 0 1} {4 0 1} {5 0 1} {10 0 1}]"},
		{"plaquette that wraps to one edge twice", plaquette, 2, 2, []int{3, 1}, false, Drop, 0, "[{1 0 1} {3 0 1}]"},
		{"powers that add mod 3", triple, 3, 1, []int{2, 1}, false, Drop, 0, "[{1 0 1}]"},
		{"powers that meet as X and Z", triple, 3, 1, []int{3, 1}, false, Drop, 0, "[{0 1 0} {2 2 1}]"},
		{"part outside", triple, 3, 1, []int{3, 1}, true, Truncate, 0, "[{0 1 0} {2 2 0}]"},
		{"line", line, 2, 2, []int{3, 2}, false, Drop, 3, "[{6 0 1} {8 0 1} {10 0 1}]"},
		{"line from any of its cells", line, 2, 2, []int{3, 2}, true, Drop, 5, "[{6 0 1} {8 0 1} {10 0 1}]"},
		{"double line", double, 2, 2, []int{3, 2}, false, Drop, 2, "[{1 1 0} {5 1 0} {7 1 0} {11 1 0}]"},
		{"double line beyond the edge", double, 2, 2, []int{3, 2}, true, Drop, 2, "absent"},
		{"double line cut", double, 2, 2, []int{3, 2}, true, Truncate, 2, "[{5 1 0} {11 1 0}]"},
	} {
		s := Spec{Lattice: latticeOf(t, c.open, c.size...), Levels: c.q, Sites: c.sites}
		factors, ok := s.Term(c.o, c.cut, c.cell)
		got := fmt.Sprint(factors)
		if !ok {
			got = "absent"
		}
		if got != c.want {
			t.Errorf("%s: got %s, want %s", c.name, got, c.want)
		}
	}
}

// A term of which no factor lies inside is absent, whatever the cut.
func TestTermOutside(t *testing.T) {
	s := Spec{Lattice: latticeOf(t, true, 3), Levels: 2, Sites: 1}
	far := operatorOf(t, 2, 1, nil, []string{"x + x^2"})
	if _, ok := s.Term(far, Truncate, 2); ok {
		t.Error("a term wholly outside is there")
	}
	if f, ok := s.Term(far, Truncate, 1); !ok || len(f) != 1 {
		t.Errorf("a term half inside: %v, %v", f, ok)
	}
	if f, ok := s.Term(pauli.Operator{}, Truncate, 2); !ok || len(f) != 0 {
		t.Errorf("the identity: %v, %v", f, ok)
	}
}

func TestPositions(t *testing.T) {
	s := Spec{Lattice: latticeOf(t, false, 3, 2, 4), Levels: 2, Sites: 1}
	for _, c := range []struct {
		extent []string
		want   []int // cells
	}{
		{[]string{"line x"}, []int{0, 3, 6, 9, 12, 15, 18, 21}},
		{[]string{"line y"}, []int{0, 1, 2, 6, 7, 8, 12, 13, 14, 18, 19, 20}},
		{[]string{"plane x z"}, []int{0, 3}},
		{[]string{"volume x y z"}, []int{0}},
	} {
		o := operatorOf(t, 2, 3, nil, c.extent)
		var got []int
		for p := range s.Positions(o) {
			got = append(got, s.PositionCell(o, p))
		}
		if fmt.Sprint(got) != fmt.Sprint(c.want) {
			t.Errorf("%v: cells %v, want %v", c.extent, got, c.want)
		}
	}
}

func TestCommutator(t *testing.T) {
	for _, c := range []struct {
		q    int
		a, b []SiteFactor
		want int
	}{
		{2, []SiteFactor{{0, 1, 0}}, []SiteFactor{{0, 0, 1}}, 1},
		{2, []SiteFactor{{0, 1, 0}, {1, 1, 0}}, []SiteFactor{{0, 0, 1}, {1, 0, 1}}, 0},
		{2, []SiteFactor{{0, 1, 1}}, []SiteFactor{{0, 1, 0}}, 1},
		{3, []SiteFactor{{0, 0, 1}}, []SiteFactor{{0, 1, 0}}, 1}, // Z X = w X Z
		{3, []SiteFactor{{0, 1, 0}}, []SiteFactor{{0, 0, 1}}, 2},
		{5, []SiteFactor{{1, 2, 0}, {3, 0, 4}}, []SiteFactor{{0, 1, 1}, {1, 0, 3}, {3, 1, 1}}, 3},
	} {
		if got := Commutator(c.a, c.b, c.q); got != c.want {
			t.Errorf("%v, %v mod %d: got %d, want %d", c.a, c.b, c.q, got, c.want)
		}
	}
}
