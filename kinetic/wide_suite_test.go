package kinetic_test

import (
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
)

// The engine for wide patterns is given the suite's models compiled without
// tables.
func TestWideSuite(t *testing.T) {
	compiled := map[*kinetic.Generator]*kinetic.Generator{}
	kinetictest.SuiteLevels(t, func(g *kinetic.Generator, seed [32]byte, unit int, start kinetic.Start) (kinetic.Engine, error) {
		if compiled[g] == nil {
			wide, err := kinetic.CompileWide(g.Spec)
			if err != nil {
				return nil, err
			}
			compiled[g] = wide
		}
		return kinetic.NewComposition(compiled[g], seed, unit, start)
	})
}
