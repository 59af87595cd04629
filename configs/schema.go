package configs

import (
	"math"
	"strconv"
)

// Section is a table of a study file.
type Section struct {
	Name     string // "lattice", "bath.operator"; "" for the top of the file
	Repeated bool   // written [[...]], any number of times
	Single   bool   // if repeated: written [...] where there is only one
	Doc      string
	Keys     []Key
}

// Key is one key of a section.
type Key struct {
	Name    string
	Short   string // its short name in [scan] and [[case]]; "" for none
	Type    Type
	Words   []string // the values that a Word takes
	Range   Range    // of a number, or of each number of a list
	Default string   // as in a study, or in words; "" if there is none
	Needs   string   // when it is allowed or needed, in words; "" for always
	Scan    bool     // whether [scan] and [[case]] may vary it
	Doc     string

	later []string // words that other versions may know: refused by name
}

// Type is what a key takes.
type Type int

// The types.
const (
	Text          Type = iota // any string
	Name                      // a string of letters, digits, _ and -, beginning with a letter
	Word                      // one of a few strings
	Number                    // a finite number
	Integer                   // an integer
	Flag                      // true or false
	Integers                  // a list of integers
	Numbers                   // a list of numbers
	Words                     // a list of strings out of a few
	WordOrWords               // one of a few strings, or a list of them
	WordOrNumbers             // one of a few strings, or a list of numbers
	Polynomials               // a list of strings, one polynomial per site of the cell
	Names                     // a list of names
)

// String is the type in words.
func (t Type) String() string {
	return [...]string{"a string", "a name", "a word", "a number", "an integer", "true or false", "a list of integers",
		"a list of numbers", "a list of words", "a word or a list of words", "a word or a list of numbers", "a list of polynomials", "a list of names"}[t]
}

// Range is an interval of numbers. Its zero value is every finite number.
type Range struct {
	Set       bool
	Min, Max  float64
	Exclusive bool // Min itself is outside
}

// String is the range in words; "" if every number is allowed.
func (r Range) String() string {
	switch {
	case !r.Set:
		return ""
	case r.Min == r.Max:
		return formatNumber(r.Min)
	case r.Exclusive:
		return "above " + formatNumber(r.Min)
	case math.IsInf(r.Max, 1):
		return "at least " + formatNumber(r.Min)
	case r.Max == math.MaxInt64:
		return "0 to 2^63 - 1"
	}
	return "from " + formatNumber(r.Min) + " to " + formatNumber(r.Max)
}

func (r Range) holds(x float64) bool {
	return !r.Set || (x > r.Min || x == r.Min && !r.Exclusive) && x <= r.Max
}

var (
	positive    = Range{Set: true, Min: 0, Max: math.Inf(1), Exclusive: true}
	notNegative = Range{Set: true, Min: 0, Max: math.Inf(1)}
	// countRange leaves room for unit numbers in 32 bits.
	countRange = Range{Set: true, Min: 1, Max: 1e9}
	oneUp      = Range{Set: true, Min: 1, Max: math.Inf(1)}
	seedRange  = Range{Set: true, Min: 0, Max: math.MaxInt64}
)

// formatNumber writes a number as a study would.
func formatNumber(x float64) string {
	if x == math.Trunc(x) && math.Abs(x) < 1e15 {
		return strconv.FormatFloat(x, 'f', -1, 64)
	}
	return strconv.FormatFloat(x, 'g', -1, 64)
}

// Schema returns the tables and keys of a study file, in the order in which
// they are explained. Parameters of built-in Hamiltonians are not among them:
// models.All has those.
func Schema() []Section { return append([]Section(nil), schema...) }

// find returns the key of the given name.
func (s *Section) find(name string) (Key, bool) {
	for _, k := range s.Keys {
		if k.Name == name {
			return k, true
		}
	}
	return Key{}, false
}

// title is how the section's header looks.
func (s *Section) title() string {
	switch {
	case s.Name == "":
		return "the top of the file"
	case s.Repeated && !s.Single:
		return "[[" + s.Name + "]]"
	}
	return "[" + s.Name + "]"
}

func sectionOf(name string) *Section {
	for i := range schema {
		if schema[i].Name == name {
			return &schema[i]
		}
	}
	panic("configs: no section " + name)
}
