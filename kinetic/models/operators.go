package models

import (
	"fmt"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// axes are the names of the axes, and the variables of polynomials.
var axes = [lattice.MaxAxes]string{"x", "y", "z", "w"}

// planes are the pairs of axes of a lattice with n axes: xy, yz, xz first.
func planes(n int) [][2]int {
	all := [][2]int{{0, 1}, {1, 2}, {0, 2}, {0, 3}, {1, 3}, {2, 3}}
	var out [][2]int
	for _, p := range all {
		if p[1] < n {
			out = append(out, p)
		}
	}
	return out
}

// xs returns the X-type operator of one part per site of the cell, over Z_2.
func xs(parts ...string) pauli.Operator { return xq(2, parts...) }

// zs returns the Z-type operator of one part per site of the cell, over Z_2.
func zs(parts ...string) pauli.Operator { return zq(2, parts...) }

// xq and zq are xs and zs over Z_q.
func xq(q int, parts ...string) pauli.Operator {
	p, extent := parse(q, parts)
	return pauli.Operator{X: p, Extent: extent}
}

func zq(q int, parts ...string) pauli.Operator {
	p, extent := parse(q, parts)
	return pauli.Operator{Z: p, Extent: extent}
}

func parse(q int, parts []string) (list []pauli.Polynomial, extent [lattice.MaxAxes]bool) {
	for _, src := range parts {
		p, e, err := pauli.ParsePart(src, q, lattice.MaxAxes)
		if err != nil {
			panic(fmt.Sprintf("models: %q: %v", src, err))
		}
		if e != ([lattice.MaxAxes]bool{}) {
			extent = e
		}
		list = append(list, p)
	}
	return list, extent
}

// levels is the parameter q.
func levels(otherwise int) Parameter {
	return Parameter{Name: "levels", Default: float64(otherwise), Whole: true, Min: 2, Max: 16, Doc: "q, levels of a site"}
}

// clockShape is cos(2 pi s/q); nil, which is the same, for two levels.
func clockShape(q int) []float64 {
	if q == 2 {
		return nil
	}
	return kinetic.ClockShape(q)
}

// only returns one part per site: part on the given site, nothing on others.
func only(sites, site int, part string) []string {
	out := make([]string, sites)
	for i := range out {
		out[i] = "0"
	}
	out[site] = part
	return out
}

// planeName names a plane: "xy".
func planeName(ab [2]int) string { return axes[ab[0]] + axes[ab[1]] }

// planeSpan is the product over a plane: "plane x y".
func planeSpan(ab [2]int) string { return "plane " + axes[ab[0]] + " " + axes[ab[1]] }
