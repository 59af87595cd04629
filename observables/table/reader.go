package table

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"strconv"

	"github.com/parquet-go/parquet-go"
)

// Reader reads one table. It is used by one goroutine.
type Reader struct {
	path    string
	file    *parquet.File
	close   func() error
	columns []Column
	byName  map[string]source
}

// source is where a column stands in the file.
type source struct {
	column Column
	leaf   int
	maxDef int // definition level of a value
}

// Open opens a table.
func Open(path string) (*Reader, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	info, err := f.Stat()
	if err != nil {
		f.Close()
		return nil, err
	}
	r, err := NewReader(f, info.Size(), path)
	if err != nil {
		f.Close()
		return nil, err
	}
	r.close = f.Close
	return r, nil
}

// NewReader reads a table of size bytes from src; path is for errors.
func NewReader(src io.ReaderAt, size int64, path string) (r *Reader, err error) {
	if err := checkEnds(src, size, path); err != nil {
		return nil, err
	}
	defer func() {
		if p := recover(); p != nil {
			r, err = nil, &ReadError{Path: path, Kind: ErrCorrupted, Err: fmt.Errorf("%v", p)}
		}
	}()
	file, err := parquet.OpenFile(src, size, parquet.SkipPageIndex(true), parquet.SkipBloomFilters(true))
	if err != nil {
		return nil, &ReadError{Path: path, Kind: ErrCorrupted, Err: err}
	}
	r = &Reader{path: path, file: file, close: func() error { return nil }, byName: map[string]source{}}
	r.describe()
	return r, nil
}

// checkEnds tells a file that was cut from one that never was a table: both
// ends of a Parquet file carry the same four letters.
func checkEnds(src io.ReaderAt, size int64, path string) error {
	const magic = "PAR1"
	var b [4]byte
	if size >= 4 {
		if _, err := src.ReadAt(b[:], 0); err != nil {
			return fmt.Errorf("%s: %w", path, err)
		}
		if string(b[:]) != magic {
			return &ReadError{Path: path, Kind: ErrCorrupted, Err: errors.New("it does not begin like a Parquet file")}
		}
	}
	if size < 12 {
		return &ReadError{Path: path, Kind: ErrIncomplete, Err: fmt.Errorf("%d bytes", size)}
	}
	if _, err := src.ReadAt(b[:], size-4); err != nil {
		return fmt.Errorf("%s: %w", path, err)
	}
	if string(b[:]) != magic {
		return &ReadError{Path: path, Kind: ErrIncomplete, Err: errors.New("the footer is missing")}
	}
	return nil
}

// describe lists the columns that this package can read.
func (r *Reader) describe() {
	known := map[string]Column{}
	if text, ok := r.file.Lookup(KeyColumns); ok {
		var columns []Column
		if json.Unmarshal([]byte(text), &columns) == nil {
			for _, c := range columns {
				known[c.Name] = c
			}
		}
	}
	schema := r.file.Schema()
	for _, field := range schema.Fields() {
		c := Column{Name: field.Name(), Optional: field.Optional()}
		path := []string{c.Name}
		if c.Type = typeOf(field); c.Type == "" {
			continue
		}
		if c.Type == Int32List {
			path = listPath(field)
		}
		leaf, ok := schema.Lookup(path...)
		if !ok {
			continue
		}
		c.Unit, c.Meaning = known[c.Name].Unit, known[c.Name].Meaning
		r.columns = append(r.columns, c)
		r.byName[c.Name] = source{column: c, leaf: leaf.ColumnIndex, maxDef: leaf.MaxDefinitionLevel}
	}
}

// typeOf returns the type of a field, or "" for one that is not among ours.
func typeOf(field parquet.Node) Type {
	if field.Repeated() {
		return ""
	}
	if !field.Leaf() {
		if l := field.Type().LogicalType(); l == nil || l.String() != "LIST" || listPath(field) == nil {
			return ""
		}
		return Int32List
	}
	switch field.Type().Kind() {
	case parquet.Double:
		return Double
	case parquet.Int64:
		return Int64
	case parquet.Int32:
		return Int32
	case parquet.ByteArray:
		return String
	}
	return ""
}

