package pauli

import (
	"errors"
	"strings"
	"testing"

	"sojourn/kinetic/lattice"
)

func TestParsePolynomial(t *testing.T) {
	for _, c := range []struct {
		src     string
		q, axes int
		want    string
	}{
		{"1 + x", 2, 1, "1 + x"},
		{"x+1", 2, 1, "1 + x"},
		{"  1+x^-1 ", 2, 1, "1 + x^-1"},
		{"1 + x^{-1}", 2, 1, "1 + x^-1"},
		{"0", 2, 1, "0"},
		{"1 - 1", 2, 1, "0"},
		{"x + x", 2, 1, "0"},
		{"x + x", 3, 1, "2 x"},
		{"-1 + x", 3, 1, "2 + x"},
		{"1 - x^-1", 5, 1, "1 + 4 x^-1"},
		{"2x y^2", 3, 2, "2 x y^2"},
		{"2*x*y^2", 3, 2, "2 x y^2"},
		{"2 * xy", 3, 2, "2 x y"},
		{"y x", 2, 2, "x y"},
		{"x x^-1", 2, 1, "1"},
		{"x^0", 2, 1, "1"},
		{"1 + x + y + z + w", 2, 4, "1 + x + y + z + w"},
		{"x^+2", 2, 1, "x^2"},
		{"7x", 3, 1, "x"},
		{"3", 3, 1, "0"},
		{"123456789012345678901234567890", 16, 1, "2"}, // its last four digits, 7890, are 2 mod 16
	} {
		p, err := ParsePolynomial(c.src, c.q, c.axes)
		if err != nil || p.String() != c.want {
			t.Errorf("%q mod %d: got %q, %v, want %q", c.src, c.q, p, err, c.want)
		}
	}
}

func TestParsePolynomialErrors(t *testing.T) {
	for _, c := range []struct {
		src    string
		axes   int
		offset int
		says   string
	}{
		{"", 2, 0, "ends"},
		{"1 +", 2, 3, "ends where a term"},
		{"1 + z", 2, 4, "'z' is not an axis of this lattice; it has x and y"},
		{"1 + q", 2, 4, "found 'q'"},
		{"x^", 1, 2, "whole number"},
		{"x^y", 2, 2, "whole number"},
		{"x^{2", 1, 4, "'}'"},
		{"x2", 1, 1, "in front"},
		{"2*3", 1, 2, "in front"},
		{"x*", 1, 2, "after '*'"},
		{"1 + + x", 1, 4, "found '+'"},
		{"1 − x", 1, 2, "found '−', expected '+', '-'"},
		{"(1 + x)", 1, 0, "found '('"},
		{"x^9999999", 1, 0, "beyond 1048576"},
		{"x^-9999999999999999999999", 1, 0, "beyond"},
		{"X", 1, 0, "found 'X'"},
		{"1.5", 1, 1, "found '.'"},
	} {
		_, err := ParsePolynomial(c.src, 2, c.axes)
		var syntax *SyntaxError
		if !errors.As(err, &syntax) {
			t.Errorf("%q: got %v, want a syntax error", c.src, err)
			continue
		}
		if syntax.Offset != c.offset || !strings.Contains(syntax.Message, c.says) {
			t.Errorf("%q: got offset %d, %q; want %d, ...%s...", c.src, syntax.Offset, syntax.Message, c.offset, c.says)
		}
	}
}

func TestParsePart(t *testing.T) {
	for _, c := range []struct {
		src    string
		axes   int
		want   string
		extent [lattice.MaxAxes]bool
	}{
		{"1 + y", 2, "1 + y", [4]bool{}},
		{"0", 2, "0", [4]bool{}},
		{"line x", 2, "1", [4]bool{true}},
		{" line  y ", 2, "1", [4]bool{false, true}},
		{"plane x z", 3, "1", [4]bool{true, false, true}},
		{"plane zx", 3, "1", [4]bool{true, false, true}},
		{"volume x y z", 4, "1", [4]bool{true, true, true}},
		{"(1 + y) line x", 2, "1 + y", [4]bool{true}},
		{"1 + y line x", 2, "1 + y", [4]bool{true}},
		{"-1 line x", 2, "2", [4]bool{true}},
	} {
		p, extent, err := ParsePart(c.src, 3, c.axes)
		if err != nil || p.String() != c.want || extent != c.extent {
			t.Errorf("%q: got %q %v %v, want %q %v", c.src, p, extent, err, c.want, c.extent)
		}
	}
	for _, c := range []struct {
		src    string
		offset int
		says   string
	}{
		{"line", 4, "an axis after \"line\""},
		{"line z", 5, "found 'z'"},
		{"plane x", 7, "2 different axes"},
		{"plane x x", 8, "2 different axes"},
		{"line x y", 7, "nothing after the axes"},
		{"(1 + x) line x", 0, "no powers of x"},
		{"(1 + q) line x", 5, "found 'q'"},
	} {
		_, _, err := ParsePart(c.src, 2, 2)
		var syntax *SyntaxError
		if !errors.As(err, &syntax) || syntax.Offset != c.offset || !strings.Contains(syntax.Message, c.says) {
			t.Errorf("%q: got %v, want offset %d, ...%s...", c.src, err, c.offset, c.says)
		}
	}
}

func FuzzParsePolynomial(f *testing.F) {
	for _, s := range []string{"1 + x^-1", "2*x y^{3} - w", "0", "line x", "(1 + y) line x", "x^", "−x", "\xff", "x^999999x^999999"} {
		f.Add(s, uint8(3), uint8(4))
	}
	f.Fuzz(func(t *testing.T, src string, q, axes uint8) {
		levels, n := 2+int(q)%15, 1+int(axes)%4
		p, _, err := ParsePart(src, levels, n)
		if err != nil {
			var syntax *SyntaxError
			if !errors.As(err, &syntax) || syntax.Offset < 0 || syntax.Offset > len(src) || syntax.Message == "" {
				t.Fatalf("%q: %#v", src, err)
			}
			return
		}
		for i, m := range p {
			if m.Coeff < 1 || m.Coeff >= levels || i > 0 && !p[i-1].Exp.Less(m.Exp) {
				t.Fatalf("%q is not canonical: %v", src, p)
			}
		}
		again, err := ParsePolynomial(p.String(), levels, n)
		if err != nil || again.String() != p.String() || len(again) != len(p) {
			t.Fatalf("%q prints as %q, which reads as %q, %v", src, p, again, err)
		}
	})
}
