package pauli

import (
	"fmt"
	"strings"

	"sojourn/kinetic/lattice"
)

// span is a word for a product along whole axes.
type span struct {
	word string
	axes int // how many
}

var spans = []span{{"line", 1}, {"plane", 2}, {"volume", 3}}

// ParsePart reads what stands on one site of the cell: a polynomial, or a
// product along whole axes: "line x", "plane x y", "volume x y z". The words
// may follow a polynomial in the other axes, the cross-section: "(1 + y) line x"
// is a double line, "-1 line x" the inverse of a line. Errors are of type
// *SyntaxError.
func ParsePart(src string, q, axes int) (Polynomial, [lattice.MaxAxes]bool, error) {
	var extent [lattice.MaxAxes]bool
	span, start, found := findSpan(src)
	if !found {
		p, err := ParsePolynomial(src, q, axes)
		return p, extent, err
	}
	r := reader{src: src, pos: start + len(span.word), q: q, axes: axes}
	right := fmt.Sprintf("%d different axes after %q, out of %s", span.axes, span.word, r.variables())
	if span.axes == 1 {
		right = fmt.Sprintf("an axis after %q, out of %s", span.word, r.variables())
	}
	for range span.axes {
		c := r.peek()
		a := strings.IndexByte(axisNames, c)
		if c == 0 || a < 0 || a >= axes || extent[a] {
			return nil, extent, r.unexpected(right)
		}
		extent[a] = true
		r.pos++
	}
	if r.peek() != 0 {
		return nil, extent, r.unexpected("nothing after the axes of a " + span.word)
	}
	section, err := crossSection(src[:start], q, axes)
	if err != nil {
		return nil, extent, err
	}
	for _, m := range section {
		for a, e := range m.Exp {
			if e != 0 && extent[a] {
				return nil, extent, &SyntaxError{Message: fmt.Sprintf(
					"the cross-section of a %s along %c has no powers of %c", span.word, axisNames[a], axisNames[a])}
			}
		}
	}
	return section, extent, nil
}

// findSpan finds the word for a product along axes and where it begins.
func findSpan(src string) (s span, start int, found bool) {
	for _, s := range spans {
		if i := strings.Index(src, s.word); i >= 0 {
			return s, i, true
		}
	}
	return span{}, 0, false
}

// crossSection reads the polynomial in front of the word, in parentheses or
// not; nothing is 1.
func crossSection(src string, q, axes int) (Polynomial, error) {
	text := strings.TrimRight(src, " \t\r\n")
	if text == "" {
		return Polynomial{{Coeff: 1}}, nil
	}
	skip := len(text) - len(strings.TrimLeft(text, " \t\r\n"))
	if text[skip] == '(' && strings.HasSuffix(text, ")") {
		text = strings.Repeat(" ", skip+1) + text[skip+1:len(text)-1]
	}
	return ParsePolynomial(text, q, axes)
}
