package observables

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// MaxLocal is the largest number of terms that a Local observable reads: a
// quarter of it where terms have more than two levels, or there are several
// lanes.
const MaxLocal = 4096

func localLimit(g *kinetic.Generator, lanes int) int {
	if g.Levels > 2 || lanes > 1 {
		return MaxLocal / 4
	}
	return MaxLocal
}

// sublattice chooses the cells whose terms a Local observable reads: a grid of
// at most MaxLocal/len(families) cells for each family, spread evenly. Along an
// axis with open edges only the middle layer of the existing terms is read:
// terms at different distances from an edge have different means, and the mean
// over the lattice of their covariances could not be had from their mean value.
// All chosen terms of a family are images of each other under translations.
func sublattice(g *kinetic.Generator, families []int, limit int) []chosenTerm {
	var out []chosenTerm
	limit /= len(families)
	for _, f := range families {
		loc := newLocator(g, f)
		lo, hi := extent(g, f)
		var count lattice.Offset
		for a, n := range g.Lattice.Size {
			count[a] = min(n, limit)
			if g.Lattice.Open[a] {
				count[a] = 1
			}
		}
		for product(count) > limit {
			largest := 0
			for a := range count {
				if count[a] > count[largest] {
					largest = a
				}
			}
			count[largest]--
		}
		for i := range product(count) {
			var at lattice.Offset
			for a, n := range count {
				at[a] = i % n * g.Lattice.Size[a] / n
				if g.Lattice.Open[a] {
					at[a] = (lo[a] + hi[a]) / 2
				}
				i /= n
			}
			cell := g.Lattice.Index(at)
			if s, ok := loc.find(cell); ok {
				out = append(out, chosenTerm{s, loc, cell})
			}
		}
	}
	return out
}

// chosenTerm is one term of a Local observable.
type chosenTerm struct {
	spot
	loc  *locator
	cell int
}

func product(o lattice.Offset) int { return o[0] * o[1] * o[2] * o[3] }

// extent returns the smallest and the largest coordinates of a family's terms
// along open axes, and the whole lattice along periodic ones.
func extent(g *kinetic.Generator, f int) (lo, hi lattice.Offset) {
	for a, n := range g.Lattice.Size {
		hi[a] = n - 1
	}
	if g.Lattice.Periodic() || g.Families[f].Terms == g.Cells() {
		return lo, hi
	}
	lo, hi = hi, lo
	for c := range g.Cells() {
		if g.TermExists(f, c) {
			at := g.Lattice.Coord(c)
			for a := range at {
				lo[a] = min(lo[a], at[a])
				hi[a] = max(hi[a], at[a])
			}
		}
	}
	return lo, hi
}
