package configs

import (
	"slices"
	"strings"

	"sojourn/kinetic/models"
)

// maxPoints bounds the combinations of one study: each is compiled when it is
// loaded.
const maxPoints = 10000

// axis is one scanned parameter and its values.
type axis struct {
	name   string // dotted
	target target
	at     int // its key
	values []*node
}

// combination is one value for every scanned parameter of a scan.
type combination struct {
	axes    []axis
	chosen  []int  // index into values, by axis
	at      int    // the header of its scan
	section string // "scan" or "case"
}

// values returns what a reading puts in place of the tables.
func (c combination) values() map[target]*node {
	out := make(map[target]*node, len(c.axes))
	for i, a := range c.axes {
		out[a.target] = a.values[c.chosen[i]]
	}
	return out
}

// place is where the combination stands: its value of the last parameter that
// has several, or the header of its scan.
func (c combination) place() int {
	at := c.at
	for i, a := range c.axes {
		if len(a.values) > 1 {
			at = a.values[c.chosen[i]].at
		}
	}
	return at
}

// differs is where c departs from an earlier combination.
func (c combination) differs(earlier combination) int {
	at := c.at
	if at != earlier.at {
		return at
	}
	for i, a := range c.axes {
		if c.chosen[i] != earlier.chosen[i] {
			at = a.values[c.chosen[i]].at
		}
	}
	return at
}

// unfold lists the combinations of the study in order of appearance, the first
// key of a scan varying slowest, and the scanned parameters by dotted name.
//
// Samples of random couplings are the outermost scan.
func (d *decoder) unfold(root *node) (combinations []combination, scanned []string) {
	combinations, scanned = d.unfoldScans(root)
	return d.overSamples(root, combinations, scanned)
}

func (d *decoder) unfoldScans(root *node) (combinations []combination, scanned []string) {
	scan, cases := root.get("scan"), root.get("case")
	var scans []*node
	switch {
	case scan != nil && cases != nil:
		d.fault(scan.at, "scan", "stands beside [[case]] tables, which are scans of their own: move its lists into each case")
		return nil, nil
	case scan != nil && (scan.value.kind != kindTable):
		d.fault(scan.at, "scan", "is written [scan], once")
		return nil, nil
	case scan != nil:
		scans = append(scans, scan.value)
	case cases != nil && (cases.value.kind != kindList || slices.ContainsFunc(cases.value.items, func(n *node) bool { return n.kind != kindTable })):
		d.fault(cases.at, "case", "is written [[case]], once for each")
		return nil, nil
	case cases != nil:
		scans = append(scans, cases.value.items...)
	default:
		return []combination{{at: nowhere}}, nil
	}
	model := d.modelName(root)
	columns := map[string]string{}
	var keys []string
	for _, t := range scans {
		s := scanReader{d: d, root: root, model: model, section: "scan"}
		if cases != nil {
			s.section = "case"
		}
		s.table(t, "")
		for _, a := range s.axes {
			keys = append(keys, a.target.key)
			if !slices.Contains(scanned, a.name) {
				scanned = append(scanned, a.name)
			}
			if other, ok := columns[ColumnName(a.name)]; ok && other != a.name {
				d.fault(a.at, join(s.section, a.name), "and %s would be the same column %s: rename one", other, ColumnName(a.name))
			}
			columns[ColumnName(a.name)] = a.name
		}
		if s.failed {
			continue
		}
		if len(s.axes) == 0 {
			d.fault(t.at, s.section, "is empty: give a list of values, such as beta = [0.3, 0.4]")
			continue
		}
		combinations = append(combinations, d.product(s.axes, t.at, s.section, maxPoints-len(combinations))...)
	}
	if len(combinations) == 0 {
		// The study will be read without its scan, for what else is wrong; its
		// tables need not have what the scan would set.
		for _, key := range keys {
			d.meant[key] = true
		}
	}
	return combinations, scanned
}

