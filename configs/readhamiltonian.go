package configs

import (
	"errors"
	"slices"
	"strconv"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/models"
	"sojourn/kinetic/pauli"
)

// hamiltonian is what [hamiltonian] says.
type hamiltonian struct {
	models.Hamiltonian
	model      string
	parameters []Setting
	places     map[string]int // of the families and tracked operators of a custom model
}

// named returns the operator of a family or tracked operator.
func (h *hamiltonian) named(name string) (pauli.Operator, bool) {
	for _, f := range h.Families {
		if f.Name == name {
			return f.Operator, true
		}
	}
	t, ok := h.tracked(name)
	return t.Operator, ok
}

// family returns the energy families that a name stands for: one, or a group.
func (h *hamiltonian) family(name string) []kinetic.FamilySpec {
	var group []kinetic.FamilySpec
	for _, f := range h.Families {
		if f.Name == name {
			return []kinetic.FamilySpec{f}
		}
		if f.Group == name {
			group = append(group, f)
		}
	}
	return group
}

// tracked returns the tracked operator of a name.
func (h *hamiltonian) tracked(name string) (kinetic.TrackedSpec, bool) {
	for _, t := range h.Tracked {
		if t.Name == name {
			return t, true
		}
	}
	return kinetic.TrackedSpec{}, false
}

// order returns the tracked operator whose sum is the magnetization.
func (h *hamiltonian) order() (kinetic.TrackedSpec, bool) {
	for _, t := range h.Tracked {
		if t.Order {
			return t, true
		}
	}
	return kinetic.TrackedSpec{}, false
}

func (r *reading) hamiltonian(l lattice.Lattice) (h *hamiltonian, ok bool) {
	defer func() {
		if ok {
			r.model = h
		}
	}()
	v := r.section("hamiltonian")
	name, ok := v.word("model")
	if !ok {
		if !v.has("model") {
			v.need("model", "name a built-in Hamiltonian ("+listed(modelNames(), "or")+")")
		}
		return nil, false
	}
	if name == custom {
		return v.custom(l)
	}
	m, ok := models.Find(name)
	if !ok {
		r.failed = true // reported when the keys were checked
		return nil, false
	}
	if l.Axes < m.MinAxes || l.Axes > m.MaxAxes {
		r.section("lattice").fault("size", "has %s; the model %s is defined on %s", plural(l.Axes, "axis"), name, axesText(m))
		return nil, false
	}
	values := models.Values{}
	for _, p := range m.Parameters {
		if n, found := v.find(p.Name); found {
			values[p.Name] = n.number
			ok = ok && !n.bad
			if p.Axes > l.Axes {
				v.fault(p.Name, "means nothing on a lattice of %d axes; it needs %d", l.Axes, p.Axes)
				ok = false
			}
		}
	}
	if !ok {
		return nil, false
	}
	all := m.Resolve(values)
	h = &hamiltonian{model: name}
	for _, p := range m.Parameters {
		if _, given := values[p.Name]; p.Axes > l.Axes && !given {
			continue // belongs to lattices of more axes
		}
		h.parameters = append(h.parameters, Setting{Name: p.Name, Value: formatNumber(all[p.Name]), Numbers: []float64{all[p.Name]}})
		v.took(p.Name, all[p.Name])
		if _, given := values[p.Name]; !given {
			v.fill(p.Name, formatNumber(all[p.Name]))
		}
	}
	built, err := m.Build(l, values)
	if err != nil {
		v.fault("model", "%s", err)
		return nil, false
	}
	h.Hamiltonian = built
	return h, true
}

func axesText(m models.Model) string {
	if m.MinAxes == m.MaxAxes {
		return strconv.Itoa(m.MinAxes)
	}
	return strconv.Itoa(m.MinAxes) + " to " + strconv.Itoa(m.MaxAxes)
}

// custom reads a Hamiltonian that the study spells out.
func (v view) custom(l lattice.Lattice) (*hamiltonian, bool) {
	h := &hamiltonian{model: custom, places: map[string]int{}}
	levels, ok1 := v.integer("levels")
	sites, ok2 := v.integer("sites_per_cell")
	if !ok1 || !ok2 {
		return nil, false
	}
	h.Levels, h.Sites = int(levels), int(sites)
	for _, a := range v.items("absent") {
		h.addAbsent(a, l)
	}
	families, tracked := v.items("family"), v.items("tracked")
	if len(families) == 0 && !v.has("family") {
		v.need("family", "a custom Hamiltonian is spelt out in [[hamiltonian.family]] tables")
	}
	for _, f := range families {
		h.addFamily(f, l)
	}
	for _, t := range tracked {
		h.addTracked(t, l)
	}
	h.checkNames(families)
	return h, !v.r.failed
}

