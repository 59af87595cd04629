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

// Powers returns the bath operator in the given powers 1..q-1 (nil for the
// first), each followed by its inverse where that is another; none is listed
// twice. They are named X, X^-1, X^2, X^-2 and so on.
func (b BathOperator) Powers(powers []int, q int) []BathOperator {
	if powers == nil {
		powers = []int{1}
	}
	var out []BathOperator
	seen := make([]bool, q)
	for _, k := range powers {
		for _, n := range []int{k, q - k} {
			if seen[n] {
				continue
			}
			seen[n] = true
			p := b
			p.X, p.Z = b.X*n%q, b.Z*n%q
			switch {
			case n == 1:
			case 2*n <= q:
				p.Name = fmt.Sprintf("%s^%d", b.Name, n)
			default:
				p.Name = fmt.Sprintf("%s^-%d", b.Name, q-n)
			}
			out = append(out, p)
		}
	}
	return out
}
