package kinetic

import (
	"errors"
	"fmt"
	"math"
)

// Couplings holds couplings that vary from term to term (q = 2), as integers:
// J = J[family][cell]*Unit. The unit is a power of ten if all couplings are
// decimals that fit, and the integers are then exact; else they are rounded to
// 2^-30 of the largest. Energies are integers too, and nothing drifts.
type Couplings struct {
	Unit float64
	J    [][]int32 // by family, nil for tracked operators; by cell
}

var errVaryingCouplings = errors.New("couplings that vary in size run on the composition engine; use engine = \"composition\" or \"auto\"")

var errWidePatterns = errors.New("what a site sees has too many bits or rates for tables; use engine = \"composition\" or \"auto\"")

func checkDisorder(f FamilySpec, s Spec) error {
	if f.Signs == nil && f.Couplings == nil {
		return nil
	}
	if s.Levels != 2 {
		return fmt.Errorf("family %q has random couplings, which need levels = 2", f.Name)
	}
	for _, n := range []int{len(f.Signs), len(f.Couplings)} {
		if n != 0 && n != s.Lattice.Cells() {
			return fmt.Errorf("family %q gives %d couplings for %d cells", f.Name, n, s.Lattice.Cells())
		}
	}
	if f.Couplings != nil && f.Shape != nil {
		return fmt.Errorf("family %q has couplings of many sizes, which need the energies -J and J", f.Name)
	}
	for c, j := range f.Couplings {
		if math.IsNaN(j) || math.IsInf(j, 0) {
			return fmt.Errorf("family %q: the coupling of cell %d is %v", f.Name, c, j)
		}
	}
	return nil
}

// collectCouplings rounds varying couplings to integers.
func (k *compiler) collectCouplings() error {
	largest := 0.0
	varying := false
	for _, f := range k.spec.Families {
		largest = max(largest, math.Abs(f.Coupling))
		for _, j := range f.Couplings {
			largest = max(largest, math.Abs(j))
		}
		varying = varying || f.Couplings != nil
	}
	if !varying {
		return nil
	}
	c := &Couplings{J: make([][]int32, len(k.families))}
	values := make([][]float64, len(k.spec.Families))
	for f, spec := range k.spec.Families {
		if spec.Shape != nil {
			return fmt.Errorf("family %q has energies other than -J and J, which cannot stand beside couplings of many sizes", spec.Name)
		}
		values[f] = spec.Couplings
		if values[f] == nil {
			values[f] = make([]float64, k.g.Cells())
			for cell := range values[f] {
				values[f][cell] = spec.Coupling
			}
		}
	}
	scale := decimalScale(values, largest)
	c.Unit = 1 / scale
	for f := range values {
		c.J[f] = make([]int32, len(values[f]))
		for cell, j := range values[f] {
			c.J[f][cell] = int32(math.Round(j * scale))
		}
	}
	k.g.Couplings = c
	return nil
}

// decimalScale returns the smallest power of ten that makes all values whole, or
// the scale that brings the largest to 2^30.
func decimalScale(values [][]float64, largest float64) float64 {
	for scale := 1.0; largest*scale < 1<<30; scale *= 10 {
		if allWhole(values, scale) {
			return scale
		}
	}
	return 1 << 30 / largest
}

// allWhole reports whether every value is the double nearest to a whole number
// over scale.
func allWhole(values [][]float64, scale float64) bool {
	for _, list := range values {
		for _, v := range list {
			if math.Round(v*scale)/scale != v {
				return false
			}
		}
	}
	return true
}

// seatCouplings lists the couplings of the energy terms in every seat's slots,
// `slots` to a seat; 0 where there is no term. Terms with energy fill the first
// slots of a seat.
func (g *Generator) seatCouplings() (j []int32, slots int) {
	slots = g.energySlots()
	j = make([]int32, g.Addresses()*slots)
	for a := range g.Addresses() {
		shape := &g.Shapes[g.Places[g.PlaceOf(a)].Shape]
		at := g.Lattice.Coord(a / len(g.Seats))
		for b, slot := range g.Seats[shape.Seat].Slots {
			if shape.Present>>b&1 == 0 || g.Couplings.J[slot.Family] == nil {
				continue
			}
			t, _ := g.Lattice.Wrap(at, slot.Offset)
			j[a*slots+b] = g.Couplings.J[slot.Family][g.Lattice.Index(t)]
		}
	}
	return j, slots
}

// energySlots is the largest number of energy terms that a seat shows, at least
// 1.
func (g *Generator) energySlots() int {
	most := 1
	for _, s := range g.Seats {
		n := 0
		for _, slot := range s.Slots {
			if g.Families[slot.Family].Energy != nil {
				n++
			}
		}
		most = max(most, n)
	}
	return most
}
