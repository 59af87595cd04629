package configs

import (
	"slices"
	"strings"

	"sojourn/kinetic/models"
)

// custom is the name under which a study spells out its own Hamiltonian.
const custom = "custom"

// check compares the keys of the file and the types of their values with the
// schema. Values that fail are marked and not read later.
func (d *decoder) check(root *node) {
	model := d.modelName(root)
	d.checkTable(sectionOf(""), root, model)
}

// modelName is the model that the study names, or "" if that is not a model.
func (d *decoder) modelName(root *node) string {
	h := root.get("hamiltonian")
	if h == nil || h.value.kind != kindTable {
		return ""
	}
	m := h.value.get("model")
	if m == nil || m.value.kind != kindText {
		return ""
	}
	if _, ok := models.Find(m.value.text); ok || m.value.text == custom {
		return m.value.text
	}
	near := nearest(m.value.text, modelNames())
	if near != "" {
		d.wrong(m.value, "hamiltonian.model", "%s is not a model: write %q", m.value.shown(), near)
	} else {
		d.wrong(m.value, "hamiltonian.model", "%s is not a model; this version has %s", m.value.shown(), listed(modelNames(), "and"))
	}
	return ""
}

func modelNames() []string {
	var out []string
	for _, m := range models.All() {
		out = append(out, m.Name)
	}
	return append(out, custom)
}

// checkTable checks one table of a section. Scans are checked when they are
// unfolded.
func (d *decoder) checkTable(s *Section, t *node, model string) {
	if s.Name == "scan" || s.Name == "case" {
		return
	}
	for _, e := range t.entries {
		path := join(s.Name, e.name)
		inner := slices.IndexFunc(schema, func(s Section) bool { return s.Name == path && path != "" })
		switch {
		case path == "hamiltonian.model":
			k, _ := s.find(e.name)
			d.checkValue(k, e.value, path)
		case s.Name == "hamiltonian" && model == "":
			// Which keys are right depends on the model, and that is wrong.
			e.value.bad = true
		case s.Name == "hamiltonian" && !d.ofModel(e, path, model):
			e.value.bad = true
		case inner >= 0:
			d.checkSection(&schema[inner], e, model)
		default:
			if k, ok := keyOf(s, e.name, model); ok {
				d.checkValue(k, e.value, path)
			} else {
				d.unknownKey(s, e, model)
			}
		}
	}
}

func join(section, key string) string {
	if section == "" {
		return key
	}
	return section + "." + key
}

// keyOf finds a key of a section; in [hamiltonian] also a parameter of the
// model.
func keyOf(s *Section, name, model string) (Key, bool) {
	if s.Name == "hamiltonian" {
		if m, ok := models.Find(model); ok {
			if k, ok := parameterKey(m, name); ok {
				return k, true
			}
		}
	}
	return s.find(name)
}

// parameterKey is a model's parameter as a key of [hamiltonian].
func parameterKey(m models.Model, name string) (Key, bool) {
	for _, p := range m.Parameters {
		if p.Name == name {
			k := Key{Name: p.Name, Type: Number, Default: formatNumber(p.Default), Doc: p.Doc, Scan: true}
			if p.Follows != "" {
				k.Default = "as " + p.Follows
			}
			if p.Whole {
				k.Type, k.Range = Integer, Range{Set: true, Min: float64(p.Min), Max: float64(p.Max)}
			}
			return k, true
		}
	}
	return Key{}, false
}

// customKeys are the keys of [hamiltonian] that only a custom model has.
var customKeys = []string{"levels", "sites_per_cell", "family", "tracked", "absent"}

// ofModel reports whether a key of [hamiltonian] is one of the study's model,
// and reports those of other models.
func (d *decoder) ofModel(e *entry, path, model string) bool {
	var owners []string
	if slices.Contains(customKeys, e.name) {
		owners = append(owners, custom)
	}
	for _, m := range models.All() {
		if _, ok := parameterKey(m, e.name); ok {
			owners = append(owners, m.Name)
		}
	}
	if len(owners) == 0 || slices.Contains(owners, model) {
		return true
	}
	have := "has"
	if len(owners) > 1 {
		have = "have"
	}
	hint := ""
	if model == custom {
		hint = "; the coupling of a custom model stands in its [[hamiltonian.family]] tables"
	}
	d.fault(e.at, path, "the model %s has no %s; %s %s it%s", model, e.name, listed(owners, "and"), have, hint)
	return false
}

// checkSection checks the value of a key that names a section.
func (d *decoder) checkSection(s *Section, e *entry, model string) {
	isTable := e.value.kind == kindTable
	d.meant[s.Name] = !isTable && !s.Repeated
	tables := e.value.kind == kindList && !slices.ContainsFunc(e.value.items, func(n *node) bool { return n.kind != kindTable })
	switch {
	case s.Repeated && isTable && !s.Single:
		d.wrong(e.value, s.Name, "is written [[%s]], once for each", s.Name)
	case !isTable && !tables:
		d.wrong(e.value, s.Name, "is the table %s, not %s", s.title(), e.value.shown())
	case !s.Repeated && tables:
		d.wrong(e.value, s.Name, "is written [%s], once", s.Name)
	case isTable:
		d.checkTable(s, e.value, model)
	default:
		for _, t := range e.value.items {
			d.checkTable(s, t, model)
		}
	}
}

// unknownKey says what a key that its section does not have could have meant.
func (d *decoder) unknownKey(s *Section, e *entry, model string) {
	path := join(s.Name, e.name)
	known := keysIn(s, model)
	if near := nearest(e.name, known); near != "" {
		if strings.EqualFold(near, e.name) {
			d.fault(e.at, path, "is written %s: letter case counts", near)
		} else {
			d.fault(e.at, path, "is not a key of %s; did you mean %s?", s.title(), near)
		}
		d.meant[near] = true
		return
	}
	if home := homesOf(e.name); len(home) > 0 {
		d.meant[e.name] = true
		d.fault(e.at, path, "is not a key of %s; it belongs in %s", s.title(), listed(home, "or"))
		return
	}
	d.fault(e.at, path, "is not a key of %s, which takes %s", s.title(), listed(known, "and"))
}

// keysIn lists the keys and tables that a section takes under a model.
func keysIn(s *Section, model string) []string {
	var out []string
	for _, k := range s.Keys {
		if s.Name != "hamiltonian" || model == custom || !slices.Contains(customKeys, k.Name) {
			out = append(out, k.Name)
		}
	}
	if m, ok := models.Find(model); ok && s.Name == "hamiltonian" {
		for _, p := range m.Parameters {
			out = append(out, p.Name)
		}
	}
	for _, inner := range schema {
		parent, last := "", inner.Name
		if i := strings.LastIndexByte(inner.Name, '.'); i >= 0 {
			parent, last = inner.Name[:i], inner.Name[i+1:]
		}
		if parent == s.Name && inner.Name != "" && (s.Name != "hamiltonian" || model == custom || !slices.Contains(customKeys, last)) {
			out = append(out, last)
		}
	}
	return out
}

// homesOf lists the sections that have a key of this name.
func homesOf(name string) []string {
	var out []string
	for i := range schema {
		if _, ok := schema[i].find(name); ok && schema[i].Name != "" {
			out = append(out, schema[i].title())
		}
	}
	return out
}
