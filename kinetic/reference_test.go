package kinetic

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// letters turns a word of Pauli letters on consecutive cells into an operator.
func letters(t testing.TB, word string) pauli.Operator {
	t.Helper()
	x, z := "0", "0"
	for i, c := range word {
		m := fmt.Sprintf(" + x^%d", i)
		if c == 'X' || c == 'Y' {
			x += m
		}
		if c == 'Z' || c == 'Y' {
			z += m
		}
	}
	return operatorOf(t, 2, 1, []string{x}, []string{z})
}

// The product of XX, ZZ and YY is -1 (N. D. Mermin, Phys. Rev. Lett. 65, 3373
// (1990)).
func TestReferenceLevelsMermin(t *testing.T) {
	family := func(word string, j float64) FamilySpec {
		return FamilySpec{Name: word, Operator: letters(t, word), Coupling: j}
	}
	pair := Spec{Lattice: latticeOf(t, true, 2), Levels: 2, Sites: 1,
		Families: []FamilySpec{family("XX", 1), family("none", 0), family("ZZ", 1), family("YY", 1)}}
	families, lines, err := referenceLevels(pair)
	if got := fmt.Sprint(families, lines, err); got != "[[] [] [1 0]] [] <nil>" {
		t.Errorf("XX, ZZ, YY: %s", got)
	}
	if g := groundOf(t, pair); g.Satisfied || g.Reference || g.Encoded != 0 {
		t.Errorf("XX, ZZ, YY with J > 0: %+v", g)
	}
	pair.Families[3].Coupling = -1
	if g := groundOf(t, pair); !g.Satisfied || !g.Reference && g.Encoded != 0 {
		t.Errorf("XX, ZZ, -YY: %+v", g)
	}

	// As a tracked operator, YY follows the terms, as does its line.
	pair.Families = pair.Families[:3]
	pair.Tracked = []TrackedSpec{
		{Name: "ZZ", Operator: letters(t, "ZZ")},
		{Name: "YY", Operator: letters(t, "YY")},
		{Name: "Y line", Operator: operatorOf(t, 2, 1, []string{"line x"}, []string{"line x"})},
	}
	families, lines, err = referenceLevels(pair)
	if got := fmt.Sprint(families, lines, err); got != "[[] [] [] [1 0]] [[1]] <nil>" {
		t.Errorf("tracked YY: %s", got)
	}
	levels, err := ReferenceLevels(pair)
	if len(levels) != 2 || err != nil {
		t.Errorf("levels of the terms alone: %v, %v", levels, err)
	}
}

// The five-qubit code: four of the five translates of XZZX on a ring of five
// are independent, and the fifth is their product without a sign (R. Laflamme
// et al., Phys. Rev. Lett. 77, 198 (1996)).
func TestReferenceLevelsFiveQubits(t *testing.T) {
	s := Spec{Lattice: latticeOf(t, false, 5), Levels: 2, Sites: 1,
		Families: []FamilySpec{{Name: "XZZX", Operator: letters(t, "XZZX"), Coupling: 1}}}
	families, _, err := referenceLevels(s)
	if g := groundOf(t, s); families != nil || err != nil || g.Encoded != 1 || !g.Reference {
		t.Errorf("%v, %v, %+v", families, err, g)
	}
}

// project applies (1 + (-1)^level T)/2 to a state vector, T having the letters
// of factors with Y = i X Z.
func project(state []complex128, factors []SiteFactor, level uint8) {
	flip := 0
	phase := complex(1, 0)
	for _, f := range factors {
		flip |= f.X << f.Site
		if f.X == 1 && f.Z == 1 {
			phase *= 1i
		}
	}
	if level == 1 {
		phase = -phase
	}
	out := make([]complex128, len(state))
	for b, amplitude := range state {
		sign := phase
		for _, f := range factors {
			if f.Z == 1 && b>>f.Site&1 == 1 {
				sign = -sign // Z acts before X
			}
		}
		out[b^flip] += sign * amplitude / 2
		out[b] += amplitude / 2
	}
	copy(state, out)
}

// allCommute reports whether all terms and tracked operators commute.
func allCommute(s Spec) bool {
	var terms [][]SiteFactor
	add := func(o pauli.Operator, cut Cut) {
		for p := range s.Positions(o) {
			if factors, ok := s.Term(o, cut, s.PositionCell(o, p)); ok {
				terms = append(terms, factors)
			}
		}
	}
	for _, f := range s.Families {
		add(f.Operator, f.Cut)
	}
	for _, t := range s.Tracked {
		add(t.Operator, Drop)
	}
	for _, a := range terms {
		for _, b := range terms {
			if Commutator(a, b, s.Levels) != 0 {
				return false
			}
		}
	}
	return true
}

