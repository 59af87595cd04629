package table

import (
	"fmt"
	"strings"
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
	Name     string `json:"name"`
	Type     Type   `json:"type"`
	Unit     string `json:"unit,omitempty"`     // "" for counts, names and pure numbers
	Meaning  string `json:"meaning,omitempty"`  // one phrase, for metadata and documentation
	Optional bool   `json:"optional,omitempty"` // values may be missing (null); not for lists
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
// keys name, type, unit, meaning and optional, as in Column.
const (
	KeyTable   = "sojourn.table"
	KeyFormat  = "sojourn.format"
	KeyTool    = "sojourn.tool"
	KeyColumns = "sojourn.columns"
)

// validate reports the first thing wrong with a schema.
func (s Schema) validate() error {
	if len(s.Columns) == 0 {
		return fmt.Errorf("table %s: the schema has no columns", s.Name)
	}
	seen := make(map[string]bool, len(s.Columns))
	for _, c := range s.Columns {
		switch c.Type {
		case Double, Int64, Int32, String:
		case Int32List:
			if c.Optional {
				return fmt.Errorf("table %s: column %s: a list cannot be optional", s.Name, c.Name)
			}
		default:
			return fmt.Errorf("table %s: column %s: unknown type %q", s.Name, c.Name, c.Type)
		}
		if c.Name == "" || seen[c.Name] {
			return fmt.Errorf("table %s: column name %q is empty or used twice", s.Name, c.Name)
		}
		seen[c.Name] = true
	}
	for _, p := range s.Metadata {
		if strings.HasPrefix(p.Key, "sojourn.") {
			return fmt.Errorf("table %s: metadata key %q is taken", s.Name, p.Key)
		}
	}
	return nil
}