// ColumnName is the name of a scanned parameter as a column of a table: dots
// and dashes become underscores.
func ColumnName(dotted string) string {
	return strings.NewReplacer(".", "_", "-", "_").Replace(dotted)
}

func (d *decoder) product(axes []axis, at int, section string, most int) []combination {
	n := 1
	for _, a := range axes {
		n *= len(a.values)
		if n > most {
			d.fault(at, section, "makes more than %d points: split the study", maxPoints)
			return nil
		}
	}
	out := make([]combination, n)
	for i := range out {
		chosen := make([]int, len(axes))
		rest := i
		for j := len(axes) - 1; j >= 0; j-- {
			chosen[j] = rest % len(axes[j].values)
			rest /= len(axes[j].values)
		}
		out[i] = combination{axes, chosen, at, section}
	}
	return out
}

// scanReader reads one [scan] or [[case]] table.
type scanReader struct {
	d       *decoder
	root    *node
	model   string
	section string
	axes    []axis
	failed  bool
}

// table reads the keys of a scan; dotted keys make tables below it.
func (s *scanReader) table(t *node, prefix string) {
	for _, e := range t.entries {
		name := join(prefix, e.name)
		if e.value.kind == kindTable {
			s.table(e.value, name)
			continue
		}
		s.entry(name, e)
	}
}

func (s *scanReader) fault(at int, name, format string, a ...any) {
	s.failed = true
	s.d.fault(at, join(s.section, name), format, a...)
}

func (s *scanReader) entry(name string, e *entry) {
	dotted, key, to, ok := s.resolve(name, e)
	if !ok {
		return
	}
	for _, a := range s.axes {
		if a.target == to {
			s.fault(e.at, name, "is set twice: it stands in line %d already", s.d.line(a.at))
			return
		}
	}
	values := []*node{e.value}
	if e.value.kind == kindList && e.value.style == closed {
		values = e.value.items
	}
	if len(values) == 0 {
		s.fault(e.value.at, name, "is an empty list of values")
		return
	}
	for _, v := range values {
		k := key
		k.Scan = false
		if key.Type == Integers && v.kind != kindList {
			k.Type = Integer
		}
		s.d.checkValue(k, v, join(s.section, name))
		s.failed = s.failed || v.bad
	}
	s.axes = append(s.axes, axis{dotted, to, e.at, values})
}

// resolve finds what a name in a scan stands for.
func (s *scanReader) resolve(name string, e *entry) (dotted string, key Key, to target, ok bool) {
	dotted = name
	for i := range schema {
		for _, k := range schema[i].Keys {
			if k.Short != "" && k.Short == name {
				dotted = join(schema[i].Name, k.Name)
			}
		}
	}
	parts := strings.Split(dotted, ".")
	if len(parts) == 4 {
		return s.resolveItem(name, parts, e)
	}
	if strings.HasPrefix(dotted, "hamiltonian.disorder.") && len(parts) == 3 {
		return s.resolveDisorder(name, parts[2], e)
	}
	if len(parts) == 2 {
		for i := range schema {
			sec := &schema[i]
			if sec.Name != parts[0] || sec.Repeated {
				continue
			}
			if key, ok = keyOf(sec, parts[1], s.model); !ok {
				break
			}
			if !key.Scan {
				s.fault(e.at, name, "is not a number that a scan can vary")
				return "", key, to, false
			}
			return dotted, key, s.target(sec.Name, parts[1]), true
		}
	}
	s.unknown(name, parts, e)
	return "", key, to, false
}

// target is a key of a section that stands once.
func (s *scanReader) target(section, key string) target {
	if e := s.root.get(section); e != nil && e.value.kind == kindTable && !e.value.bad {
		return target{table: e.value, key: key}
	}
	return target{name: section, key: key}
}

