package archive

import (
	"fmt"
	"math"
	"reflect"
	"strings"

	"sojourn/observables"
	"sojourn/observables/table"
)

// layout ties a recorded table to the field of observables.Unit that holds its
// rows: the columns beyond the leading ones are the fields of the row type, in
// their order.
type layout struct {
	name    string
	field   int            // of observables.Unit
	leading []table.Column // point_key .. scanned parameters
	own     []table.Column
}

// layouts returns the tables for a study with the given scanned parameters, in
// the order of observables.Tables.
func layouts(scanned []string) []layout {
	leading := len(observables.Leading(scanned))
	unit := reflect.TypeFor[observables.Unit]()
	var list []layout
	for _, t := range observables.Tables(scanned) {
		columns := make([]table.Column, len(t.Columns))
		for i, c := range t.Columns {
			columns[i] = table.Column{Name: c.Name, Type: table.Type(c.Type), Unit: c.Unit, Meaning: c.Doc}
		}
		name := strings.ToUpper(t.Name[:1]) + t.Name[1:]
		field, ok := unit.FieldByName(name)
		if !ok {
			panic(fmt.Sprintf("archive: a unit has no field %s for table %s", name, t.Name))
		}
		l := layout{t.Name, field.Index[0], columns[:leading], columns[leading:]}
		if n := field.Type.Elem().NumField(); n != len(l.own) {
			panic(fmt.Sprintf("archive: table %s has %d columns for %d fields", t.Name, len(l.own), n))
		}
		list = append(list, l)
	}
	return list
}

// rows returns the rows of the table in a unit, as a slice of structs.
func (l layout) rows(u *observables.Unit) reflect.Value {
	return reflect.ValueOf(u).Elem().Field(l.field)
}

// block returns the rows of all units, led by the columns of a point.
func (l layout) block(p *Point, units []observables.Unit) (table.Block, error) {
	n := 0
	slices := make([]reflect.Value, len(units))
	for i := range units {
		slices[i] = l.rows(&units[i])
		n += slices[i].Len()
	}
	if n == 0 {
		return nil, nil
	}
	var b table.Block
	for _, c := range l.leading {
		column, err := leadingColumn(c, p, units, slices, n)
		if err != nil {
			return nil, err
		}
		b = append(b, column)
	}
	for f, c := range l.own {
		b = append(b, gather(c.Type, slices, f, n))
	}
	return b, nil
}

// leadingColumn returns a column that says to which point and unit rows belong.
func leadingColumn(c table.Column, p *Point, units []observables.Unit, slices []reflect.Value, n int) (any, error) {
	switch c.Name {
	case "point_key":
		return repeat(p.Key, n), nil
	case "beta":
		return repeat(p.Facts.Beta, n), nil
	case "length":
		return repeat(int32(p.Facts.Size[0]), n), nil
	case "unit":
		column := make([]int32, 0, n)
		for i, u := range units {
			for range slices[i].Len() {
				column = append(column, int32(u.Unit))
			}
		}
		return column, nil
	}
	for _, s := range p.Scan {
		if strings.ReplaceAll(s.Name, ".", "_") != c.Name || len(s.Numbers) == 0 {
			continue
		}
		if c.Type == table.Double {
			return repeat(s.Numbers[0], n), nil
		}
		if c.Type == table.Int32List {
			list := make([]int32, len(s.Numbers))
			for i, x := range s.Numbers {
				list[i] = int32(x)
			}
			return repeat(list, n), nil
		}
	}
	return nil, fmt.Errorf("archive: point %s has no value for column %s", p.Key, c.Name)
}

func repeat[T any](x T, n int) []T {
	column := make([]T, n)
	for i := range column {
		column[i] = x
	}
	return column
}

