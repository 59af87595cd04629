package kinetic

import (
	"errors"
	"math"
	"strings"
	"testing"

	"sojourn/kinetic/bath"
)

// A generator without tables knows the same rates as one with them.
func TestWideFacts(t *testing.T) {
	for _, s := range []Spec{
		pottsSpec(t, 3, 0.7, 4, 3), pottsSpec(t, 5, 0.7, 7), pottsSpec(t, 4, 0.7, 1, 2),
	} {
		s.Bath[0].Law = bath.Law{Kind: bath.Power, Rate: 2, Exponent: 3}
		s.Bath[len(s.Bath)-1].Law = s.Bath[0].Law
		g := compiled(t, s)
		w, err := CompileWide(s)
		if err != nil {
			t.Fatal(err)
		}
		if g.Wide != nil || w.Wide == nil {
			t.Fatal("tables where there should be none, or none where there should be")
		}
		a, b := g.MaxRates(), w.MaxRates()
		for i := range a {
			if a[i] != b[i] {
				t.Errorf("largest rates %v and %v", a, b)
			}
		}
		if x, y := g.Frozen(), w.Frozen(); len(x) != len(y) || len(x) == 0 || float64(x[0].Frozen)/float64(x[0].Possible) != float64(y[0].Frozen)/float64(y[0].Possible) {
			t.Errorf("frozen jumps %v and %v", x, y)
		}
		for i := range g.Shapes {
			for m := range g.Shapes[i].Rate {
				for p, r := range g.Shapes[i].Rate[m] {
					if g.Shapes[i].possible(g, p) && w.Wide.Rate(i, m, uint64(p)) != r {
						t.Fatalf("shape %d, move %d, pattern %b: rate %v, want %v", i, m, p, w.Wide.Rate(i, m, uint64(p)), r)
					}
				}
			}
		}
	}
}

// Engines that need tables say so; too many digits and terms are refused.
func TestWideLimits(t *testing.T) {
	s := pottsSpec(t, 16, 1, 4, 4)
	g := compiled(t, s)
	if g.Wide == nil || g.Bits != 20 {
		t.Fatalf("%d bits", g.Bits)
	}
	for _, name := range []string{ClassEngine, TileEngine, LaneEngine} {
		_, err := NewEngine(name, g, [32]byte{}, 0, StartRandom)
		if err == nil || CheckEngine(name, g) == nil {
			t.Errorf("%s runs wide patterns", name)
		}
	}
	if _, err := NewEngine(ClassEngine, g, [32]byte{}, 0, StartRandom); !errors.Is(err, errWidePatterns) {
		t.Error(err)
	}
	if name, _, err := Choose(g, AutoEngine, Use{}); err != nil || name != CompositionEngine {
		t.Errorf("%s, %v", name, err)
	}
	for i := range s.Families {
		s.Families[i].Shape = ClockShape(16)
	}
	s.Families[0].Coupling = 0.12345678901
	if _, err := Compile(s); err == nil || !strings.Contains(err.Error(), "more digits") {
		t.Errorf("energies of 26 digits: %v", err)
	}
	rates := map[int64]float64{0: 0.5, math.MaxInt64: 2, -7: 0}
	l := newRateList(rates)
	for w, r := range rates {
		if l.at(w) != r {
			t.Errorf("rate at %d: %v", w, l.at(w))
		}
	}
}
