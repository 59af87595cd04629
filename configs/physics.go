package configs

import (
	"errors"
	"strings"
)

// Decode reads a study from its text. name is the study's name, path what
// faults call the file ("" for a bundled study). The error is [Faults].
func Decode(name, path string, src []byte) (*Study, error) {
	return nil, errors.New("studies cannot be read yet")
}

// ColumnName is the name of a scanned parameter as a column of a table: dots
// and dashes become underscores.
func ColumnName(dotted string) string {
	return strings.NewReplacer(".", "_", "-", "_").Replace(dotted)
}
