package configs

import (
	"slices"

	"sojourn/kinetic/lattice"
	"sojourn/kinetic/models"
)

// lattice reads [lattice].
func (r *reading) lattice() (l lattice.Lattice, ok bool) {
	v := r.section("lattice")
	n, found := v.find("size")
	if !found {
		v.need("size", "write the cells along each axis, such as size = [32, 32], or scan it")
		return l, false
	}
	if n.bad {
		return l, false
	}
	size, ok := r.lengths(v, n)
	if !ok {
		return l, false
	}
	open, ok := r.open(v, len(size))
	if !ok {
		return l, false
	}
	cells := 1.0
	for _, n := range size {
		cells *= float64(n)
	}
	if cells > 1<<40 {
		v.fault("size", "makes more than 2^40 cells")
		return l, false
	}
	l, err := lattice.New(size, open)
	if err != nil {
		v.fault("size", "%s", err)
		return l, false
	}
	return l, true
}

// lengths reads the cells along each axis. A scan may give one integer for all.
func (r *reading) lengths(v view, n *node) ([]int, bool) {
	if n.kind == kindInteger {
		axes := r.axes(v)
		if axes == 0 {
			v.faultAt(n.at, "size", "is the same for all axes, but how many there are is not said: write a list, or size = [...] in [lattice]")
			return nil, false
		}
		size := make([]int, axes)
		for a := range size {
			size[a] = int(min(n.integer, 1<<41))
		}
		return size, true
	}
	if len(n.items) > lattice.MaxAxes {
		v.faultAt(n.items[lattice.MaxAxes].at, "size", "has %d axes; a lattice has 1 to %d", len(n.items), lattice.MaxAxes)
		return nil, false
	}
	var size []int
	for _, item := range n.items {
		size = append(size, int(min(item.integer, 1<<41)))
	}
	return size, true
}

// axes returns how many axes the lattice has where a scan does not say: as many
// as [lattice] gives lengths or boundaries, or as the model needs; 0 if that is
// open.
func (r *reading) axes(v view) int {
	if v.table != nil {
		for _, key := range []string{"size", "boundary"} {
			if e := v.table.get(key); e != nil && e.value.kind == kindList && len(e.value.items) <= lattice.MaxAxes {
				return len(e.value.items)
			}
		}
	}
	name, _ := r.section("hamiltonian").word("model")
	if m, ok := models.Find(name); ok && m.MinAxes == m.MaxAxes {
		return m.MinAxes
	}
	return 0
}

// open reads the boundaries.
func (r *reading) open(v view, axes int) ([]bool, bool) {
	out := make([]bool, axes)
	name, _ := r.section("hamiltonian").word("model")
	m, _ := models.Find(name)
	n, found := v.find("boundary")
	switch {
	case !found && m.Open:
		for a := range out {
			out[a] = true
		}
		v.fill("boundary", `"open"`)
	case !found:
		v.fill("boundary", `"periodic"`)
	case n.bad:
		return nil, false
	case n.kind == kindText:
		for a := range out {
			out[a] = n.text == "open"
		}
	case len(n.items) != axes:
		v.fault("boundary", "has %s for %s: give one for each, or a single one for all", plural(len(n.items), "word"), plural(axes, "axis"))
		return nil, false
	default:
		for a, item := range n.items {
			out[a] = item.text == "open"
		}
	}
	if m.Open && slices.Contains(out, false) {
		v.fault("boundary", "the model %s has edges: every axis is open", name)
		return nil, false
	}
	return out, true
}
