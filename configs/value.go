package configs

import (
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"unicode"
)

var namePattern = regexp.MustCompile(`^[A-Za-z][A-Za-z0-9_-]*$`)

// checkValue reports what is wrong with a value of a key, and marks it.
func (d *decoder) checkValue(k Key, n *node, path string) {
	if n.bad {
		return
	}
	one, many := k.Type.elements()
	switch {
	case n.kind == kindList && n.style == closed && many:
		d.checkList(k, one, n, path)
	case n.kind == kindList && !many && k.Scan:
		d.wrong(n, path, "takes %s; lists of values belong in [scan]", k.Type)
	case n.kind != kindList && k.Type == WordOrNumbers:
		d.checkScalar(k, Word, n, path)
	case n.kind != kindList && many && k.Type != WordOrWords:
		d.wrong(n, path, "takes %s: write [%s]", k.Type, n.shown())
	default:
		d.checkScalar(k, one, n, path)
	}
}

// elements returns the type of one value of a key, and whether it takes lists.
func (t Type) elements() (one Type, many bool) {
	switch t {
	case Integers:
		return Integer, true
	case Numbers, WordOrNumbers:
		return Number, true
	case Words, WordOrWords:
		return Word, true
	case Polynomials:
		return Text, true
	case Names:
		return Name, true
	}
	return t, false
}

func (d *decoder) checkList(k Key, one Type, n *node, path string) {
	if len(n.items) == 0 {
		d.wrong(n, path, "is an empty list; it takes %s", k.Type)
	}
	for _, item := range n.items {
		d.checkScalar(k, one, item, path)
		n.bad = n.bad || item.bad
	}
}

// wrong reports a value and marks it, so that it is not read.
func (d *decoder) wrong(n *node, path, format string, a ...any) {
	n.bad = true
	d.fault(n.at, path, format, a...)
}

func (d *decoder) checkScalar(k Key, t Type, n *node, path string) {
	if n.bad {
		return
	}
	switch t {
	case Text, Name, Word:
		d.checkText(k, t, n, path)
	case Number, Integer:
		d.checkNumber(k, t, n, path)
	case Flag:
		if n.kind != kindFlag {
			d.wrong(n, path, "takes true or false, not %s", n.shown())
		}
	}
}

func (d *decoder) checkText(k Key, t Type, n *node, path string) {
	switch {
	case n.kind != kindText:
		d.wrong(n, path, "takes %s, not %s", t, n.shown())
	case t == Text && strings.ContainsFunc(n.text, unicode.IsControl) && k.Name == "title":
		d.wrong(n, path, "is more than one line of text")
	case t == Name && !namePattern.MatchString(n.text):
		d.wrong(n, path, "%s is not a name: a letter, then letters, digits, _ and -", n.shown())
	case t == Word && !slices.Contains(k.Words, n.text):
		d.unknownWord(k, n, path)
	}
}

func (d *decoder) unknownWord(k Key, n *node, path string) {
	have := listed(k.Words, "or")
	switch near := nearest(n.text, k.Words); {
	case slices.Contains(k.later, n.text):
		d.wrong(n, path, "%s is not supported; this version has %s", n.shown(), have)
	case near != "":
		d.wrong(n, path, "%s is not known: write %q", n.shown(), near)
	default:
		d.wrong(n, path, "%s is not known; it must be %s", n.shown(), have)
	}
}

func (d *decoder) checkNumber(k Key, t Type, n *node, path string) {
	switch {
	case n.kind == kindText && isNumber(n.text):
		d.wrong(n, path, "takes %s, not a string: leave out the quotes", t)
	case n.kind != kindInteger && n.kind != kindFloat:
		d.wrong(n, path, "takes %s, not %s", t, n.shown())
	case math.IsNaN(n.number) || math.IsInf(n.number, 0):
		d.wrong(n, path, "%s is not a finite number%s", n.shown(), k.Range.tail())
	case t == Integer && n.kind == kindFloat && n.number == math.Trunc(n.number) && math.Abs(n.number) < 1<<53:
		d.wrong(n, path, "takes an integer: write %s", strconv.FormatFloat(n.number, 'f', -1, 64))
	case t == Integer && n.kind == kindFloat:
		d.wrong(n, path, "takes an integer, not %s", n.shown())
	case !k.Range.holds(n.number):
		d.wrong(n, path, "%s is out of range; it must be %s", n.shown(), k.Range)
	}
}

func (r Range) tail() string {
	if !r.Set {
		return ""
	}
	return "; it must be " + r.String()
}

func isNumber(s string) bool {
	_, err := strconv.ParseFloat(strings.TrimSpace(s), 64)
	return err == nil
}
