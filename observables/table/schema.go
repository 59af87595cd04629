package table

import (
	"fmt"
)

// Type is the type of a column.
type Type string

// The types.
const (
	Double    Type = "double"      // []float64, no NaN
	Int64     Type = "int64"       // []int64
	Int32     Type = "int32"       // []int32
	String    Type = "string"      // []string, UTF-8
	Int32List Type = "list<int32>" // [][]int32
)

// Column is one column of a table.
type Column struct {
	Name     string
	Type     Type
	Unit     string // "" for counts, names and pure numbers
	Meaning  string // one phrase, for metadata and tables of documentation
	Optional bool   // values may be missing (null); not for lists
}

// Pair is one key and value of a file's metadata.
type Pair struct {
	Key, Value string
}

// Schema describes a table.
type Schema struct {
	Name     string // "moments"
	Format   int    // version of the table's layout
	Tool     string // version of the program that writes it
	Columns  []Column
	Metadata []Pair // further pairs; keys with the prefix "sojourn." are taken
}

// Keys of a file's metadata. The columns are a JSON array of objects with the
// keys name, type, unit, meaning and optional.
const (
	KeyTable   = "sojourn.table"
	KeyFormat  = "sojourn.format"
	KeyTool    = "sojourn.tool"
	KeyColumns = "sojourn.columns"
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
	n, _ := length(b[0])
	return n
}

// length returns the number of rows in a column of a block.
func length(column any) (n int, ok bool) {
	switch c := column.(type) {
	case []float64:
		return len(c), true
	case []int64:
		return len(c), true
	case []int32:
		return len(c), true
	case []string:
		return len(c), true
	case [][]int32:
		return len(c), true
	case Missing:
		n, ok = length(c.Values)
		return n, ok && n == len(c.Valid)
	}
	return 0, false
}

// Builder gathers rows one by one into a Block, for small tables.
type Builder struct {
	schema Schema
	block  Block
}

// NewBuilder returns a Builder without rows.
func NewBuilder(s Schema) *Builder {
	panic("table: not written")
}

// Row adds a row: one value per column in the schema's order, nil where an
// optional value is missing. An int is taken for int32 and int64 columns. It
// panics if a value does not suit its column.
func (b *Builder) Row(values ...any) {
	panic("table: not written")
}

// Block returns the rows gathered.
func (b *Builder) Block() Block { return b.block }

// validate reports what is wrong with a schema.
func (s Schema) validate() error {
	return fmt.Errorf("table: not written")
}
