package main

import (
	"io"
	"strings"
	"unicode/utf8"
)

// sheet lays out rows in columns two spaces apart. The first column and those
// marked as text are set left, all others right.
type sheet struct {
	head []string
	left map[int]bool
	rows [][]string
}

func newSheet(head ...string) *sheet {
	return &sheet{head: head, left: map[int]bool{0: true}}
}

func (t *sheet) text(columns ...int) *sheet {
	for _, c := range columns {
		t.left[c] = true
	}
	return t
}

func (t *sheet) add(cells ...string) {
	if len(cells) != len(t.head) {
		panic("sojourn: row and head of a table differ in length")
	}
	t.rows = append(t.rows, cells)
}

// write prints the table, each line after the indent and without blanks at its
// end. Columns in which no row has anything are left out.
func (t *sheet) write(w io.Writer, indent string) error {
	width := make([]int, len(t.head))
	used := make([]bool, len(t.head))
	for c, h := range t.head {
		width[c] = utf8.RuneCountInString(h)
		for _, r := range t.rows {
			width[c] = max(width[c], utf8.RuneCountInString(r[c]))
			used[c] = used[c] || r[c] != ""
		}
	}
	var b strings.Builder
	for _, cells := range append([][]string{t.head}, t.rows...) {
		var line strings.Builder
		line.WriteString(indent)
		first := true
		for c, s := range cells {
			if !used[c] {
				continue
			}
			if !first {
				line.WriteString("  ")
			}
			first = false
			pad := strings.Repeat(" ", width[c]-utf8.RuneCountInString(s))
			if t.left[c] {
				line.WriteString(s + pad)
			} else {
				line.WriteString(pad + s)
			}
		}
		b.WriteString(strings.TrimRight(line.String(), " "))
		b.WriteByte('\n')
	}
	_, err := io.WriteString(w, b.String())
	return err
}
