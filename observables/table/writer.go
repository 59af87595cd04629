package table

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"strconv"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/encoding"

	"sojourn/observables/internal/durable"
)

const (
	// groupRows bounds the rows in a row group, and with them the memory of a
	// Writer: pages of a group wait in memory until it is complete.
	groupRows = 1 << 17
	// chunkRows is how many rows go to the library at a time.
	chunkRows = 1024
)

// Writer writes one table. It is used by one goroutine.
type Writer struct {
	schema Schema
	writer *parquet.GenericWriter[any]
	leaf   []int           // by column of the schema: index of its leaf
	values []parquet.Value // scratch
	rows   int             // in the open row group
	err    error           // the first, or errClosed
}

var errClosed = errors.New("table: the writer is closed")

// NewWriter starts a table on w. Nothing is complete before Close.
func NewWriter(w io.Writer, s Schema) (*Writer, error) {
	if err := s.validate(); err != nil {
		return nil, err
	}
	columns, err := json.Marshal(s.Columns)
	if err != nil {
		return nil, fmt.Errorf("table %s: %w", s.Name, err)
	}
	schema := parquet.NewSchema(s.Name, newRoot(s.Columns))
	options := []parquet.WriterOption{
		schema,
		parquet.Compression(&parquet.Zstd),
		parquet.CreatedBy("sojourn", s.Tool, ""),
		parquet.KeyValueMetadata(KeyTable, s.Name),
		parquet.KeyValueMetadata(KeyFormat, strconv.Itoa(s.Format)),
		parquet.KeyValueMetadata(KeyTool, s.Tool),
		parquet.KeyValueMetadata(KeyColumns, string(columns)),
	}
	for _, p := range s.Metadata {
		options = append(options, parquet.KeyValueMetadata(p.Key, p.Value))
	}
	writer := &Writer{
		schema: s,
		writer: parquet.NewGenericWriter[any](w, options...),
		leaf:   make([]int, len(s.Columns)),
		values: make([]parquet.Value, 0, chunkRows),
	}
	for i, c := range s.Columns {
		writer.leaf[i] = leafOf(schema, c)
	}
	return writer, nil
}

// leafOf returns the index of the leaf that holds a column's values.
func leafOf(schema *parquet.Schema, c Column) int {
	path := []string{c.Name}
	if c.Type == Int32List {
		path = append(path, "list", "element")
	}
	leaf, ok := schema.Lookup(path...)
	if !ok {
		panic("table: column " + c.Name + " is not in its own schema")
	}
	return leaf.ColumnIndex
}

// Write appends rows. It refuses a block whose columns are not those of the
// schema, in number, type or length, and one with NaN; the table then has none
// of its rows.
func (w *Writer) Write(b Block) error {
	if w.err != nil {
		return w.err
	}
	if err := w.schema.check(b); err != nil {
		return err
	}
	for first, rows := 0, b.Rows(); first < rows; {
		last := min(first+groupRows-w.rows, rows)
		for i := range b {
			if w.err = w.writeColumn(i, b[i], first, last); w.err != nil {
				return w.err
			}
		}
		w.rows += last - first
		first = last
		if w.rows == groupRows {
			if w.err = w.writer.Flush(); w.err != nil {
				return w.err
			}
			w.rows = 0
		}
	}
	return nil
}

// writeColumn writes rows first..last-1 of one column.
func (w *Writer) writeColumn(i int, column any, first, last int) error {
	var valid []bool
	if m, ok := column.(Missing); ok {
		column, valid = m.Values, m.Valid
	}
	out := w.writer.ColumnWriters()[w.leaf[i]]
	optional := w.schema.Columns[i].Optional
	for first < last {
		next := min(first+chunkRows, last)
		w.values = appendValues(w.values[:0], column, first, next, w.leaf[i])
		if optional {
			for k := range w.values {
				if valid != nil && !valid[first+k] {
					w.values[k] = parquet.NullValue().Level(0, 0, w.leaf[i])
				} else {
					w.values[k] = w.values[k].Level(0, 1, w.leaf[i])
				}
			}
		}
		if _, err := out.WriteRowValues(w.values); err != nil {
			return err
		}
		first = next
	}
	return nil
}