// listPath returns the path to the elements of a list of int32, or nil if the
// field is something else. The names within a list differ between writers.
func listPath(field parquet.Node) []string {
	named, ok := field.(parquet.Field)
	if !ok || len(field.Fields()) != 1 {
		return nil
	}
	list := field.Fields()[0]
	if list.Leaf() || !list.Repeated() || len(list.Fields()) != 1 {
		return nil
	}
	element := list.Fields()[0]
	if !element.Leaf() || element.Repeated() || element.Type().Kind() != parquet.Int32 {
		return nil
	}
	return []string{named.Name(), list.Name(), element.Name()}
}

// Close closes the file.
func (r *Reader) Close() error { return r.close() }

// Rows returns the number of rows.
func (r *Reader) Rows() int { return int(r.file.NumRows()) }

// Format returns the version of the table's layout, 0 if the file states none.
func (r *Reader) Format() int {
	text, _ := r.file.Lookup(KeyFormat)
	n, _ := strconv.Atoi(text)
	return n
}

// Metadata returns the value of a key.
func (r *Reader) Metadata(key string) (value string, ok bool) { return r.file.Lookup(key) }

// Columns returns the columns in the order of the file, those of types that
// this package does not know left out.
func (r *Reader) Columns() []Column { return r.columns }

// Has reports whether the file has a column of that name, of a type that this
// package knows.
func (r *Reader) Has(name string) bool {
	_, ok := r.byName[name]
	return ok
}

// Doubles returns a column; nil if the file has no such column. It refuses a
// column with missing values, as do the other methods named after a type.
func (r *Reader) Doubles(name string) ([]float64, error) { return complete[float64](r, name, Double) }

// Int64s is Doubles for Int64.
func (r *Reader) Int64s(name string) ([]int64, error) { return complete[int64](r, name, Int64) }

// Int32s is Doubles for Int32.
func (r *Reader) Int32s(name string) ([]int32, error) { return complete[int32](r, name, Int32) }

// Strings is Doubles for String. Equal values share memory.
func (r *Reader) Strings(name string) ([]string, error) { return complete[string](r, name, String) }

// Int32Lists is Doubles for Int32List.
func (r *Reader) Int32Lists(name string) ([][]int32, error) {
	return complete[[]int32](r, name, Int32List)
}

// complete reads a column that must have no missing values.
func complete[T any](r *Reader, name string, t Type) ([]T, error) {
	m, err := r.Optional(name)
	if err != nil || m.Values == nil {
		return nil, err
	}
	values, ok := m.Values.([]T)
	if !ok {
		err := fmt.Errorf("%s, not %s", r.byName[name].column.Type, t)
		return nil, &ReadError{Path: r.path, Column: name, Kind: ErrType, Err: err}
	}
	if m.Valid != nil {
		return nil, &ReadError{Path: r.path, Column: name, Kind: ErrMissing}
	}
	return values, nil
}

// Optional returns a column as a slice of its Go type, with zero where a value
// is missing; Valid is nil if none is. The zero Missing says that the file has
// no such column.
func (r *Reader) Optional(name string) (m Missing, err error) {
	s, ok := r.byName[name]
	if !ok {
		return Missing{}, nil
	}
	defer func() {
		if p := recover(); p != nil {
			m, err = Missing{}, &ReadError{Path: r.path, Column: name, Kind: ErrCorrupted, Err: fmt.Errorf("%v", p)}
		}
	}()
	c := newCollector(s, r.Rows())
	for _, group := range r.file.RowGroups() {
		if err := c.readChunk(group.ColumnChunks()[s.leaf]); err != nil {
			return Missing{}, r.wrap(name, err)
		}
	}
	if c.rows() != r.Rows() {
		err := fmt.Errorf("%d rows of %d", c.rows(), r.Rows())
		return Missing{}, &ReadError{Path: r.path, Column: name, Kind: ErrCorrupted, Err: err}
	}
	return c.result(), nil
}

// wrap makes a ReadError of the library's error, unless it is of the operating
// system and so says nothing about the file.
func (r *Reader) wrap(name string, err error) error {
	var p *os.PathError
	if errors.As(err, &p) {
		return fmt.Errorf("%s: column %s: %w", r.path, name, err)
	}
	return &ReadError{Path: r.path, Column: name, Kind: ErrCorrupted, Err: err}
}
