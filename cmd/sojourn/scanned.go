package main

import (
	"sojourn/observables"
	"sojourn/observables/archive"
	"sojourn/observables/table"
)

// scannedColumns returns the columns of a study's scanned parameters, as the
// tables of recorded sums have them.
func scannedColumns(m *archive.Manifest) []table.Column {
	all := observables.Leading(m.Scanned)
	var out []table.Column
	for _, c := range all[len(observables.Leading(nil)):] {
		out = append(out, table.Column{Name: c.Name, Type: table.Type(c.Type), Unit: c.Unit, Meaning: c.Doc, Optional: c.Type != observables.Ints})
	}
	return out
}

// scannedValues returns a point's values in these columns; a value is missing
// where the point was not scanned for the parameter.
func scannedValues(m *archive.Manifest, p *archive.Point) []any {
	var out []any
	for _, name := range m.Scanned {
		if name == "lattice.size" {
			out = append(out, int32s(p.Facts.Size))
			continue
		}
		var value any
		for _, s := range p.Scan {
			if s.Name == name && len(s.Numbers) == 1 {
				value = s.Numbers[0]
			}
		}
		out = append(out, value)
	}
	return out
}
