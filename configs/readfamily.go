package configs

import (
	"slices"
	"strings"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// energies reads the energies of a family by level, over -J; nil for two levels
// of 1 and -1.
func (v view) energies(levels int) []float64 {
	n, found := v.find("energies")
	switch {
	case found && n.bad:
		return nil
	case found && n.kind == kindList:
		if len(n.items) != levels {
			v.fault("energies", "has %s for %d levels: give one for each", plural(len(n.items), "number"), levels)
			return nil
		}
		var shape []float64
		for _, item := range n.items {
			shape = append(shape, 0-item.number)
		}
		if levels == 2 && shape[0] == 1 && shape[1] == -1 {
			return nil
		}
		return shape
	case found && n.text == "potts":
		shape := make([]float64, levels)
		shape[0] = 1
		return shape
	case !found && levels > 2:
		v.fill("energies", `"clock"`)
	}
	if levels == 2 {
		return nil
	}
	return kinetic.ClockShape(levels)
}

// cut reads what becomes of terms at open edges.
func (v view) cut(l lattice.Lattice) kinetic.Cut {
	n, found := v.find("cut")
	switch {
	case !found:
		if !l.Periodic() {
			v.fill("cut", `"drop"`)
		}
		return kinetic.Drop
	case n.bad:
		return kinetic.Drop
	case n.kind == kindText:
		return kinetic.Cut(n.text)
	case len(n.items) != l.Axes:
		v.fault("cut", "has %s for %s: give one for each, or a single one for all", plural(len(n.items), "word"), plural(l.Axes, "axis"))
		return kinetic.Drop
	}
	var rules []kinetic.Cut
	for _, item := range n.items {
		rules = append(rules, kinetic.Cut(item.text))
	}
	return kinetic.CutAlong(rules...)
}

// addAbsent reads a site that is missing at an edge.
func (h *hamiltonian) addAbsent(v view, l lattice.Lattice) {
	var a kinetic.Absence
	ok := true
	for _, key := range []string{"site", "axis", "end"} {
		n, found := v.find(key)
		if !found {
			k, _ := v.section.find(key)
			v.need(key, k.Doc)
		}
		ok = ok && found && !n.bad
	}
	if !ok {
		return
	}
	site, _ := v.integer("site")
	axis, _ := v.word("axis")
	end, _ := v.word("end")
	a.Site, a.Axis, a.Last = int(min(site, 1<<31)), strings.Index("xyzw", axis), end == "last"
	switch {
	case a.Site >= h.Sites:
		v.fault("site", "the cell has no site %d; its sites are 0 to %d", site, h.Sites-1)
	case a.Axis >= l.Axes:
		v.fault("axis", "the lattice has no axis %s", axis)
	case !l.Open[a.Axis]:
		v.fault("axis", "%s has no end: it is periodic", axis)
	case slices.Contains(h.Absent, a):
		v.faultAt(v.at, "", "says again that site %d is absent at the %s %s", site, end, axis)
	default:
		h.Absent = append(h.Absent, a)
	}
}
