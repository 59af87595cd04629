package main

import (
	"fmt"
	"strconv"

	"sojourn/observables"
	"sojourn/observables/archive"
	"sojourn/observables/table"
)

// leading returns the columns that the tables of a point's parts begin with,
// except the number of the unit, and their values.
func leading(m *archive.Manifest, p *archive.Point) ([]archive.Lead, error) {
	var out []archive.Lead
	for _, c := range observables.Leading(nil) {
		l := archive.Lead{Column: columnOf(c)}
		switch c.Name {
		case "point_key":
			l.Value = p.Key
		case "beta":
			l.Value = p.Facts.Beta
		case "length":
			l.Value = int32(p.Facts.Size[0])
		case "unit":
			continue // differs from row to row
		}
		out = append(out, l)
	}
	scanned, err := scannedLeads(m, p)
	return append(out, scanned...), err
}

// scannedLeads returns a column for each scanned parameter, with the point's
// value.
func scannedLeads(m *archive.Manifest, p *archive.Point) ([]archive.Lead, error) {
	columns := scannedColumns(m)
	var out []archive.Lead
	for i, name := range m.Scanned {
		value, err := scannedValue(name, p)
		if err != nil {
			return nil, err
		}
		out = append(out, archive.Lead{Column: columns[i], Value: value})
	}
	return out, nil
}

// scannedColumns returns the columns of the scanned parameters.
func scannedColumns(m *archive.Manifest) []table.Column {
	all := observables.Leading(m.Scanned)
	var out []table.Column
	for _, c := range all[len(observables.Leading(nil)):] {
		out = append(out, columnOf(c))
	}
	return out
}

func scannedValue(name string, p *archive.Point) (any, error) {
	if name == "lattice.size" {
		return int32s(p.Facts.Size), nil
	}
	for _, s := range p.Scan {
		if s.Name == name {
			x, err := strconv.ParseFloat(s.Value, 64)
			if err != nil {
				return nil, fmt.Errorf("point %s: the scanned %s = %s is not a number", p.Key, name, s.Value)
			}
			return x, nil
		}
	}
	return nil, fmt.Errorf("point %s has no value of the scanned %s", p.Key, name)
}

func columnOf(c observables.Column) table.Column {
	return table.Column{Name: c.Name, Type: table.Type(c.Type), Unit: c.Unit, Meaning: c.Doc}
}