// repeatedNames tells by which key the tables of a repeated section are named
// in a scan: "hamiltonian.family.plaquette.coupling", "bath.operator.X.rate".
var repeatedNames = map[string]string{"hamiltonian.family": "name", "bath.operator": "on", "hamiltonian.disorder": "of"}

func (s *scanReader) resolveItem(name string, parts []string, e *entry) (dotted string, key Key, to target, ok bool) {
	section := parts[0] + "." + parts[1]
	by, known := repeatedNames[section]
	if !known {
		s.unknown(name, parts, e)
		return "", key, to, false
	}
	if key, ok = sectionOf(section).find(parts[3]); !ok || !key.Scan {
		s.fault(e.at, name, "cannot be scanned: %s has no number of that name", sectionOf(section).title())
		return "", key, to, false
	}
	r := &reading{d: s.d, root: s.root}
	var names []string
	found := 0
	for _, item := range r.section(parts[0]).items(parts[1]) {
		n, _ := item.word(by)
		names = append(names, n)
		if n == parts[2] {
			found++
			to = target{table: item.table, key: parts[3]}
		}
	}
	switch {
	case found == 0:
		s.fault(e.at, name, "there is no [[%s]] with %s = %q; there is %s", section, by, parts[2], listed(names, "and"))
	case found > 1:
		s.fault(e.at, name, "there are %d [[%s]] with %s = %q", found, section, by, parts[2])
	}
	return name, key, to, found == 1
}

// resolveDisorder finds a number of [hamiltonian.disorder].
func (s *scanReader) resolveDisorder(name, last string, e *entry) (dotted string, key Key, to target, ok bool) {
	r := &reading{d: s.d, root: s.root}
	tables := r.section("hamiltonian").items("disorder")
	key, ok = sectionOf("hamiltonian.disorder").find(last)
	switch {
	case name == sampleName:
		s.fault(e.at, name, "is scanned as it is: samples = the number of them stands in [hamiltonian.disorder]")
	case !ok || !key.Scan:
		s.fault(e.at, name, "cannot be scanned: [hamiltonian.disorder] has no such number")
	case len(tables) == 0:
		s.fault(e.at, name, "needs [hamiltonian.disorder] with its kind")
	case len(tables) > 1:
		s.fault(e.at, name, "could be of %d tables: write \"hamiltonian.disorder.OF.%s\", OF being what the table is of", len(tables), last)
	default:
		return name, key, target{table: tables[0].table, key: last}, true
	}
	return "", key, to, false
}

func (s *scanReader) unknown(name string, parts []string, e *entry) {
	var known []string
	for i := range schema {
		for _, k := range schema[i].Keys {
			switch {
			case k.Short != "":
				known = append(known, k.Short)
			case k.Scan && !schema[i].Repeated:
				known = append(known, join(schema[i].Name, k.Name))
			}
		}
	}
	if s.model == "" && parts[0] == "hamiltonian" {
		s.failed = true // the model is wrong: which names it has is not known
		return
	}
	if m, ok := models.Find(s.model); ok {
		for _, p := range m.Parameters {
			known = append(known, "hamiltonian."+p.Name)
		}
	}
	if len(parts) == 2 && parts[0] == "hamiltonian" && !s.d.ofModel(&entry{name: parts[1], at: e.at}, join(s.section, name), s.model) {
		s.failed = true
		return
	}
	near := nearest(name, known)
	for _, k := range known {
		if strings.HasSuffix(k, "."+name) {
			near = k
		}
	}
	s.d.meant[near[strings.LastIndexByte(near, '.')+1:]] = true
	switch {
	case near != "" && strings.Contains(near, "."):
		s.fault(e.at, name, "cannot be scanned; did you mean %q?", near)
	case near != "":
		s.fault(e.at, name, "cannot be scanned; did you mean %s?", near)
	default:
		s.fault(e.at, name, "cannot be scanned; a number of the study can, by its dotted name: %s", strings.Join(known, ", "))
	}
}