// TestReferenceLevelsByVectors checks for random commuting Hamiltonians on
// small rings that a state with the reference levels exists, and none with all
// levels 0 unless the reference says so, by projecting a random state vector.
func TestReferenceLevelsByVectors(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	// random draws an operator on two or three sites of up to two cells.
	random := func(sites, cells int) pauli.Operator {
		o := pauli.Operator{X: make([]pauli.Polynomial, sites), Z: make([]pauli.Polynomial, sites)}
		for range 2 + r.IntN(2) {
			i, letter := r.IntN(sites), 1+r.IntN(3)
			m := pauli.Polynomial{{Exp: lattice.Offset{r.IntN(cells)}, Coeff: 1}}
			if letter != 1 {
				o.X[i] = o.X[i].Add(m, 2)
			}
			if letter != 3 {
				o.Z[i] = o.Z[i].Add(m, 2)
			}
		}
		return o
	}
	frustrated, lines := 0, 0
	for trial := 0; trial < 400; {
		n, sites := 1+r.IntN(2), 2+r.IntN(2)
		s := Spec{Lattice: latticeOf(t, r.IntN(3) == 0, n), Levels: 2, Sites: sites}
		for range 80 {
			f := FamilySpec{Operator: random(sites, 2), Coupling: 1, Cut: []Cut{Drop, Truncate}[r.IntN(2)]}
			s.Families = append(s.Families, f)
			if !allCommute(s) {
				s.Families = s.Families[:len(s.Families)-1]
			}
		}
		tracked := TrackedSpec{Name: "t", Operator: random(sites, 2)}
		if r.IntN(2) == 0 {
			tracked.Operator = random(sites, 1)
			tracked.Operator.Extent[0] = true
		}
		s.Tracked = []TrackedSpec{tracked}
		if !allCommute(s) {
			continue
		}
		trial++
		var terms [][]SiteFactor
		var levels []uint8
		families, lineLevels, err := referenceLevels(s)
		collect := func(o pauli.Operator, cut Cut, list [][]uint8, f int) {
			for p := range s.Positions(o) {
				factors, ok := s.Term(o, cut, s.PositionCell(o, p))
				if !ok {
					continue
				}
				terms = append(terms, factors)
				level := uint8(0)
				if list != nil && list[f] != nil {
					level = list[f][p]
				}
				levels = append(levels, level)
			}
		}
		for f := range s.Families {
			collect(s.Families[f].Operator, s.Families[f].Cut, families, f)
		}
		if tracked.Operator.Extended() {
			collect(tracked.Operator, Drop, lineLevels, 0)
		} else {
			collect(tracked.Operator, Drop, families, len(s.Families))
		}
		if err != nil {
			t.Fatalf("trial %d: %v", trial, err)
		}
		zeros := make([]uint8, len(levels))
		for _, c := range []struct {
			levels []uint8
			exists bool
		}{{levels, true}, {zeros, families == nil && lineLevels == nil}} {
			state := make([]complex128, 1<<(n*sites))
			for b := range state {
				state[b] = complex(r.NormFloat64(), r.NormFloat64())
			}
			for i, factors := range terms {
				project(state, factors, c.levels[i])
			}
			norm := 0.0
			for _, a := range state {
				norm += real(a)*real(a) + imag(a)*imag(a)
			}
			if (norm > 1e-9) != c.exists {
				t.Fatalf("trial %d: %d cells, levels %v: squared norm %v, exists: %v", trial, n, c.levels, norm, c.exists)
			}
		}
		if families != nil {
			frustrated++
		}
		if lineLevels != nil {
			lines++
		}
	}
	if frustrated < 30 || lines < 5 {
		t.Errorf("only %d and %d of 400 cases have levels and lines that are not 0", frustrated, lines)
	}
}

func TestReferenceLevelsClash(t *testing.T) {
	s := Spec{Lattice: latticeOf(t, true, 1), Levels: 2, Sites: 1, Families: []FamilySpec{
		{Name: "X", Operator: letters(t, "X"), Coupling: 1},
		{Name: "Y", Operator: letters(t, "Y"), Coupling: 1},
		{Name: "Z", Operator: letters(t, "Z"), Coupling: 1},
	}}
	if _, _, err := referenceLevels(s); err == nil || !strings.Contains(err.Error(), "do not commute") {
		t.Errorf("X, Y, Z: %v", err)
	}
	if _, err := GroundStates(s); err == nil {
		t.Error("X, Y, Z: no error")
	}
}
