package table

import (
	"fmt"
	"math"
	"unicode/utf8"
)

// Block is rows column by column: one slice per column of the schema, in its
// order and all of one length. The slices have the Go type of their column, or
// are a Missing for an optional one.
type Block []any

// Missing is a column with missing values: Values as for a required column, of
// which those with Valid false are ignored and stored as null.
type Missing struct {
	Values any
	Valid  []bool
}

// Rows returns the number of rows, from the first column.
func (b Block) Rows() int {
	if len(b) == 0 {
		return 0
	}
	_, n := kindOf(b[0])
	return n
}

// kindOf returns the type and length of a column of a block; the type is ""
// if there is none such.
func kindOf(column any) (Type, int) {
	switch c := column.(type) {
	case []float64:
		return Double, len(c)
	case []int64:
		return Int64, len(c)
	case []int32:
		return Int32, len(c)
	case []string:
		return String, len(c)
	case [][]int32:
		return Int32List, len(c)
	case Missing:
		if _, nested := c.Values.(Missing); nested {
			return "", 0
		}
		t, n := kindOf(c.Values)
		if n != len(c.Valid) {
			return "", 0
		}
		return t, n
	}
	return "", 0
}

// check reports the first way in which a block does not suit a schema. The
// Parquet library would write such blocks without a word: bit patterns of
// another type, or columns of different lengths.
func (s Schema) check(b Block) error {
	if len(b) != len(s.Columns) {
		return fmt.Errorf("table %s: a block of %d columns for a schema of %d", s.Name, len(b), len(s.Columns))
	}
	rows := b.Rows()
	for i, c := range s.Columns {
		t, n := kindOf(b[i])
		missing, nullable := b[i].(Missing)
		switch {
		case t != c.Type, nullable && !c.Optional:
			return fmt.Errorf("table %s: column %s holds %T, want a slice for %s", s.Name, c.Name, b[i], c.Type)
		case n != rows:
			return fmt.Errorf("table %s: column %s has %d rows, column %s has %d", s.Name, c.Name, n, s.Columns[0].Name, rows)
		}
		if err := checkValues(b[i], missing.Valid); err != nil {
			return fmt.Errorf("table %s: column %s: %w", s.Name, c.Name, err)
		}
	}
	return nil
}

// checkValues refuses NaN and text that is not UTF-8, except where a value is
// missing.
func checkValues(column any, valid []bool) error {
	switch c := column.(type) {
	case []float64:
		for i, x := range c {
			if math.IsNaN(x) && (valid == nil || valid[i]) {
				return fmt.Errorf("row %d is NaN", i)
			}
		}
	case []string:
		for i, x := range c {
			if !utf8.ValidString(x) && (valid == nil || valid[i]) {
				return fmt.Errorf("row %d is not UTF-8", i)
			}
		}
	case Missing:
		return checkValues(c.Values, valid)
	}
	return nil
}
