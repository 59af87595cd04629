package kinetictest

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
)

// RandomSigns is RandomSpec with the signs of some couplings turned round at
// random, term by term.
func RandomSigns(seed uint64, size Size) kinetic.Spec {
	return disordered(RandomSpec(seed, size), seed, func(f *kinetic.FamilySpec, cells int, r *rand.Rand) {
		f.Signs = make([]uint8, cells)
		for c := range f.Signs {
			f.Signs[c] = uint8(r.IntN(2))
		}
	})
}

// RandomCouplings is RandomSpec with couplings that vary from term to term: of
// a few values whose sums coincide, some of them 0, or normal ones. Laws that
// need a table are replaced.
func RandomCouplings(seed uint64, size Size) kinetic.Spec {
	s := disordered(RandomSpec(seed, size), seed, func(f *kinetic.FamilySpec, cells int, r *rand.Rand) {
		f.Couplings = make([]float64, cells)
		normal := r.IntN(2) == 0
		for c := range f.Couplings {
			f.Couplings[c] = []float64{0.1, 0.2, 0.3, -0.3, 1, 0}[r.IntN(6)]
			if normal {
				f.Couplings[c] = math.Round(r.NormFloat64()*1e6) / 1e6
			}
		}
	})
	for b := range s.Bath {
		if s.Bath[b].Law.Kind == bath.Table {
			s.Bath[b].Law = HeatBath
		}
	}
	return s
}

// disordered changes two thirds of the families, at least one.
func disordered(s kinetic.Spec, seed uint64, change func(f *kinetic.FamilySpec, cells int, r *rand.Rand)) kinetic.Spec {
	r := rand.New(rand.NewPCG(seed, 0xd150))
	s.Families = slices.Clone(s.Families)
	for f := range s.Families {
		if f == len(s.Families)-1 || r.IntN(3) > 0 {
			change(&s.Families[f], s.Lattice.Cells(), r)
		}
	}
	return s
}

// SuiteSigns is Suite for models in which the signs of couplings vary from term
// to term.
func SuiteSigns(t *testing.T, make Make) {
	ring := Ising(Lattice(5), 0.7, HeatBath)
	ring.Families[0].Signs = []uint8{0, 1, 0, 0, 0} // frustrated
	disorder(t, make, "signs", ring, RandomSigns)
}

// SuiteCouplings is Suite for models in which the size of couplings varies from
// term to term.
func SuiteCouplings(t *testing.T, make Make) {
	torus := Ising(Lattice(2, 3), 0.5, bath.Law{Kind: bath.Metropolis, Rate: 1})
	torus.Families[0].Couplings = []float64{0.1, -0.7, 1.3, 0, 0.25, 0.6}
	torus.Families[1].Couplings = []float64{1, 1, 0.2, 0.3, -0.1, 0.5}
	disorder(t, make, "couplings", torus, RandomCouplings)
}

func disorder(t *testing.T, make Make, name string, first kinetic.Spec, random func(uint64, Size) kinetic.Spec) {
	n, beyond := 10, 3
	if testing.Short() {
		n, beyond = 3, 1
	}
	listed := []*subject{newSubject(t, name, first, true)}
	for seed := range n {
		listed = append(listed, newSubject(t, fmt.Sprint(name, "-", seed), random(uint64(seed), Enumerable), true))
	}
	var large []*subject
	for seed := range beyond {
		large = append(large, newSubject(t, fmt.Sprint(name, "-large-", seed), random(uint64(1000+seed), Larger), false))
	}
	run(t, make, listed, large)
}
