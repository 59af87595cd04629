package configs

import (
	"strconv"
	"strings"
)

// reading is one pass over the study with the values of one combination of
// scanned parameters in place of what the tables say.
type reading struct {
	d        *decoder
	root     *node
	scanned  map[target]*node
	values   map[string]Setting // every number that was read, by dotted name
	defaults []Setting
	model    *hamiltonian // once it has been read; nil if it is wrong
	failed   bool
}

// target is a key that a scan sets: a table of the file, or for tables that the
// file lacks their name, and the key.
type target struct {
	table *node
	name  string // of the section, if table is nil
	key   string
}

// view is a table of the study during a reading.
type view struct {
	r       *reading
	section *Section
	table   *node  // nil if the file lacks it
	label   string // the section's name, with the name of the item if repeated
	at      int    // its header
}

// section opens a table that is written once.
func (r *reading) section(name string) view {
	v := view{r: r, section: sectionOf(name), label: name, at: nowhere}
	v.table = r.root
	if name != "" {
		v.table = nil
		if e := r.root.get(name); e != nil && e.value.kind == kindTable && !e.value.bad {
			v.table, v.at = e.value, e.value.at
		}
	}
	return v
}

// items opens every table of a repeated section, such as family in
// [hamiltonian].
func (v view) items(name string) []view {
	if v.table == nil {
		return nil
	}
	e := v.table.get(name)
	if e == nil || e.value.bad {
		return nil
	}
	path := join(v.section.Name, name)
	tables := e.value.items
	switch {
	case e.value.kind == kindTable && sectionOf(path).Single:
		tables = []*node{e.value}
	case e.value.kind != kindList:
		return nil
	}
	var out []view
	for _, t := range tables {
		out = append(out, view{r: v.r, section: sectionOf(path), table: t, label: path, at: t.at})
	}
	return out
}

// find returns the value of a key and whether there is one. A value that was
// found wrong before is bad, and makes the reading fail.
func (v view) find(key string) (*node, bool) {
	n, ok := v.r.scanned[v.target(key)]
	if !ok && v.table != nil {
		if e := v.table.get(key); e != nil {
			n, ok = e.value, true
		}
	}
	if ok && n.bad {
		v.r.failed = true
	}
	return n, ok
}

func (v view) target(key string) target {
	if v.table == nil {
		return target{name: v.section.Name, key: key}
	}
	return target{table: v.table, key: key}
}

func (v view) has(key string) bool {
	_, ok := v.find(key)
	return ok
}

// fault reports that a key is wrong, at its value or else at the table.
func (v view) fault(key, format string, a ...any) {
	at := v.at
	if n, ok := v.find(key); ok {
		at = n.at
	}
	v.faultAt(at, key, format, a...)
}

// refuse reports a key that should not be there, at its name.
func (v view) refuse(key, format string, a ...any) {
	at := v.at
	if v.table != nil {
		if e := v.table.get(key); e != nil {
			at = e.at
		}
	}
	if n, ok := v.r.scanned[v.target(key)]; ok {
		at = n.at
	}
	v.faultAt(at, key, format, a...)
}

func (v view) faultAt(at int, key, format string, a ...any) {
	v.r.failed = true
	path := v.section.Name
	if key != "" {
		path = join(path, key)
	}
	v.r.d.fault(at, path, format, a...)
}

// need reports that a key without default is missing.
func (v view) need(key, remedy string) {
	v.r.failed = true
	if v.r.d.meant[key] || v.r.d.meant[v.section.Name] {
		return
	}
	if v.table == nil || v.section.Name == "" {
		v.r.d.fault(v.at, join(v.section.Name, key), "is missing: %s", remedy)
		return
	}
	v.faultAt(v.at, key, "is missing: %s", remedy)
}

// fill records a default that was filled in.
func (v view) fill(key, value string) {
	v.r.defaults = append(v.r.defaults, Setting{Name: join(v.label, key), Value: value})
}

// number reads a number; ok is false if there is none, or a bad one, and no
// default.
func (v view) number(key string) (x float64, ok bool) {
	if n, found := v.find(key); found {
		v.took(key, n.number)
		return n.number, !n.bad
	}
	k, _ := v.section.find(key)
	x, err := strconv.ParseFloat(k.Default, 64)
	if err != nil {
		return 0, false
	}
	v.took(key, x)
	v.fill(key, k.Default)
	return x, true
}

// took remembers a number for the columns of scanned parameters.
func (v view) took(key string, x float64) {
	v.r.values[join(v.label, key)] = Setting{Value: formatNumber(x + 0), Numbers: []float64{x + 0}}
}

// tookInteger keeps all digits.
func (v view) tookInteger(key string, i int64) {
	v.r.values[join(v.label, key)] = Setting{Value: strconv.FormatInt(i, 10), Numbers: []float64{float64(i)}}
}

func (v view) integer(key string) (int64, bool) {
	if n, found := v.find(key); found {
		v.tookInteger(key, n.integer)
		return n.integer, !n.bad
	}
	k, _ := v.section.find(key)
	i, err := strconv.ParseInt(k.Default, 10, 64)
	if err != nil {
		return 0, false
	}
	v.tookInteger(key, i)
	v.fill(key, k.Default)
	return i, true
}

func (v view) flag(key string) bool {
	n, found := v.find(key)
	return found && !n.bad && n.text == "true"
}

// word reads a string of any kind; the default of a Word is filled in.
func (v view) word(key string) (string, bool) {
	if n, found := v.find(key); found {
		return n.text, !n.bad
	}
	k, _ := v.section.find(key)
	if k.Type != Word || k.Default == "" || strings.ContainsRune(k.Default, ' ') {
		return "", false
	}
	v.fill(key, strconv.Quote(k.Default))
	return k.Default, true
}

// list reads the elements of a list; nil if there is none or it is bad.
func (v view) list(key string) []*node {
	if n, found := v.find(key); found && !n.bad && n.kind == kindList {
		return n.items
	}
	return nil
}
