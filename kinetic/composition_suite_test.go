package kinetic_test

import (
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/kinetictest"
)

// The composition engine is given the suite's models with their couplings
// spelled out term by term.
func TestCompositionSuite(t *testing.T) {
	compiled := map[*kinetic.Generator]*kinetic.Generator{}
	kinetictest.Suite(t, func(g *kinetic.Generator, seed [32]byte, unit int, start kinetic.Start) (kinetic.Engine, error) {
		varying := compiled[g]
		if varying == nil {
			spec := g.Spec
			for _, b := range spec.Bath {
				if b.Law.Kind == bath.Table {
					return kinetic.NewClasses(g, seed, unit, start)
				}
			}
			spec.Families = append([]kinetic.FamilySpec(nil), spec.Families...)
			for f := range spec.Families {
				if spec.Families[f].Shape != nil {
					return kinetic.NewClasses(g, seed, unit, start)
				}
				j := make([]float64, g.Cells())
				for c := range j {
					j[c] = spec.Families[f].Coupling
				}
				spec.Families[f].Couplings = j
			}
			var err error
			if varying, err = kinetic.Compile(spec); err != nil {
				return nil, err
			}
			compiled[g] = varying
		}
		if varying.Couplings == nil { // a model without terms
			return kinetic.NewClasses(g, seed, unit, start)
		}
		return kinetic.NewComposition(varying, seed, unit, start)
	})
}