// claim reads the name of a family or tracked operator, which no other may
// have.
func (h *hamiltonian) claim(v *view) string {
	n, found := v.find("name")
	switch {
	case !found:
		v.need("name", "observables need it")
		return ""
	case n.bad:
		return ""
	}
	if at, taken := h.places[n.text]; taken {
		v.fault("name", "%q is the name of another operator, in line %d", n.text, v.r.d.line(at))
		return ""
	}
	h.places[n.text] = n.at
	v.label += "." + n.text
	return n.text
}

func (h *hamiltonian) addFamily(v view, l lattice.Lattice) {
	f := kinetic.FamilySpec{Name: h.claim(&v)}
	f.Operator = h.operator(v, l)
	f.Coupling, _ = v.number("coupling")
	f.Shape = v.energies(h.Levels)
	f.Cut = v.cut(l)
	f.Group, _ = v.word("group")
	if f.Operator.Extended() {
		v.faultAt(v.at, "", "runs along whole axes, as only [[hamiltonian.tracked]] operators can")
	}
	h.Families = append(h.Families, f)
}

func (h *hamiltonian) addTracked(v view, l lattice.Lattice) {
	t := kinetic.TrackedSpec{Name: h.claim(&v)}
	t.Operator = h.operator(v, l)
	if t.Order = v.flag("order"); t.Order {
		if first, taken := h.order(); taken {
			v.fault("order", "%s is the order already: one operator is", first.Name)
		}
		if t.Operator.Extended() {
			v.fault("order", "the magnetization is a sum over cells; this operator runs along whole axes")
		}
	}
	h.Tracked = append(h.Tracked, t)
}

// checkNames refuses groups that are called like a family or operator.
func (h *hamiltonian) checkNames(families []view) {
	for _, v := range families {
		group, ok := v.word("group")
		if !ok {
			continue
		}
		if at, taken := h.places[group]; taken {
			v.fault("group", "%q is the name of an operator, in line %d", group, v.r.d.line(at))
		}
	}
}

// operator reads the polynomials of one operator.
func (h *hamiltonian) operator(v view, l lattice.Lattice) pauli.Operator {
	var op pauli.Operator
	if !v.has("x") && !v.has("z") {
		v.need("z", "give its polynomials: x = [...], z = [...], or both")
		return op
	}
	p := parts{view: v, op: &op, sites: h.Sites, axes: l.Axes, levels: h.Levels}
	op.X, op.Z = p.read("x"), p.read("z")
	if !v.r.failed && len(op.Factors()) == 0 {
		v.faultAt(v.at, "", "is the identity: all its polynomials are 0")
	}
	return op
}

// parts reads the polynomials of an operator, which share one extent.
type parts struct {
	view
	op                  *pauli.Operator
	sites, axes, levels int
	local               bool // a polynomial without extent, not 0, was read
}

func (p *parts) read(key string) []pauli.Polynomial {
	items := p.list(key)
	if items == nil {
		return nil
	}
	if len(items) != p.sites {
		p.fault(key, "has %s; the cell has %s, and each needs one, \"0\" for none", plural(len(items), "polynomial"), plural(p.sites, "site"))
		return nil
	}
	out := make([]pauli.Polynomial, 0, len(items))
	for _, item := range items {
		poly, extent, err := pauli.ParsePart(item.text, p.levels, p.axes)
		if err != nil {
			p.syntax(key, item, err)
			continue
		}
		p.extend(key, item, poly, extent)
		out = append(out, poly)
	}
	if slices.ContainsFunc(out, func(q pauli.Polynomial) bool { return len(q) > 0 }) {
		return out
	}
	return nil
}

// syntax reports a polynomial at the character that is wrong.
func (p *parts) syntax(key string, item *node, err error) {
	at, message := item.at, err.Error()
	var se *pauli.SyntaxError
	if errors.As(err, &se) {
		at, message = insideString(item.raw, item.at, se.Offset), se.Message
	}
	p.faultAt(at, key, "%s is not a polynomial: %s", item.shown(), message)
}

// extend takes over the extent of a part; all that are not 0 have the same.
func (p *parts) extend(key string, item *node, poly pauli.Polynomial, extent [lattice.MaxAxes]bool) {
	none := [lattice.MaxAxes]bool{}
	switch {
	case len(poly) == 0:
	case extent == none && p.op.Extent == none:
		p.local = true
	case extent != none && p.op.Extent == none && !p.local:
		p.op.Extent = extent
	case extent != p.op.Extent:
		p.faultAt(item.at, key, "%s runs along other axes than the rest of the operator", item.shown())
	}
}
