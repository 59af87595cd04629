package table

import (
	"errors"
	"fmt"
	"io"

	"github.com/parquet-go/parquet-go"
)

// collector gathers the values of one column, page by page.
type collector struct {
	source  source
	doubles []float64
	int64s  []int64
	int32s  []int32
	strings []string
	lists   [][]int32
	flat    []int32 // elements of lists, shared by them
	valid   []bool  // nil until a value is missing
	scratch []parquet.Value
	names   []string // of the dictionary last seen, "" where not yet made
	pages   parquet.Dictionary
	last    string
}

func newCollector(s source, rows int) *collector {
	c := &collector{source: s}
	// The footer may be damaged and promise more rows than there can be.
	room := min(rows, 1<<22)
	switch s.column.Type {
	case Double:
		c.doubles = make([]float64, 0, room)
	case Int64:
		c.int64s = make([]int64, 0, room)
	case Int32:
		c.int32s = make([]int32, 0, room)
	case String:
		c.strings = make([]string, 0, room)
	case Int32List:
		c.lists = make([][]int32, 0, room)
	}
	return c
}

func (c *collector) rows() int {
	return len(c.doubles) + len(c.int64s) + len(c.int32s) + len(c.strings) + len(c.lists)
}

func (c *collector) result() Missing {
	m := Missing{Valid: c.valid}
	switch c.source.column.Type {
	case Double:
		m.Values = c.doubles
	case Int64:
		m.Values = c.int64s
	case Int32:
		m.Values = c.int32s
	case String:
		m.Values = c.strings
	case Int32List:
		m.Values = c.lists
	}
	return m
}

// readChunk reads the pages of one row group.
func (c *collector) readChunk(chunk parquet.ColumnChunk) (err error) {
	pages := chunk.Pages()
	defer func() { err = errors.Join(err, pages.Close()) }()
	c.names, c.pages = nil, nil
	for {
		page, err := pages.ReadPage()
		if errors.Is(err, io.EOF) {
			return nil
		}
		if err != nil {
			return err
		}
		err = c.readPage(page)
		parquet.Release(page)
		if err != nil {
			return err
		}
	}
}

func (c *collector) readPage(page parquet.Page) error {
	if c.source.maxDef > 0 {
		return c.readLevels(page)
	}
	data := page.Data()
	switch c.source.column.Type {
	case Double:
		if page.Dictionary() == nil {
			c.doubles = append(c.doubles, data.Double()...)
			return nil
		}
	case Int64:
		if page.Dictionary() == nil {
			c.int64s = append(c.int64s, data.Int64()...)
			return nil
		}
	case Int32:
		if page.Dictionary() == nil {
			c.int32s = append(c.int32s, data.Int32()...)
			return nil
		}
	case String:
		if d := page.Dictionary(); d != nil {
			c.readNames(d, data.Int32())
			return nil
		}
	}
	return c.readLevels(page)
}

// readNames appends the strings of a page that holds indexes into a dictionary.
func (c *collector) readNames(d parquet.Dictionary, indexes []int32) {
	if c.pages != d {
		c.names, c.pages = make([]string, d.Len()), d
	}
	for _, i := range indexes {
		if c.names[i] == "" {
			c.names[i] = string(d.Index(i).ByteArray())
		}
		c.strings = append(c.strings, c.names[i])
	}
}

// readLevels appends the values of a page one by one, with their levels.
func (c *collector) readLevels(page parquet.Page) error {
	if c.scratch == nil {
		c.scratch = make([]parquet.Value, chunkRows)
	}
	values := page.Values()
	for {
		n, err := values.ReadValues(c.scratch)
		for _, v := range c.scratch[:n] {
			c.add(v)
		}
		if errors.Is(err, io.EOF) {
			return nil
		}
		if err != nil {
			return err
		}
		if n == 0 {
			return fmt.Errorf("a page without end")
		}
	}
}

// add appends one value; of a list, one element.
func (c *collector) add(v parquet.Value) {
	present := v.DefinitionLevel() == c.source.maxDef
	if c.source.column.Type == Int32List {
		c.addElement(v, present)
		return
	}
	if !present && c.valid == nil {
		c.valid = make([]bool, c.rows())
		for i := range c.valid {
			c.valid[i] = true
		}
	}
	switch c.source.column.Type {
	case Double:
		c.doubles = append(c.doubles, pick(present, v.Double))
	case Int64:
		c.int64s = append(c.int64s, pick(present, v.Int64))
	case Int32:
		c.int32s = append(c.int32s, pick(present, v.Int32))
	case String:
		if present && c.last != string(v.ByteArray()) {
			c.last = string(v.ByteArray())
		}
		c.strings = append(c.strings, pick(present, func() string { return c.last }))
	}
	if c.valid != nil {
		c.valid = append(c.valid, present)
	}
}

func (c *collector) addElement(v parquet.Value, present bool) {
	if v.RepetitionLevel() == 0 {
		c.lists = append(c.lists, nil)
	}
	if !present {
		return
	}
	// Elements of a list follow each other, so that a list is a window of the
	// shared memory; where that moves, the list begun moves with it.
	list := &c.lists[len(c.lists)-1]
	n := len(*list)
	if len(c.flat) == cap(c.flat) {
		flat := make([]int32, n, max(1024, 2*cap(c.flat)))
		copy(flat, *list)
		c.flat = flat
	}
	c.flat = append(c.flat, v.Int32())
	end := len(c.flat)
	*list = c.flat[end-n-1 : end : end]
}

func pick[T any](present bool, value func() T) (x T) {
	if present {
		return value()
	}
	return x
}
