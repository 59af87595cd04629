package table

import "io"

// Writer writes one table. It is used by one goroutine.
type Writer struct{}

// NewWriter starts a table on w. Nothing is complete before Close.
func NewWriter(w io.Writer, s Schema) (*Writer, error) { panic("table: not written") }

// Write appends rows. It refuses a block whose columns are not those of the
// schema, in number, type or length, and one with NaN.
func (w *Writer) Write(b Block) error { panic("table: not written") }

// Close writes the footer; it leaves the underlying writer open.
func (w *Writer) Close() error { panic("table: not written") }

// WriteFile writes a whole table to path: under a temporary name in the same
// directory, flushed to the disk, then renamed, replacing what was there.
func WriteFile(path string, s Schema, b Block) error { panic("table: not written") }
