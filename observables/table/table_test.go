package table

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

// mixed has a column of every type, not in alphabetical order.
var mixed = Schema{
	Name:   "mixed",
	Format: 3,
	Tool:   "test",
	Columns: []Column{
		{Name: "unit", Type: Int32, Meaning: "number of the unit"},
		{Name: "name", Type: String},
		{Name: "sum", Type: Double, Unit: "J^2", Meaning: "sum of squares"},
		{Name: "displacement", Type: Int32List, Unit: "cells"},
		{Name: "count", Type: Int64},
		{Name: "error", Type: Double, Optional: true},
		{Name: "reason", Type: String, Optional: true},
		{Name: "axis", Type: Int32, Optional: true},
		{Name: "also", Type: Int64, Optional: true},
	},
	Metadata: []Pair{{"point_key", "0123456789abcdef"}},
}

// mixedBlock returns n rows that follow from their numbers.
func mixedBlock(n int) Block {
	var (
		unit = make([]int32, n)
		name = make([]string, n)
		sum  = make([]float64, n)
		disp = make([][]int32, n)
		num  = make([]int64, n)
		errs = Missing{make([]float64, n), make([]bool, n)}
		why  = Missing{make([]string, n), make([]bool, n)}
		axis = Missing{make([]int32, n), make([]bool, n)}
		also = make([]int64, n)
	)
	for i := range n {
		unit[i] = int32(i / 7)
		name[i] = [...]string{"energy", "magnetization", "", "fourier-spin-1-0"}[i/5%4]
		sum[i] = math.Sin(float64(i)) * 1e7
		for k := range i % 4 {
			disp[i] = append(disp[i], int32(k*i-9))
		}
		num[i] = int64(i)*int64(i)<<20 - 5
		if errs.Valid[i] = i%3 != 0; errs.Valid[i] {
			errs.Values.([]float64)[i] = 1 / float64(i)
		} else {
			errs.Values.([]float64)[i] = math.NaN() // ignored
		}
		if why.Valid[i] = i%5 == 2; why.Valid[i] {
			why.Values.([]string)[i] = fmt.Sprintf("reason %d", i%11)
		}
		if axis.Valid[i] = i%2 == 0; axis.Valid[i] {
			axis.Values.([]int32)[i] = int32(i)
		}
		also[i] = math.MinInt64 + int64(i)
	}
	return Block{unit, name, sum, disp, num, errs, why, axis, also}
}

