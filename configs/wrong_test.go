package configs

import (
	"strings"
	"testing"
	"unicode/utf8"
)

// base is a right study; the tests below break it.
const base = `title = "Coldest shelf"
[lattice]
size = [8, 8]
[hamiltonian]
model = "ising"
[bath]
beta = 0.4
[trajectory]
settle = 10.0
span = 100.0
step = 0.5
`

// spelt is a right study with a Hamiltonian of its own.
const spelt = `[lattice]
size = [8, 8]
[hamiltonian]
model = "custom"
sites_per_cell = 2
[[hamiltonian.family]]
name = "plaquette"
z = ["1 + y", "1 + x"]
[[hamiltonian.family]]
name = "star"
x = ["1 + x^-1", "1 + y^-1"]
[[hamiltonian.tracked]]
name = "loop"
z = ["line x", "0"]
[bath]
beta = 0.4
`

// mark stands in front of the character at which a fault is expected.
const mark = "▸"

// unmark returns the text without marks and the line and column of each.
func unmark(text string) (plain string, places [][2]int) {
	var b strings.Builder
	line, column := 1, 1
	for text != "" {
		if strings.HasPrefix(text, mark) {
			places = append(places, [2]int{line, column})
			text = text[len(mark):]
			continue
		}
		r, n := utf8.DecodeRuneInString(text)
		b.WriteString(text[:n])
		text = text[n:]
		column++
		if r == '\n' {
			line, column = line+1, 1
		}
	}
	return b.String(), places
}

// wrong is a study made from base (or another) by replacing old with new, in
// which marks stand where faults are expected. want has one text per fault: the
// key, a colon and a part of the message.
type wrong struct {
	name     string
	from     string // base if empty
	old, new string
	want     []string
}

func (w wrong) text(t *testing.T) string {
	from := w.from
	if from == "" {
		from = base
	}
	if strings.Count(from, w.old) != 1 {
		t.Fatalf("%q occurs %d times", w.old, strings.Count(from, w.old))
	}
	return strings.Replace(from, w.old, w.new, 1)
}

func TestWrongStudies(t *testing.T) {
	for _, table := range [][]wrong{wrongSyntax, wrongKeys, wrongValues, wrongHamiltonians, wrongBaths, wrongObservables, wrongTimes, wrongScans, wrongLevels} {
		for _, w := range table {
			t.Run(w.name, func(t *testing.T) { w.check(t) })
		}
	}
}

func (w wrong) check(t *testing.T) {
	text, places := unmark(w.text(t))
	s, err := Decode("shelf", "shelf.toml", []byte(text))
	if err == nil {
		t.Fatalf("accepted, with %d points", len(s.Points))
	}
	faults := err.(Faults)
	if len(faults) != len(w.want) {
		t.Fatalf("got %d faults, want %d:\n%v", len(faults), len(w.want), err)
	}
	for i, f := range faults {
		key, message, _ := strings.Cut(w.want[i], ": ")
		if f.Key != key || !strings.Contains(f.Message, message) {
			t.Errorf("fault %d: got\n%s: %s\nwant\n%s", i, f.Key, f.Message, w.want[i])
		}
		at := [2]int{f.Line, f.Column}
		if f.Line == 0 {
			continue // has no place: not marked
		}
		if len(places) == 0 {
			t.Errorf("fault %q stands at %v, unexpectedly", f.Key, at)
			continue
		}
		if at != places[0] {
			t.Errorf("%s: %s\nstands at %v, want %v", f.Key, f.Message, at, places[0])
		}
		places = places[1:]
	}
	if len(places) > 0 {
		t.Errorf("no fault at %v", places)
	}
}

func TestBaseStudiesAreRight(t *testing.T) {
	for _, text := range []string{base, spelt, pottsSpelt, planarSpelt} {
		if _, err := Decode("shelf", "", []byte(text)); err != nil {
			t.Error(err)
		}
	}
}
