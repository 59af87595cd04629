package configs

import "strconv"

// kind is the type of a value in a study file.
type kind uint8

const (
	kindTable kind = iota
	kindList
	kindText
	kindInteger
	kindFloat
	kindFlag
	kindDate
)

func (k kind) String() string {
	return [...]string{"a table", "a list", "a string", "an integer", "a number", "true or false", "a date"}[k]
}

// node is a value of a study file, with its place.
type node struct {
	kind    kind
	at      int // first byte
	text    string
	raw     []byte // as written; scalars only
	number  float64
	integer int64
	items   []*node  // of a list
	entries []*entry // of a table, in order of appearance
	style   style
	// bad marks a value that a fault has been reported for: it is not read.
	bad bool
}

// entry is one key of a table and its value.
type entry struct {
	name  string
	at    int
	value *node
}

// style is how a table or list came about; it decides what may extend it.
type style uint8

const (
	implied style = iota // only named in the headers of tables below it
	headed               // [table]
	dotted               // through dotted keys
	closed               // written in place: { ... } or [ ... ]
	headers              // a list of [[table]]
)

// get returns the entry of a key, or nil.
func (n *node) get(name string) *entry {
	for _, e := range n.entries {
		if e.name == name {
			return e
		}
	}
	return nil
}

// shown writes a value as the study does, shortened where it is long.
func (n *node) shown() string {
	switch n.kind {
	case kindText:
		return shorten(strconv.Quote(n.text))
	case kindList:
		if n.style == headers {
			return "a list of tables"
		}
		return "a list"
	case kindTable:
		return "a table"
	}
	return shorten(string(n.raw))
}

func shorten(s string) string {
	const most = 40
	if r := []rune(s); len(r) > most {
		return string(r[:most]) + "..."
	}
	return s
}
