package configs

import (
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
)

// disorderTakes lists the keys of each kind of disorder.
var disorderTakes = map[string][]string{
	gaussian:  {"mean", "sd"},
	plusMinus: {"probability"},
}

// disorder reads [hamiltonian.disorder], or every table of that name, and puts a
// coupling that stands for the random ones in the families of h.
func (r *reading) disorder(h *hamiltonian, operators []kinetic.BathOperator) (list []Disorder, sample int) {
	tables := r.section("hamiltonian").items("disorder")
	if tables == nil {
		return nil, 0
	}
	if n, ok := r.scanned[sampleTarget]; ok {
		sample = int(n.integer)
		r.section("hamiltonian.disorder").tookInteger("sample", n.integer)
	}
	taken := map[int]view{}
	samples := view{}
	for _, v := range tables {
		if v.has("samples") {
			n, _ := v.find("samples")
			first, known := samples.r, samples.r != nil
			if known {
				m, _ := samples.find("samples")
				if m.integer != n.integer {
					v.fault("samples", "is %s here and %s in line %d: a sample is one draw of all random couplings together", n.shown(), m.shown(), first.d.line(m.at))
				}
			} else {
				samples = v
			}
		}
		d, ok := v.disorder(h, len(tables) > 1)
		if !ok {
			continue
		}
		for _, f := range d.Families {
			if other, twice := taken[f]; twice {
				v.fault("of", "%s has its couplings drawn in line %d already", h.Families[f].Name, r.d.line(other.at))
			}
			taken[f] = v
		}
		list = append(list, d)
		for _, b := range operators {
			if d.Kind == gaussian && b.Law.Kind == bath.Table {
				v.fault("kind", "gaussian couplings make more energies than a table of rates can list: take another law")
				break
			}
		}
	}
	if samples.r == nil {
		tables[0].fill("samples", "1")
	}
	return list, sample
}

// disorder reads one table.
func (v view) disorder(h *hamiltonian, several bool) (d Disorder, ok bool) {
	kind, ok := v.word("kind")
	if !ok {
		if !v.has("kind") {
			v.need("kind", "write gaussian or plus-minus")
		}
		return d, false
	}
	d.Kind = kind
	if h.Levels != 2 {
		v.faultAt(v.at, "", "random couplings need 2 levels; this Hamiltonian has %d", h.Levels)
		return d, false
	}
	ok = v.disorderFamilies(&d, h, several)
	if several {
		v.label += "." + d.Of
	}
	if !v.disorderNumbers(&d) || !ok {
		return d, false
	}
	for _, f := range d.Families {
		family := &h.Families[f]
		switch {
		case family.Shape != nil:
			v.fault("of", "the energies of %s are not -J and J, as random couplings need", family.Name)
			return d, false
		case kind == plusMinus && family.Coupling == 0:
			v.fault("of", "%s has coupling 0 here: plus-minus turns its sign, so give it a size", family.Name)
			return d, false
		case kind == gaussian && d.Mean != 0:
			family.Coupling = d.Mean
		case kind == gaussian:
			family.Coupling = d.SD
		}
	}
	h.parameters = append(h.parameters, Setting{Name: "disorder." + d.Of, Value: d.text()})
	return d, true
}

// disorderNumbers reads the numbers that the kind takes, and refuses others.
func (v view) disorderNumbers(d *Disorder) bool {
	ok := true
	for _, x := range []struct {
		key, remedy string
		into        *float64
	}{
		{"mean", "gaussian couplings need their mean, such as mean = 0.0", &d.Mean},
		{"sd", "gaussian couplings need their standard deviation, such as sd = 1.0", &d.SD},
		{"probability", "write the probability that a coupling is -J, such as probability = 0.5", &d.Probability},
	} {
		n, found := v.find(x.key)
		takes := slices.Contains(disorderTakes[d.Kind], x.key)
		switch {
		case found && !takes:
			v.refuse(x.key, "is not a key of the kind %s", d.Kind)
			ok = false
		case takes && !found:
			v.need(x.key, x.remedy)
			ok = false
		case takes:
			*x.into = n.number
			v.took(x.key, n.number)
			v.named(d.Of).took(x.key, n.number)
			ok = ok && !n.bad
		}
	}
	d.Seed, _ = v.integer("seed")
	v.named(d.Of).tookInteger("seed", d.Seed)
	return ok
}

