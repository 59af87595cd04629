package table

import "errors"

// Errors of reading, wrapped with the path.
var (
	// ErrIncomplete is for a file that ends early, as after a copy that was
	// cut short.
	ErrIncomplete = errors.New("the file is incomplete")
	// ErrCorrupted is for a file whose content cannot be what was written.
	ErrCorrupted = errors.New("the file is damaged")
	// ErrType is for a column whose type is not the one asked for.
	ErrType = errors.New("the column has another type")
)
