package configs

import (
	"slices"

	"sojourn/kinetic/pauli"
)

// pairs lists which covariances in time are recorded: each observable with
// itself, and either the [[pair]] tables or all pairs of scalars.
func (r *reading) pairs(list []requested) [][2]int {
	top := r.section("")
	items := top.items("pair")
	var cross [][2]int
	for _, v := range items {
		if p, ok := v.pair(list); ok && !slices.Contains(cross, p) {
			cross = append(cross, p)
		}
	}
	if len(items) == 0 {
		cross = r.allPairs(list)
	}
	var out [][2]int
	for f := range list {
		out = append(out, [2]int{f, f})
		for g := f + 1; g < len(list); g++ {
			if slices.Contains(cross, [2]int{f, g}) {
				out = append(out, [2]int{f, g})
			}
		}
	}
	return out
}

func (r *reading) allPairs(list []requested) [][2]int {
	var out [][2]int
	for f := range list {
		for g := f + 1; g < len(list); g++ {
			if !list[f].scalar() || !list[g].scalar() {
				continue
			}
			if anticommute(list[f], list[g]) {
				r.d.note(list[g].at, "observable", "%s and %s anticommute: their cross-covariance means nothing and is left out",
					list[f].Name, list[g].Name)
				continue
			}
			out = append(out, [2]int{f, g})
		}
	}
	return out
}

// pair reads one [[pair]].
func (v view) pair(list []requested) (p [2]int, ok bool) {
	n, found := v.find("of")
	switch {
	case !found:
		v.need("of", "write the labels of two observables, such as of = [\"energy\", \"magnetization\"]")
		return p, false
	case n.bad:
		return p, false
	case len(n.items) != 2:
		v.fault("of", "has %s; a pair has 2", plural(len(n.items), "label"))
		return p, false
	}
	var labels []string
	for _, o := range list {
		labels = append(labels, o.Name)
	}
	for i, item := range n.items {
		p[i] = slices.Index(labels, item.text)
		if p[i] < 0 {
			if near := nearest(item.text, labels); near != "" {
				v.faultAt(item.at, "of", "no observable is labelled %q; did you mean %q?", item.text, near)
			} else {
				v.faultAt(item.at, "of", "no observable is labelled %q; there are %s", item.text, listed(labels, "and"))
			}
			return p, false
		}
	}
	f, g := list[p[0]], list[p[1]]
	switch {
	case p[0] == p[1]:
		v.fault("of", "names %s twice; every observable is recorded with itself anyway", f.Name)
		return p, false
	case anticommute(f, g):
		v.fault("of", "%s and %s anticommute: they have no joint values, and their cross-covariance means nothing", f.Name, g.Name)
		return p, false
	}
	for i, o := range []requested{f, g} {
		if !o.scalar() {
			what := "only energy, magnetization and terms have cross-covariances"
			if o.Observable.scalar() {
				what = "with more than two levels sums of tracked operators are complex, and have no cross-covariances"
			}
			v.faultAt(n.items[i].at, "of", "%s has several components: %s", o.Name, what)
			return p, false
		}
	}
	return [2]int{min(p[0], p[1]), max(p[0], p[1])}, true
}

// anticommute reports whether some translates of what two observables are made
// of do not commute.
func anticommute(f, g requested) bool {
	for _, a := range f.operators {
		for _, b := range g.operators {
			if _, ok := pauli.Commute(a, b, f.levels); !ok {
				return true
			}
		}
	}
	return false
}
