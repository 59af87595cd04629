package exact

import (
	"math/big"
	"slices"
)

// SectorSize returns how many orbits at least the sector of the observables
// has: the states that the moves connect over the order of the symmetries that
// the observables share. It costs nothing against System.Sector.
func (s *System) SectorSize(observables ...Observable) (*big.Int, error) {
	g, err := s.symmetryOf(observables)
	if err != nil {
		return nil, err
	}
	return new(big.Int).Div(s.OrbitSize(), big.NewInt(int64(g.order()))), nil
}

// Inequivalent returns an observable with the same mean and covariances in
// equilibrium and fewer components, if translations that leave the generator
// and the reference state as they are take components into each other and all
// have equally many translates: of each set of translates one is kept, and the
// norm divided by their number. Else the observable is returned as it is.
// Components of several instances are not looked into.
func (s *System) Inequivalent(o Observable) Observable {
	var steps [][]int32
	for a := range s.Spec.Lattice.Axes {
		if t, ok := s.translation(a); ok {
			steps = append(steps, t)
		}
	}
	at := map[int][]int{} // instance -> components
	for i, c := range o.Components {
		if len(c) != 1 {
			return o
		}
		at[c[0].Instance] = append(at[c[0].Instance], i)
	}
	seen := make([]bool, len(o.Components))
	translates := 0
	var kept []Component
	for i := range o.Components {
		if seen[i] {
			continue
		}
		seen[i] = true
		orbit := []int{i}
		for k := 0; k < len(orbit); k++ {
			part := o.Components[orbit[k]][0]
			for _, t := range steps {
				for _, j := range at[int(t[part.Instance])] {
					if !seen[j] && slices.Equal(o.Components[j][0].Value, part.Value) {
						seen[j] = true
						orbit = append(orbit, j)
					}
				}
			}
		}
		if translates > 0 && len(orbit) != translates {
			return o
		}
		translates = len(orbit)
		kept = append(kept, o.Components[i])
	}
	if translates > 1 {
		o.Components, o.Norm = kept, o.Norm/float64(translates)
	}
	return o
}
