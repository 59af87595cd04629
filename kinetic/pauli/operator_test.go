package pauli

import (
	"bytes"
	"testing"

	"sojourn/kinetic/lattice"
)

func poly(t testing.TB, q int, src ...string) []Polynomial {
	t.Helper()
	out := make([]Polynomial, len(src))
	for i, s := range src {
		var err error
		if out[i], err = ParsePolynomial(s, q, 4); err != nil {
			t.Fatal(err)
		}
	}
	return out
}

// The toric code on Z_q: star and plaquette commute with the signs of
// A. Yu. Kitaev, Ann. Phys. 303, 2 (2003), and for q > 2 not without.
func TestCommuteToricCode(t *testing.T) {
	for _, q := range []int{2, 3, 4, 5} {
		star := Operator{X: poly(t, q, "1 - x^-1", "1 - y^-1")}
		plaquette := Operator{Z: poly(t, q, "1 - y", "-1 + x")}
		if at, ok := Commute(star, plaquette, q); !ok {
			t.Errorf("q = %d: star and plaquette do not commute at %v", q, at)
		}
		if at, ok := Commute(plaquette, star, q); !ok {
			t.Errorf("q = %d: plaquette and star do not commute at %v", q, at)
		}
		unsigned := Operator{Z: poly(t, q, "1 + y", "1 + x")}
		if _, ok := Commute(star, unsigned, q); ok != (q == 2) {
			t.Errorf("q = %d: star commutes with the unsigned plaquette: %v", q, ok)
		}
		line := Operator{Z: poly(t, q, "1", "0"), Extent: [4]bool{true}}
		if at, ok := Commute(line, star, q); !ok {
			t.Errorf("q = %d: line and star do not commute at %v", q, at)
		}
		across := Operator{Z: poly(t, q, "1", "0"), Extent: [4]bool{false, true}}
		if _, ok := Commute(across, star, q); ok {
			t.Errorf("q = %d: a line across its edges commutes with the star", q)
		}
	}
}

func TestCommuteOffset(t *testing.T) {
	a := Operator{X: poly(t, 2, "1")}
	b := Operator{Z: poly(t, 2, "x^3 y^-1")}
	// b reaches the site of a when moved by (-3, 1).
	if at, ok := Commute(a, b, 2); ok || at != (lattice.Offset{-3, 1}) {
		t.Errorf("got %v, %v", at, ok)
	}
	y := Operator{X: poly(t, 2, "1"), Z: poly(t, 2, "1")}
	if at, ok := Commute(y, y, 2); !ok {
		t.Errorf("Y does not commute with Y at %v", at)
	}
}

func TestPolynomialArithmetic(t *testing.T) {
	p := poly(t, 3, "1 + 2x", "x^-1 - y", "1 + 2x + x^-1 + 2y", "x^-1 - y + 2 + x y", "1 + x", "x - y^-1")
	if got := p[0].Add(p[1], 3).String(); got != p[2].String() {
		t.Errorf("sum is %s, want %s", got, p[2])
	}
	if got := p[0].Mul(p[1], 3).String(); got != p[3].String() {
		t.Errorf("product is %s, want %s", got, p[3])
	}
	if got := p[1].Conj().String(); got != p[5].String() {
		t.Errorf("conjugate is %s, want %s", got, p[5])
	}
	// Freshman's dream: (1 + x)^3 = 1 + x^3 over Z_3.
	if got := p[4].Mul(p[4], 3).Mul(p[4], 3).String(); got != "1 + x^3" {
		t.Errorf("cube is %s", got)
	}
	if got := p[0].Scale(3, 3); len(got) != 0 {
		t.Errorf("3p = %s over Z_3", got)
	}
}

func TestNormalAndCanonical(t *testing.T) {
	a := Operator{X: poly(t, 2, "1 + x^-1", "1 + y^-1")}
	b := Operator{X: poly(t, 2, "1 + x", "x + x y^-1"), Z: poly(t, 2, "0", "0")}
	if bytes.Equal(a.AppendCanonical(nil), b.AppendCanonical(nil)) {
		t.Error("translates share a canonical form")
	}
	if !bytes.Equal(a.Normal().AppendCanonical(nil), b.Normal().AppendCanonical(nil)) {
		t.Error("translates differ in normal form")
	}
	c := Operator{Z: a.X}
	if bytes.Equal(a.AppendCanonical(nil), c.AppendCanonical(nil)) {
		t.Error("X and Z operators share a canonical form")
	}
	line := a
	line.Extent[2] = true
	if bytes.Equal(a.AppendCanonical(nil), line.AppendCanonical(nil)) {
		t.Error("the extent is missing from the canonical form")
	}
	if n := (Operator{}).Normal(); n.Extended() || len(n.Factors()) != 0 {
		t.Errorf("the empty operator became %v", n)
	}
}
