package configs

import (
	"fmt"
	"strings"
)

// Fault is one thing wrong with a study, and where.
type Fault struct {
	File    string
	Line    int // from 1; 0 if it has no place in the file
	Column  int // from 1, in characters
	Key     string
	Message string
}

func (f Fault) Error() string {
	var b strings.Builder
	b.WriteString(f.File)
	if f.Line > 0 {
		fmt.Fprintf(&b, ":%d:%d", f.Line, f.Column)
	}
	b.WriteString(": ")
	if f.Key != "" {
		b.WriteString(f.Key)
		b.WriteString(": ")
	}
	b.WriteString(f.Message)
	return b.String()
}

// Faults is every fault found in a study, in order of position. It is the
// error that Load returns for a study that is wrong.
type Faults []Fault

func (f Faults) Error() string {
	lines := make([]string, len(f))
	for i := range f {
		lines[i] = f[i].Error()
	}
	return strings.Join(lines, "\n")
}