// appendValues converts rows first..last-1 of a column. A list takes one value
// per element, or a null if it is empty.
func appendValues(dst []parquet.Value, column any, first, last, leaf int) []parquet.Value {
	switch c := column.(type) {
	case []float64:
		for _, x := range c[first:last] {
			dst = append(dst, parquet.DoubleValue(x))
		}
	case []int64:
		for _, x := range c[first:last] {
			dst = append(dst, parquet.Int64Value(x))
		}
	case []int32:
		for _, x := range c[first:last] {
			dst = append(dst, parquet.Int32Value(x))
		}
	case []string:
		var text string
		value := parquet.ByteArrayValue(nil)
		for _, x := range c[first:last] {
			if x != text {
				// Names come in runs: one copy serves all of them.
				text, value = x, parquet.ByteArrayValue([]byte(x))
			}
			dst = append(dst, value)
		}
	case [][]int32:
		for _, list := range c[first:last] {
			if len(list) == 0 {
				dst = append(dst, parquet.NullValue().Level(0, 0, leaf))
			}
			for k, x := range list {
				dst = append(dst, parquet.Int32Value(x).Level(min(k, 1), 1, leaf))
			}
		}
	}
	return dst
}

// Close writes the footer; it leaves the underlying writer open. A second
// Close returns an error.
func (w *Writer) Close() error {
	if w.err != nil {
		return w.err
	}
	w.err = errClosed
	return w.writer.Close()
}

// WriteFile writes a whole table to path: under a temporary name in the same
// directory, flushed to the disk, then renamed, replacing what was there.
func WriteFile(path string, s Schema, b Block) error {
	f, err := durable.Create(path)
	if err != nil {
		return err
	}
	defer f.Discard()
	w, err := NewWriter(f, s)
	if err != nil {
		return err
	}
	if err := w.Write(b); err != nil {
		return err
	}
	if err := w.Close(); err != nil {
		return err
	}
	return f.Commit()
}

// root is a group whose columns stand in the order of the schema, where
// parquet.Group sorts them by name.
type root struct {
	parquet.Group
	fields []parquet.Field
}

func newRoot(columns []Column) root {
	group := make(parquet.Group, len(columns))
	for _, c := range columns {
		group[c.Name] = node(c)
	}
	place := make(map[string]int, len(columns))
	for i, c := range columns {
		place[c.Name] = i
	}
	fields := make([]parquet.Field, len(columns))
	for _, f := range group.Fields() {
		fields[place[f.Name()]] = f
	}
	return root{group, fields}
}

func (r root) Fields() []parquet.Field { return r.fields }

// node returns the Parquet type and encoding of a column. Sums of many samples
// have random low bytes and alike high ones, which byte-stream-split parts;
// counts and numbers grow or repeat from row to row.
func node(c Column) parquet.Node {
	encoded := func(n parquet.Node, e encoding.Encoding) parquet.Node { return parquet.Encoded(n, e) }
	var n parquet.Node
	switch c.Type {
	case Double:
		n = encoded(parquet.Leaf(parquet.DoubleType), &parquet.ByteStreamSplit)
	case Int64:
		n = encoded(parquet.Leaf(parquet.Int64Type), &parquet.DeltaBinaryPacked)
	case Int32:
		n = encoded(parquet.Leaf(parquet.Int32Type), &parquet.DeltaBinaryPacked)
	case String:
		n = encoded(parquet.String(), &parquet.RLEDictionary)
	case Int32List:
		return parquet.List(encoded(parquet.Leaf(parquet.Int32Type), &parquet.DeltaBinaryPacked))
	}
	if c.Optional {
		n = parquet.Optional(n)
	}
	return n
}
