package observables

import (
	"slices"

	"sojourn/kinetic/lattice"
)

// chainLimit is the distance up to which every distance is taken along a lattice
// with one axis, whose planes are single terms.
const chainLimit = 1024

// displacements returns the displacements at which the covariance in space is
// taken, in increasing order (lattice.Offset.Less): all with every component up
// to limit, and along each axis up to the longest that means something, by 1 up
// to 32 and then 16 to the octave. Components go up to half the length of a
// periodic axis, and to length-1 along an open one. Of d and -d, which have the
// same covariance, the one whose last component that is not 0 is positive is
// taken. On a lattice with one axis the limit is at least chainLimit.
func displacements(l lattice.Lattice, limit int) []lattice.Offset {
	if l.Axes == 1 {
		limit = max(limit, chainLimit)
	}
	var lo, hi lattice.Offset
	for a := range l.Axes {
		reach := longest(l, a)
		hi[a] = min(limit, reach)
		lo[a] = -hi[a]
		if !l.Open[a] && 2*hi[a] == l.Size[a] {
			lo[a]++ // -L/2 is L/2
		}
	}
	var out []lattice.Offset
	for d := lo; ; {
		if !d.Less(lattice.Offset{}) {
			out = append(out, d)
		}
		a := 0
		for a < lattice.MaxAxes && d[a] == hi[a] {
			d[a] = lo[a]
			a++
		}
		if a == lattice.MaxAxes {
			break
		}
		d[a]++
	}
	for a := range l.Axes {
		for r := limit + 1; r <= longest(l, a); r++ {
			if r > 32 {
				r = roundUp(r)
			}
			if r <= longest(l, a) {
				var d lattice.Offset
				d[a] = r
				out = append(out, d)
			}
		}
	}
	slices.SortFunc(out, func(a, b lattice.Offset) int {
		switch {
		case a.Less(b):
			return -1
		case b.Less(a):
			return 1
		}
		return 0
	})
	return out
}

// longest returns the longest distance along an axis that has no shorter image.
func longest(l lattice.Lattice, axis int) int {
	if l.Open[axis] {
		return l.Size[axis] - 1
	}
	return l.Size[axis] / 2
}

// roundUp returns the smallest r' >= r on the grid of 16 distances to the octave
// (16+j)*2^k.
func roundUp(r int) int {
	unit := 1
	for 32*unit < r {
		unit *= 2
	}
	return (r + unit - 1) / unit * unit
}
