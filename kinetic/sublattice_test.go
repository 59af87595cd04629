package kinetic

import (
	"math"
	"math/rand/v2"
	"testing"

	"sojourn/kinetic/pauli"
)

// TestTranslationRank compares the count by cosets with the count by rows, for
// random Hamiltonians of bonds, and of terms whose sites are bonds.
func TestTranslationRank(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	taken := 0
	for trial := range 600 {
		sites, axes := 1+r.IntN(3), 1+r.IntN(3)
		size := make([]int, axes)
		for a := range size {
			size[a] = 1 + r.IntN(6)
		}
		s := Spec{Lattice: latticeOf(t, false, size...), Levels: 2, Sites: sites}
		point := func() pauli.Monomial {
			m := pauli.Monomial{Coeff: 1}
			for a := range axes {
				m.Exp[a] = r.IntN(5) - 2
			}
			return m
		}
		families := 1 + r.IntN(4)
		x := make([][]pauli.Polynomial, families)
		for f := range x {
			x[f] = make([]pauli.Polynomial, sites)
		}
		if trial%2 == 0 {
			for f := range x {
				for range 1 + r.IntN(2) {
					i := r.IntN(sites)
					x[f][i] = x[f][i].Add(pauli.Polynomial{point()}, 2)
				}
			}
		} else {
			for i := range sites {
				for range 1 + r.IntN(2) {
					f := r.IntN(families)
					x[f][i] = x[f][i].Add(pauli.Polynomial{point()}, 2)
				}
			}
		}
		for f := range x {
			o := pauli.Operator{X: x[f]}
			if trial%3 == 0 {
				o = pauli.Operator{Z: x[f]}
			}
			s.Families = append(s.Families, FamilySpec{Operator: o, Coupling: 1})
		}
		rank, ok := translationRank(s)
		if !ok {
			continue
		}
		taken++
		rows := newRelations(s)
		for _, f := range s.Families {
			rows.add(f.Operator, f.Cut, 0)
		}
		sol, _ := rows.system.Solve(nil, math.MaxInt)
		if float64(rank) != sol.Rank {
			t.Fatalf("trial %d, %v: rank %d by cosets, %v by rows", trial, size, rank, sol.Rank)
		}
	}
	if taken < 500 {
		t.Errorf("only %d of 600 cases were counted by cosets", taken)
	}
}
