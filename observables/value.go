package observables

import (
	"fmt"

	"sojourn/kinetic"
)

// valuesOf returns what a term of a family is worth by its level s: for two
// levels the eigenvalue (-1)^s; for more the energy over -J of a term that has
// one, and the eigenvalue exp(2 pi i s/q) of a tracked operator.
func valuesOf(g *kinetic.Generator, family int) []complex128 {
	if g.Levels == 2 || g.Families[family].Energy == nil {
		return roots(g.Levels)
	}
	var out []complex128
	for _, v := range g.Spec.Families[family].Shape {
		out = append(out, complex(v, 0))
	}
	return out
}

// roots returns exp(2 pi i s/q) by s.
func roots(q int) []complex128 {
	out := make([]complex128, q)
	for s := range out {
		out[s] = turn(s, q)
	}
	return out
}

// together returns the sum of real and imaginary part: the components of a
// complex observable.
func together(c complex128) float64 { return real(c) + imag(c) }

// overlap returns Re(a^* b), the product of two complex values summed over
// components.
func overlap(a, b complex128) float64 { return real(a)*real(b) + imag(a)*imag(b) }

// complexMean refuses tracked operators whose mean may be complex: covariances
// subtract the square of the sum of real and imaginary part, which is the square
// of the mean if the latter has one of them only. It has where every family has
// the same energy at s and q - s, and vanishes where the same power of X on all
// sites of a kind changes the operator and no term.
func complexMean(g *kinetic.Generator, name string) error {
	skew := ""
	for f := range g.Families {
		for s, e := range g.Families[f].Energy {
			if s > 0 && e != g.Families[f].Energy[g.Levels-s] {
				skew = g.Families[f].Name
			}
		}
	}
	if skew == "" || turnedByAll(g, name) {
		return nil
	}
	return fmt.Errorf("the mean of %q can be complex, which the records have no room for: the energies of family %q differ between levels s and q - s", name, skew)
}

// turnedByAll reports whether X on all sites of one kind changes a tracked
// operator by a multiple of w and leaves every term as it is.
func turnedByAll(g *kinetic.Generator, name string) bool {
	for site := range g.Spec.Sites {
		turned := false
		for _, t := range g.Spec.Tracked {
			sum := 0
			for _, f := range t.Operator.Factors() {
				if f.Site == site {
					sum += f.Z
				}
			}
			turned = turned || t.Name == name && sum%g.Levels != 0 && !t.Operator.Extended()
		}
		for _, f := range g.Spec.Families {
			sum := 0
			for _, x := range f.Operator.Factors() {
				if x.Site == site {
					sum += x.Z
				}
			}
			if sum%g.Levels != 0 || f.Cut.Truncates(g.Lattice) {
				turned = false
			}
		}
		if turned {
			return true
		}
	}
	return false
}