// gather returns field f of all rows as a column of n values.
func gather(t table.Type, slices []reflect.Value, f, n int) any {
	switch t {
	case table.Double:
		return gatherWith(slices, f, n, reflect.Value.Float)
	case table.Int64:
		return gatherWith(slices, f, n, reflect.Value.Int)
	case table.Int32:
		return gatherWith(slices, f, n, func(v reflect.Value) int32 { return int32(v.Int()) })
	case table.String:
		return gatherWith(slices, f, n, reflect.Value.String)
	case table.Int32List:
		return gatherWith(slices, f, n, func(v reflect.Value) []int32 { return v.Interface().([]int32) })
	}
	panic(fmt.Sprintf("archive: no such type %q", t))
}

func gatherWith[T any](slices []reflect.Value, f, n int, get func(reflect.Value) T) []T {
	column := make([]T, 0, n)
	for _, rows := range slices {
		for i := range rows.Len() {
			column = append(column, get(rows.Index(i).Field(f)))
		}
	}
	return column
}

// spread is the inverse of block: it adds the rows of a table to the units
// first .. first+len(units)-1; rows of later units are left out, and a column
// that the file lacks leaves zeros.
func (l layout) spread(r *table.Reader, first int, units []observables.Unit) error {
	numbers, err := r.Int32s("unit")
	if err != nil {
		return err
	}
	if numbers == nil && r.Rows() > 0 {
		return fmt.Errorf("%w: it has no column unit", ErrDamaged)
	}
	counts := make([]int, len(units))
	place := 0
	for _, u := range numbers {
		k := int(u) - first
		if k >= len(units) {
			break
		}
		if k < place {
			return fmt.Errorf("%w: unit %d stands out of order", ErrDamaged, u)
		}
		place = k
		counts[k]++
	}
	slices := make([]reflect.Value, len(units))
	for k := range units {
		slices[k] = l.rows(&units[k])
		if counts[k] > 0 {
			slices[k].Set(reflect.MakeSlice(slices[k].Type(), counts[k], counts[k]))
		}
	}
	for f, c := range l.own {
		if err := scatterColumn(r, c, slices, f); err != nil {
			return err
		}
	}
	return nil
}

// scatterColumn reads one column into field f of the rows.
func scatterColumn(r *table.Reader, c table.Column, slices []reflect.Value, f int) error {
	switch c.Type {
	case table.Double:
		return scatter(r.Doubles, c.Name, slices, f, reflect.Value.SetFloat)
	case table.Int64:
		return scatter(r.Int64s, c.Name, slices, f, reflect.Value.SetInt)
	case table.Int32:
		return scatter(r.Int32s, c.Name, slices, f, func(v reflect.Value, x int32) { v.SetInt(int64(x)) })
	case table.String:
		return scatter(r.Strings, c.Name, slices, f, reflect.Value.SetString)
	case table.Int32List:
		return scatter(r.Int32Lists, c.Name, slices, f, func(v reflect.Value, x []int32) { v.Set(reflect.ValueOf(x)) })
	}
	panic(fmt.Sprintf("archive: no such type %q", c.Type))
}

func scatter[T any](read func(string) ([]T, error), name string, slices []reflect.Value, f int, set func(reflect.Value, T)) error {
	column, err := read(name)
	if err != nil || column == nil {
		return err
	}
	k := 0
	for _, rows := range slices {
		for i := range rows.Len() {
			set(rows.Index(i).Field(f), column[k])
			k++
		}
	}
	return nil
}

// checkNumbers returns an error that names the first NaN in a unit. None can be
// stored, and none can come from a correct recorder.
func checkNumbers(u *observables.Unit) error {
	v := reflect.ValueOf(u).Elem()
	for field := range v.NumField() {
		rows := v.Field(field)
		if rows.Kind() != reflect.Slice {
			continue
		}
		for i := range rows.Len() {
			row := rows.Index(i)
			for f := range row.NumField() {
				if x := row.Field(f); x.Kind() == reflect.Float64 && math.IsNaN(x.Float()) {
					return fmt.Errorf("unit %d: %s, row %d: %s is NaN",
						u.Unit, v.Type().Field(field).Name, i, row.Type().Field(f).Name)
				}
			}
		}
	}
	return nil
}