// encode writes blocks to memory.
func encode(t testing.TB, s Schema, blocks ...Block) []byte {
	t.Helper()
	var out bytes.Buffer
	w, err := NewWriter(&out, s)
	if err != nil {
		t.Fatal(err)
	}
	for _, b := range blocks {
		if err := w.Write(b); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// decode opens a table in memory.
func decode(t testing.TB, data []byte) *Reader {
	t.Helper()
	r, err := NewReader(bytes.NewReader(data), int64(len(data)), "memory")
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// sameRows compares a column as read with one as written.
func sameRows(t *testing.T, r *Reader, c Column, written any) {
	t.Helper()
	got, err := r.Optional(c.Name)
	if err != nil {
		t.Errorf("%s: %v", c.Name, err)
		return
	}
	if m, ok := written.(Missing); ok {
		if !reflect.DeepEqual(got.Valid, m.Valid) {
			t.Errorf("%s: other values are missing", c.Name)
		}
		values, want := reflect.ValueOf(got.Values), reflect.ValueOf(m.Values)
		for i, valid := range m.Valid {
			if valid && values.Index(i).Interface() != want.Index(i).Interface() {
				t.Fatalf("%s: row %d is %v, want %v", c.Name, i, values.Index(i), want.Index(i))
			}
			if !valid && !values.Index(i).IsZero() {
				t.Fatalf("%s: missing row %d is %v, want zero", c.Name, i, values.Index(i))
			}
		}
		return
	}
	if got.Valid != nil {
		t.Errorf("%s: values are missing", c.Name)
	}
	if !reflect.DeepEqual(got.Values, written) {
		t.Errorf("%s: rows differ", c.Name)
	}
}

func TestRowsComeBackAsWritten(t *testing.T) {
	// More rows than a row group and a chunk hold, and none.
	for _, n := range []int{0, 3, 1000, chunkRows + 1, groupRows + 3*chunkRows + 17} {
		t.Run(fmt.Sprint(n), func(t *testing.T) {
			block := mixedBlock(n)
			r := decode(t, encode(t, mixed, block))
			if r.Rows() != n {
				t.Fatalf("%d rows, want %d", r.Rows(), n)
			}
			for i, c := range mixed.Columns {
				if n == 0 {
					if m, err := r.Optional(c.Name); err != nil || m.Values == nil || reflect.ValueOf(m.Values).Len() != 0 {
						t.Errorf("%s: %v, %v; want an empty column", c.Name, m, err)
					}
					continue
				}
				sameRows(t, r, c, block[i])
			}
		})
	}
}

func TestSchemaComesBackInOrder(t *testing.T) {
	r := decode(t, encode(t, mixed, mixedBlock(10)))
	if !reflect.DeepEqual(r.Columns(), mixed.Columns) {
		t.Errorf("columns\n%v\nwant\n%v", r.Columns(), mixed.Columns)
	}
	if r.Format() != 3 {
		t.Errorf("format %d, want 3", r.Format())
	}
	for key, want := range map[string]string{KeyTable: "mixed", KeyTool: "test", "point_key": "0123456789abcdef"} {
		if got, ok := r.Metadata(key); !ok || got != want {
			t.Errorf("metadata %s is %q, want %q", key, got, want)
		}
	}
	if _, ok := r.Metadata("nothing"); ok {
		t.Error("a key that was never written is there")
	}
}

func TestRowGroupsAreBounded(t *testing.T) {
	s := Schema{Name: "t", Columns: []Column{{Name: "x", Type: Int64}}}
	half := Block{make([]int64, groupRows/2+1)}
	r := decode(t, encode(t, s, half, half, half, half))
	var sizes []int64
	for _, g := range r.file.RowGroups() {
		sizes = append(sizes, g.NumRows())
	}
	if want := []int64{groupRows, groupRows, 4}; !reflect.DeepEqual(sizes, want) {
		t.Errorf("row groups of %v rows, want %v", sizes, want)
	}
}

func TestSameBlocksGiveSameBytes(t *testing.T) {
	block := mixedBlock(5000)
	first := encode(t, mixed, block)
	for range 5 {
		if !bytes.Equal(first, encode(t, mixed, mixedBlock(5000))) {
			t.Fatal("the bytes differ from run to run")
		}
	}
}

func TestWriterRefusesWhatTheLibraryWouldTake(t *testing.T) {
	s := Schema{Name: "t", Columns: []Column{
		{Name: "x", Type: Double},
		{Name: "n", Type: Int64},
		{Name: "s", Type: String},
		{Name: "e", Type: Double, Optional: true},
	}}
	ok := Block{[]float64{1, 2}, []int64{1, 2}, []string{"a", "b"}, []float64{1, 2}}
	with := func(i int, column any) Block {
		b := append(Block(nil), ok...)
		b[i] = column
		return b
	}
	for _, c := range []struct {
		name, want string
		block      Block
	}{
		{"too few columns", "block of 3 columns", ok[:3]},
		{"another type", "column x holds []int64", with(0, []int64{1, 2})},
		{"a bare value", "column x holds float64", with(0, 1.0)},
		{"another length", "column n has 1 rows", with(1, []int64{1})},
		{"first of another length", "column n has 2 rows", with(0, []float64{1})},
		{"NaN", "row 1 is NaN", with(0, []float64{1, math.NaN()})},
		{"NaN that counts", "row 0 is NaN", with(3, Missing{[]float64{math.NaN(), math.NaN()}, []bool{true, false}})},
		{"no text", "row 0 is not UTF-8", with(2, []string{"\xff", "b"})},
		{"missing where required", "column x holds table.Missing", with(0, Missing{[]float64{1, 2}, []bool{true, true}})},
		{"validity of another length", "column e holds table.Missing", with(3, Missing{[]float64{1, 2}, []bool{true}})},
	} {
		var out bytes.Buffer
		w, err := NewWriter(&out, s)
		if err != nil {
			t.Fatal(err)
		}
		if err := w.Write(c.block); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: error %v, want one with %q", c.name, err, c.want)
		}
		// The writer goes on as if nothing had been tried.
		if err := errors.Join(w.Write(ok), w.Close()); err != nil {
			t.Fatalf("%s: %v", c.name, err)
		}
		if r := decode(t, out.Bytes()); r.Rows() != 2 {
			t.Errorf("%s: %d rows, want 2", c.name, r.Rows())
		}
	}
}

func TestSchemasThatAreRefused(t *testing.T) {
	x := Column{Name: "x", Type: Double}
	for _, s := range []Schema{
		{},
		{Columns: []Column{x, x}},
		{Columns: []Column{{Type: Double}}},
		{Columns: []Column{{Name: "x", Type: "float"}}},
		{Columns: []Column{{Name: "x", Type: Int32List, Optional: true}}},
		{Columns: []Column{x}, Metadata: []Pair{{KeyFormat, "9"}}},
	} {
		if _, err := NewWriter(&bytes.Buffer{}, s); err == nil {
			t.Errorf("schema %v is taken", s)
		}
	}
}

func TestClosedWriterStaysClosed(t *testing.T) {
	var out bytes.Buffer
	w, _ := NewWriter(&out, mixed)
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	n := out.Len()
	if err := w.Close(); err == nil {
		t.Error("a second Close is taken")
	}
	if err := w.Write(mixedBlock(1)); err == nil {
		t.Error("rows are taken after Close")
	}
	if out.Len() != n {
		t.Error("bytes were written after Close")
	}
}

func TestReaderGoesByNameAndType(t *testing.T) {
	r := decode(t, encode(t, mixed, mixedBlock(10)))
	if r.Has("nothing") || !r.Has("sum") {
		t.Error("Has is wrong")
	}
	if x, err := r.Doubles("nothing"); x != nil || err != nil {
		t.Errorf("an absent column reads as %v, %v", x, err)
	}
	if _, err := r.Int64s("sum"); !errors.Is(err, ErrType) {
		t.Errorf("doubles read as int64: %v", err)
	}
	if _, err := r.Doubles("error"); !errors.Is(err, ErrMissing) {
		t.Errorf("a column with missing values reads as complete: %v", err)
	}
	if x, err := r.Int64s("also"); err != nil || len(x) != 10 {
		t.Errorf("an optional column without missing values: %v, %v", x, err)
	}
}

func TestBuilder(t *testing.T) {
	s := Schema{Name: "t", Columns: []Column{
		{Name: "x", Type: Double},
		{Name: "n", Type: Int64},
		{Name: "i", Type: Int32},
		{Name: "d", Type: Int32List},
		{Name: "e", Type: Double, Optional: true},
		{Name: "s", Type: String, Optional: true},
	}}
	b := NewBuilder(s)
	b.Row(0.5, 3, 4, []int32{1}, nil, "why")
	b.Row(1.5, int64(5), int32(6), []int32(nil), 2.5, nil)
	want := Block{
		[]float64{0.5, 1.5}, []int64{3, 5}, []int32{4, 6}, [][]int32{{1}, nil},
		Missing{[]float64{0, 2.5}, []bool{false, true}},
		Missing{[]string{"why", ""}, []bool{true, false}},
	}
	if !reflect.DeepEqual(b.Block(), want) {
		t.Errorf("got %v, want %v", b.Block(), want)
	}
	r := decode(t, encode(t, s, b.Block()))
	for i, c := range s.Columns {
		sameRows(t, r, c, want[i])
	}
	for _, row := range [][]any{
		{1, 3, 4, []int32{}, nil, nil},      // int for a double
		{nil, 3, 4, []int32{}, nil, nil},    // missing where required
		{0.5, 3, 1 << 40, []int32{}, 1, ""}, // beyond int32
		{0.5},
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("row %v is taken", row)
				}
			}()
			NewBuilder(s).Row(row...)
		}()
	}
}

func TestWriteFile(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "mixed.parquet")
	for _, n := range []int{100, 7} { // the second replaces the first
		if err := WriteFile(path, mixed, mixedBlock(n)); err != nil {
			t.Fatal(err)
		}
		r, err := Open(path)
		if err != nil {
			t.Fatal(err)
		}
		if r.Rows() != n {
			t.Errorf("%d rows, want %d", r.Rows(), n)
		}
		if err := r.Close(); err != nil {
			t.Error(err)
		}
	}
	if err := WriteFile(path, mixed, mixedBlock(3)[:2]); err == nil {
		t.Error("a block that does not suit is taken")
	}
	entries, _ := os.ReadDir(dir)
	if len(entries) != 1 {
		t.Errorf("the directory holds %v", entries)
	}
	if r, err := Open(path); err != nil || r.Rows() != 7 {
		t.Errorf("after a failed write the old file is gone: %v", err)
	} else {
		r.Close()
	}
}
