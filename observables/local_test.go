package observables

import (
	"math"
	"testing"

	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

// A large lattice is read on an even grid of at most MaxLocal cells, all
// different; one with edges on the middle layer.
func TestSublattice(t *testing.T) {
	for _, c := range []struct {
		l     lattice.Lattice
		least int
	}{
		{kinetictest.Lattice(5000), 4096},
		{kinetictest.Lattice(100, 90), 64 * 63},
		{kinetictest.Lattice(4000, 2), 4000},
		{kinetictest.Lattice(20, 21, 22), 15 * 15 * 15},
		{opened(kinetictest.Lattice(101, 90), 0), 90},
		{opened(kinetictest.Lattice(101, 90), 0, 1), 1},
	} {
		g := compile(t, kinetictest.Ising(c.l, 0.3, kinetictest.HeatBath))
		chosen := sublattice(g, []int{g.Lattice.Axes}, MaxLocal) // the spins
		if len(chosen) < c.least || len(chosen) > MaxLocal {
			t.Errorf("%v: %d cells, want at least %d", c.l.Lengths(), len(chosen), c.least)
		}
		seen := make(map[int]bool)
		for _, term := range chosen {
			seen[term.cell] = true
			for a, x := range g.Lattice.Coord(term.cell) {
				if g.Lattice.Open[a] && x != (g.Lattice.Size[a]-1)/2 {
					t.Fatalf("%v: cell %v is not in the middle", c.l.Lengths(), g.Lattice.Coord(term.cell))
				}
			}
		}
		if len(seen) != len(chosen) {
			t.Errorf("%v: %d different cells of %d", c.l.Lengths(), len(seen), len(chosen))
		}
	}
}

// On a lattice with more terms than are read, the bits are those of the chosen
// cells, and the Dirichlet form is the mean over all terms.
func TestLocalOnLargeLattice(t *testing.T) {
	g := compile(t, kinetictest.Ising(kinetictest.Lattice(90, 85), 0.3, kinetictest.HeatBath))
	obs, err := Bind(g, []Request{{Name: "bond", Kind: Local, Family: "bond-y"}})
	if err != nil {
		t.Fatal(err)
	}
	u := record(t, newBundle(t, g, 1, 6), g, obs, Plan{Settle: 1, Span: 1, Step: 1})
	e := newBundle(t, g, 1, 6)
	e.Advance(1)
	levels := levelsOf(g, e, 0)
	chosen := sublattice(g, obs[0].Families, MaxLocal)
	want := 0.0
	for _, c := range chosen {
		want += 1 - 2*float64(levels[1][c.cell])
	}
	if got := u.Autocorrelation[0].SumF; !near(got, want/float64(len(chosen)), 1) {
		t.Errorf("mean of %d terms is %v, want %v", len(chosen), got, want/float64(len(chosen)))
	}

	// A flip of spin i, at the heat-bath rate, turns over two bonds along y.
	form, spins := 0.0, levels[2]
	for c := range spins {
		field := 0.0
		for _, d := range []lattice.Offset{{1}, {-1}, {0, 1}, {0, -1}} {
			to, _ := g.Lattice.Wrap(g.Lattice.Coord(c), d)
			field += 1 - 2*float64(spins[g.Lattice.Index(to)])
		}
		gain := -2 * (1 - 2*float64(spins[c])) * field
		form += 0.5 / (1 + math.Exp(-g.Spec.Beta*gain)) * 2 * 4 / float64(len(spins))
	}
	if got := u.Dirichlet[0].Sum; !near(got, form, 1) {
		t.Errorf("E is %v, want %v", got, form)
	}
}
