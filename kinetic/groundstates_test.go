package kinetic

import (
	"math/rand/v2"
	"testing"
)

// Whether random bonds can all be satisfied is whether the product of signs
// around every loop is +1 (G. Toulouse, Commun. Phys. 2, 115 (1977)): on a ring
// it is if an even number of bonds is negative.
func TestGroundStatesOfRandomBonds(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 4))
	for range 20 {
		spec := isingSpec(t, 0.5, false, 7)
		signs, couplings := make([]uint8, 7), make([]float64, 7)
		negative := 0
		for c := range signs {
			signs[c] = uint8(r.IntN(2))
			couplings[c] = (0.5 + r.Float64()) * (1 - 2*float64(signs[c]))
			negative += int(signs[c])
		}
		for k := range 2 {
			s := spec
			s.Families = append([]FamilySpec(nil), spec.Families...)
			if k == 0 {
				s.Families[0].Signs = signs
			} else {
				s.Families[0].Couplings = couplings
			}
			g, err := GroundStates(s)
			if err != nil {
				t.Fatal(err)
			}
			if g.Encoded != 1 || g.Satisfied != (negative%2 == 0) || g.Reference != (negative == 0) {
				t.Errorf("%d negative bonds: %+v", negative, g)
			}
		}
	}
}

func TestEnergyRange(t *testing.T) {
	s := isingSpec(t, 0.5, true, 5)
	s.Families = append([]FamilySpec(nil), s.Families...)
	if low, high := compiled(t, s).EnergyRange(); low != -4 || high != 4 {
		t.Errorf("an open chain of 5 has energies from %v to %v", low, high)
	}
	s.Families[0].Couplings = []float64{1, -2, 0.5, 0.25, 100} // the last bond is cut
	if low, high := compiled(t, s).EnergyRange(); low != -3.75 || high != 3.75 {
		t.Errorf("with random bonds it has energies from %v to %v", low, high)
	}
	if r := compiled(t, s).MaxRates(); len(r) != 1 || r[0] < 0.75 || r[0] > 1 {
		t.Errorf("largest rates %v", r)
	}
}
