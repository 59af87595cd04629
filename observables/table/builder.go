package table

import "fmt"

// Builder gathers rows one by one into a Block, for small tables.
type Builder struct {
	columns []Column
	values  []any
	valid   [][]bool
}

// NewBuilder returns a Builder without rows for the columns of a schema.
func NewBuilder(s Schema) *Builder {
	b := &Builder{
		columns: s.Columns,
		values:  make([]any, len(s.Columns)),
		valid:   make([][]bool, len(s.Columns)),
	}
	for i, c := range s.Columns {
		b.values[i] = empty(c.Type)
	}
	return b
}

// empty returns a slice without elements for a type.
func empty(t Type) any {
	switch t {
	case Double:
		return []float64{}
	case Int64:
		return []int64{}
	case Int32:
		return []int32{}
	case String:
		return []string{}
	case Int32List:
		return [][]int32{}
	}
	panic(fmt.Sprintf("table: unknown type %q", t))
}

// Row adds a row: one value per column in the schema's order, nil where an
// optional value is missing. An int is taken for int32 and int64 columns. It
// panics if a value does not suit its column.
func (b *Builder) Row(values ...any) {
	if len(values) != len(b.columns) {
		panic(fmt.Sprintf("table: a row of %d values for %d columns", len(values), len(b.columns)))
	}
	for i, value := range values {
		if !b.add(i, value) {
			panic(fmt.Sprintf("table: column %s cannot hold %v (%T)", b.columns[i].Name, value, value))
		}
	}
}

// add appends one value to column i and reports whether it suits it.
func (b *Builder) add(i int, value any) bool {
	present := value != nil
	if !present && !b.columns[i].Optional {
		return false
	}
	b.valid[i] = append(b.valid[i], present)
	switch column := b.values[i].(type) {
	case []float64:
		return push(b, i, column, value)
	case []int64:
		if n, ok := value.(int); ok {
			value = int64(n)
		}
		return push(b, i, column, value)
	case []int32:
		if n, ok := value.(int); ok && int(int32(n)) == n {
			value = int32(n)
		}
		return push(b, i, column, value)
	case []string:
		return push(b, i, column, value)
	case [][]int32:
		return push(b, i, column, value)
	}
	return false
}

func push[T any](b *Builder, i int, column []T, value any) bool {
	x, ok := value.(T)
	b.values[i] = append(column, x) // zero if missing
	return ok || value == nil
}

// Block returns the rows gathered so far.
func (b *Builder) Block() Block {
	block := make(Block, len(b.columns))
	for i, c := range b.columns {
		block[i] = b.values[i]
		if c.Optional {
			block[i] = Missing{Values: b.values[i], Valid: b.valid[i]}
		}
	}
	return block
}
