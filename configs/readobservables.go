package configs

import (
	"fmt"
	"slices"
	"strings"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// takes lists the keys that each kind of observable needs besides its kind.
var kindTakes = map[string][]string{
	kindEnergy:        {},
	kindMagnetization: {},
	kindTerms:         {"family"},
	kindLocal:         {"family"},
	kindFourier:       {"family", "wavevector"},
	kindOperator:      {"tracked"},
}

// requested is an observable with what it is made of.
type requested struct {
	Observable
	operators []pauli.Operator
	levels    int
	tracked   bool // it is made of tracked operators
	at        int
	view      view // nothing if it was not asked for
}

// scalar reports whether the observable is one real number: a sum of tracked
// operators of more than two levels is complex.
func (o requested) scalar() bool { return o.Observable.scalar() && !(o.tracked && o.levels > 2) }

// scalar reports whether the observable is one number, so that its covariance
// with another means something.
func (o Observable) scalar() bool {
	return o.Kind == kindEnergy || o.Kind == kindMagnetization || o.Kind == kindTerms
}

// observables reads every [[observable]], or chooses some if there is none.
func (r *reading) observables(h *hamiltonian, l lattice.Lattice, bath []kinetic.BathOperator) []requested {
	top := r.section("")
	items := top.items("observable")
	if len(items) == 0 {
		if n, found := top.find("observable"); found && n.bad {
			return nil
		}
		return r.chosen(h, bath)
	}
	var out []requested
	for _, v := range items {
		o, ok := v.observable(h, l)
		if !ok {
			continue
		}
		same := slices.IndexFunc(out, func(p requested) bool { return p.Name == o.Name })
		if same >= 0 {
			v.fault("name", "%q is the label of another observable, in line %d: give name = a label of its own",
				o.Name, r.d.line(out[same].at))
			continue
		}
		v.noteConstant(o, h, bath)
		out = append(out, o)
	}
	return out
}

// chosen lists the observables of a study that names none.
func (r *reading) chosen(h *hamiltonian, bath []kinetic.BathOperator) []requested {
	out := []requested{{Observable: Observable{Name: kindEnergy, Kind: kindEnergy}, levels: h.Levels, at: nowhere}}
	if t, ok := h.order(); ok {
		out = append(out, requested{
			Observable: Observable{Name: kindMagnetization, Kind: kindMagnetization}, operators: []pauli.Operator{t.Operator},
			levels: h.Levels, tracked: true, at: nowhere})
	} else {
		for _, t := range h.Tracked {
			if t.Operator.Extended() && changedBy(t.Operator, bath, h.Levels) {
				out = append(out, requested{
					Observable: Observable{Name: kindOperator + "-" + t.Name, Kind: kindOperator, Tracked: t.Name},
					operators:  []pauli.Operator{t.Operator}, levels: h.Levels, tracked: true, at: nowhere})
			}
		}
	}
	var names []string
	for _, o := range out {
		names = append(names, o.Name)
	}
	r.defaults = append(r.defaults, Setting{Name: "observable", Value: strings.Join(names, ", ")})
	return out
}

func (v view) observable(h *hamiltonian, l lattice.Lattice) (o requested, ok bool) {
	o.at, o.view, o.levels = v.at, v, h.Levels
	kind, ok := v.word("kind")
	if !ok {
		if !v.has("kind") {
			v.need("kind", "it is one of "+listed(kinds, "or"))
		}
		return o, false
	}
	o.Kind, o.Single = kind, v.flag("single")
	ok = v.checkKeys(kind)
	label := kind
	if n, found := v.find("family"); found && ok {
		o.Family = n.text
		o.operators, ok = v.resolveFamily("family", n, h)
		o.tracked = len(h.family(n.text)) == 0
		label += "-" + o.Family
	}
	if n, found := v.find("tracked"); found && ok {
		o.Tracked = n.text
		o.operators, ok = v.resolveTracked(n, h)
		o.tracked = true
		label += "-" + o.Tracked
	}
	if ok && kind == kindFourier {
		o.Wavevector, ok = v.wavevector(l)
		for a := range l.Axes {
			label += fmt.Sprintf("-%d", o.Wavevector[a])
		}
	}
	if ok && kind == kindLocal {
		ok = v.alike(h, l, o.Family)
	}
	if kind == kindMagnetization {
		t, has := h.order()
		if !has {
			v.fault("kind", "this Hamiltonian has no magnetization; it has %s", h.inventory())
			ok = false
		}
		o.operators, o.tracked = []pauli.Operator{t.Operator}, true
	}
	o.Name = label
	if n, found := v.find("name"); found {
		o.Name = n.text
		ok = ok && !n.bad
	}
	return o, ok
}

// checkKeys reports keys that a kind lacks or does not take.
func (v view) checkKeys(kind string) bool {
	ok := true
	for _, key := range []string{"family", "tracked", "wavevector"} {
		n, found := v.find(key)
		takes := slices.Contains(kindTakes[kind], key)
		switch {
		case found && !takes:
			v.refuse(key, "is not a key of the kind %s", kind)
			ok = false
		case takes && !found:
			v.need(key, map[string]string{
				"family":     "name a family, a group of families, or a tracked operator of single cells",
				"tracked":    "name a tracked operator that runs along whole axes",
				"wavevector": "give one integer per axis, in units of 2 pi / length",
			}[key])
			ok = false
		case found && n.bad:
			ok = false
		}
	}
	return ok
}

// resolveFamily finds the operators that a family, group or local tracked
// operator stands for.
func (v view) resolveFamily(key string, n *node, h *hamiltonian) ([]pauli.Operator, bool) {
	var out []pauli.Operator
	families := h.family(n.text)
	for _, f := range families {
		if f.Coupling != 0 {
			out = append(out, f.Operator)
		}
	}
	if out != nil {
		return out, true
	}
	t, tracked := h.tracked(n.text)
	switch {
	case len(families) > 0:
		v.fault(key, "%q has coupling 0 here and is not part of the Hamiltonian", n.text)
	case tracked && t.Operator.Extended():
		v.fault(key, "%q runs across the lattice; observe it with kind = \"operator\", tracked = %q", n.text, n.text)
	case tracked:
		return []pauli.Operator{t.Operator}, true
	default:
		v.unknownOperator(key, n, h)
	}
	return nil, false
}

func (v view) resolveTracked(n *node, h *hamiltonian) ([]pauli.Operator, bool) {
	t, ok := h.tracked(n.text)
	switch {
	case ok && t.Operator.Extended():
		return []pauli.Operator{t.Operator}, true
	case ok || len(h.family(n.text)) > 0:
		v.fault("tracked", "%q has one term per cell; observe it with kind = terms, local or fourier, and family = %q", n.text, n.text)
	default:
		v.unknownOperator("tracked", n, h)
	}
	return nil, false
}

func (v view) unknownOperator(key string, n *node, h *hamiltonian) {
	if near := nearest(n.text, h.names()); near != "" {
		v.fault(key, "there is no %q; did you mean %q?", n.text, near)
		return
	}
	v.fault(key, "there is no %q; the Hamiltonian has %s", n.text, h.inventory())
}

// names lists families, groups and tracked operators.
func (h *hamiltonian) names() []string {
	var out []string
	for _, f := range h.Families {
		out = append(out, f.Name)
		if f.Group != "" && !slices.Contains(out, f.Group) {
			out = append(out, f.Group)
		}
	}
	for _, t := range h.Tracked {
		out = append(out, t.Name)
	}
	return out
}

// inventory lists in words what can be observed.
func (h *hamiltonian) inventory() string {
	var local, across []string
	for _, t := range h.Tracked {
		if t.Operator.Extended() {
			across = append(across, t.Name)
		} else {
			local = append(local, t.Name)
		}
	}
	var families, groups []string
	for _, f := range h.Families {
		if f.Coupling != 0 {
			families = append(families, f.Name)
		}
		if f.Coupling != 0 && f.Group != "" && !slices.Contains(groups, f.Group) {
			groups = append(groups, f.Group)
		}
	}
	var out []string
	for _, part := range []struct {
		what  string
		names []string
	}{{"families", families}, {"groups", groups}, {"tracked operators of single cells", local}, {"tracked operators across the lattice", across}} {
		if len(part.names) > 0 {
			out = append(out, part.what+" "+strings.Join(part.names, ", "))
		}
	}
	if len(out) == 0 {
		return "nothing but its energy"
	}
	return strings.Join(out, "; ")
}

// wavevector reads one integer per axis. Beyond half the length a wave is the
// same on the lattice as a longer one, and 0 is the plain sum.
func (v view) wavevector(l lattice.Lattice) (k lattice.Offset, ok bool) {
	items := v.list("wavevector")
	if len(items) != l.Axes {
		v.fault("wavevector", "has %s on a lattice with %s", plural(len(items), "component"), plural(l.Axes, "axis"))
		return k, false
	}
	for a, item := range items {
		if 2*max(item.integer, -item.integer) > int64(l.Size[a]) || item.integer < -1<<40 {
			v.faultAt(item.at, "wavevector", "%s is more than half of the %d cells along this axis", item.shown(), l.Size[a])
			return k, false
		}
		k[a] = int(item.integer)
	}
	if k == (lattice.Offset{}) {
		v.fault("wavevector", "is 0: that is the plain sum, kind = \"terms\"")
		return k, false
	}
	return k, true
}

// alike refuses the single terms of a group whose families are not images of
// each other: the mean of their autocorrelations would mix different means.
func (v view) alike(h *hamiltonian, l lattice.Lattice, name string) bool {
	families := h.family(name)
	if len(families) < 2 {
		return true
	}
	same := true
	for a := 1; a < l.Axes; a++ {
		same = same && l.Size[a] == l.Size[0] && l.Open[a] == l.Open[0]
	}
	var names []string
	for _, f := range families {
		names = append(names, f.Name)
		same = same && f.Coupling == families[0].Coupling && slices.Equal(f.Shape, families[0].Shape)
	}
	if !same {
		v.fault("family", "the families of the group %s may have different means on this lattice: ask for one of %s", name, listed(names, "or"))
	}
	return same
}

// noteConstant says that nothing in the bath changes an observable.
func (v view) noteConstant(o requested, h *hamiltonian, bath []kinetic.BathOperator) {
	if o.Kind == kindEnergy || slices.ContainsFunc(o.operators, func(op pauli.Operator) bool { return changedBy(op, bath, h.Levels) }) {
		return
	}
	v.r.d.note(v.at, "observable", "%s is constant: no bath operator changes it", o.Name)
}

// changedBy reports whether a bath operator does not commute with the operator
// on some site.
func changedBy(op pauli.Operator, bath []kinetic.BathOperator, levels int) bool {
	for _, f := range op.Factors() {
		for _, b := range bath {
			acts := b.Sites == nil || slices.Contains(b.Sites, f.Site)
			if acts && (b.X*f.Z-b.Z*f.X)%levels != 0 {
				return true
			}
		}
	}
	return false
}
