package configs

import (
	"fmt"
	"sort"
)

// decoder collects what is wrong with a study while it is read.
type decoder struct {
	src    *source
	faults []placed
	notes  []placed
	seen   map[placeKey]bool
	// meant holds the names of keys and tables that misspelt or misplaced ones
	// were taken to mean, so that nothing complains that these are missing.
	meant    map[string]bool
	compiled map[string]compiled // by spec
	chosen   map[string]string   // by spec and use: the engine
	turned   map[string]bool     // see uneven
}

func newDecoder(src *source) *decoder {
	return &decoder{src: src, seen: map[placeKey]bool{}, meant: map[string]bool{}, compiled: map[string]compiled{}, chosen: map[string]string{}, turned: map[string]bool{}}
}

// placed is a fault with its place as a byte offset.
type placed struct {
	at      int
	key     string
	message string
}

type placeKey struct {
	at  int
	key string
}

// fault reports that the key, which stands at a byte of the file, is wrong. A
// study is read once per point: the first fault of a key at a place is kept.
func (d *decoder) fault(at int, key, format string, a ...any) {
	if d.seen[placeKey{at, key}] {
		return
	}
	d.seen[placeKey{at, key}] = true
	d.faults = append(d.faults, placed{at, key, fmt.Sprintf(format, a...)})
}

// note reports something that is allowed but worth a word.
func (d *decoder) note(at int, key, format string, a ...any) {
	p := placed{at, key, fmt.Sprintf(format, a...)}
	for _, n := range d.notes {
		if n == p {
			return
		}
	}
	d.notes = append(d.notes, p)
}

// sorted returns faults or notes in order of place, those without one last.
func (d *decoder) sorted(list []placed) Faults {
	sort.SliceStable(list, func(i, j int) bool { return uint(list[i].at) < uint(list[j].at) })
	out := make(Faults, len(list))
	for i, p := range list {
		line, column := d.src.position(p.at)
		out[i] = Fault{File: d.src.file, Line: line, Column: column, Key: p.key, Message: p.message}
	}
	return out
}

// line is the line of a byte.
func (d *decoder) line(at int) int {
	line, _ := d.src.position(at)
	return line
}
