package kinetic

import (
	"fmt"
	"reflect"
	"slices"
)

// checkInverses verifies that every bath operator comes with its inverse, on
// the same sites and under the same law: detailed balance pairs each jump with
// the one that undoes it. With two levels every operator is its own inverse.
func (s Spec) checkInverses() error {
	acts := func(b BathOperator, site int) bool { return b.Sites == nil || slices.Contains(b.Sites, site) }
	for _, a := range s.Bath {
		for site := range s.Sites {
			if !acts(a, site) {
				continue
			}
			if !slices.ContainsFunc(s.Bath, func(b BathOperator) bool {
				return (a.X+b.X)%s.Levels == 0 && (a.Z+b.Z)%s.Levels == 0 && acts(b, site) && reflect.DeepEqual(a.Law, b.Law)
			}) {
				return fmt.Errorf("bath operator %s on site %d of the cell has no inverse under the same law, which detailed balance needs", a.Name, site)
			}
		}
	}
	return nil
}
