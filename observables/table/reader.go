package table

// Reader reads one table. It is used by one goroutine.
type Reader struct{}

// Open opens a table.
func Open(path string) (*Reader, error) { panic("table: not written") }

// Close closes the file.
func (r *Reader) Close() error { panic("table: not written") }

// Rows returns the number of rows.
func (r *Reader) Rows() int { panic("table: not written") }

// Format returns the version of the table's layout, 0 if the file states none.
func (r *Reader) Format() int { panic("table: not written") }

// Metadata returns the value of a key.
func (r *Reader) Metadata(key string) (value string, ok bool) { panic("table: not written") }

// Columns returns the columns in the order of the file, those of types that
// this package does not know left out.
func (r *Reader) Columns() []Column { panic("table: not written") }

// Has reports whether the file has a column of that name.
func (r *Reader) Has(name string) bool { panic("table: not written") }

// Doubles returns a column; nil if the file has no such column. It refuses a
// column with missing values, as do the other methods named after a type.
func (r *Reader) Doubles(name string) ([]float64, error) { panic("table: not written") }

// Int64s is Doubles for Int64.
func (r *Reader) Int64s(name string) ([]int64, error) { panic("table: not written") }

// Int32s is Doubles for Int32.
func (r *Reader) Int32s(name string) ([]int32, error) { panic("table: not written") }

// Strings is Doubles for String. Equal neighbours share memory.
func (r *Reader) Strings(name string) ([]string, error) { panic("table: not written") }

// Int32Lists is Doubles for Int32List.
func (r *Reader) Int32Lists(name string) ([][]int32, error) { panic("table: not written") }

// Optional returns a column of any type but list, as a slice of its Go type,
// with zero where a value is missing; Valid is nil if none is. The zero Missing
// says that the file has no such column.
func (r *Reader) Optional(name string) (Missing, error) { panic("table: not written") }