// named is the table as a scan may call it, by what it is of.
func (v view) named(of string) view {
	v.label = v.section.Name + "." + of
	return v
}

// disorderFamilies finds the families whose couplings are drawn.
func (v view) disorderFamilies(d *Disorder, h *hamiltonian, several bool) bool {
	n, found := v.find("of")
	if found {
		if n.bad {
			return false
		}
		d.Of = n.text
		for i, f := range h.Families {
			if f.Name == n.text {
				d.Families = []int{i}
				return true
			}
			if f.Group == n.text && n.text != "" {
				d.Families = append(d.Families, i)
			}
		}
		if d.Families != nil {
			return true
		}
		if _, tracked := h.tracked(n.text); tracked {
			v.fault("of", "%q is a tracked operator, which has no coupling", n.text)
		} else {
			v.unknownOperator("of", n, h)
		}
		return false
	}
	var names []string
	for i, f := range h.Families {
		if f.Coupling == 0 || h.model != custom && len(f.Operator.Factors()) < 2 {
			continue
		}
		d.Families = append(d.Families, i)
		names = append(names, f.Name)
	}
	switch {
	case several:
		v.need("of", "where there are several tables, each names its family or group")
		return false
	case len(names) == 0 || h.model == custom && len(names) > 1:
		v.need("of", "name the family or group whose couplings are random: "+listed(h.names(), "or"))
		return false
	}
	d.Of = names[0]
	if len(names) > 1 {
		d.Of = commonGroup(h, d.Families)
	}
	v.fill("of", listed(names, "and"))
	return true
}

// commonGroup is the group that families have in common, or "bonds".
func commonGroup(h *hamiltonian, families []int) string {
	group := h.Families[families[0]].Group
	for _, f := range families {
		if h.Families[f].Group != group {
			group = ""
		}
	}
	if group == "" {
		return "bonds"
	}
	return group
}

// sampleTarget stands for the sample in a scan.
var sampleTarget = target{name: "hamiltonian.disorder", key: "sample"}

// sampleAxis is the outermost scan of a study with disorder: its samples; ok is
// false if there is no disorder, or it is wrong.
func (d *decoder) sampleAxis(root *node) (a axis, ok bool) {
	r := &reading{d: d, root: root}
	tables := r.section("hamiltonian").items("disorder")
	if tables == nil {
		return a, false
	}
	count, at := int64(1), tables[0].at
	for _, v := range tables {
		if n, found := v.find("samples"); found && !n.bad {
			count, at = n.integer, n.at
			break
		}
	}
	if count > maxPoints {
		d.fault(at, "hamiltonian.disorder.samples", "makes more than %d points: split the study", maxPoints)
		return a, false
	}
	a = axis{name: sampleName, target: sampleTarget, at: at}
	for i := range count {
		a.values = append(a.values, &node{kind: kindInteger, at: at, integer: i, number: float64(i)})
	}
	return a, true
}

// overSamples repeats combinations for every sample.
func (d *decoder) overSamples(root *node, combinations []combination, scanned []string) ([]combination, []string) {
	a, ok := d.sampleAxis(root)
	if !ok {
		return combinations, scanned
	}
	if len(combinations)*len(a.values) > maxPoints {
		d.fault(a.at, "hamiltonian.disorder.samples", "makes more than %d points: split the study", maxPoints)
		return nil, scanned
	}
	var out []combination
	for i := range a.values {
		for _, c := range combinations {
			c.axes = append([]axis{a}, c.axes...)
			c.chosen = append([]int{i}, c.chosen...)
			if c.section == "" {
				c.at, c.section = a.at, "hamiltonian.disorder"
			}
			out = append(out, c)
		}
	}
	return out, append([]string{sampleName}, scanned...)
}
