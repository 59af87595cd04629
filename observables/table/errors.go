package table

import (
	"errors"
	"fmt"
)

// Errors of reading, wrapped with the path in a *ReadError.
var (
	// ErrIncomplete is for a file that ends early, as after a copy that was
	// cut short.
	ErrIncomplete = errors.New("the file is incomplete")
	// ErrCorrupted is for a file whose content cannot be what was written.
	ErrCorrupted = errors.New("the file is damaged")
	// ErrType is for a column whose type is not the one asked for.
	ErrType = errors.New("the column has another type")
	// ErrMissing is for missing values in a column that was read as complete.
	ErrMissing = errors.New("the column has missing values")
)

// ReadError is a file that cannot be read, or a column of it.
type ReadError struct {
	Path   string
	Column string // "" for the whole file
	Kind   error  // ErrIncomplete, ErrCorrupted, ErrType, ErrMissing
	Err    error  // what the library said; may be nil
}

func (e *ReadError) Error() string {
	text := e.Path + ": "
	if e.Column != "" {
		text += "column " + e.Column + ": "
	}
	text += e.Kind.Error()
	if e.Err != nil {
		text += fmt.Sprintf(" (%v)", e.Err)
	}
	return text
}

// Unwrap gives the kind and the cause.
func (e *ReadError) Unwrap() []error {
	if e.Err == nil {
		return []error{e.Kind}
	}
	return []error{e.Kind, e.Err}
}
