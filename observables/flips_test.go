package observables

import (
	"context"
	"math"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/models"
)

// A single spin in a heat bath flips at rate G(0) = 1/2: n sign changes in time T
// make a Poisson count, apart from pairs of flips within one step.
func TestFlipsOfOneSpin(t *testing.T) {
	l, err := lattice.New([]int{1}, nil)
	if err != nil {
		t.Fatal(err)
	}
	m, _ := models.Find("ising")
	h, err := m.Build(l, models.Values{"coupling": 1})
	if err != nil {
		t.Fatal(err)
	}
	g, err := kinetic.Compile(kinetic.Spec{
		Lattice: l, Levels: h.Levels, Sites: h.Sites, Families: h.Families, Tracked: h.Tracked, Beta: 0.3,
		Bath: []kinetic.BathOperator{{Name: "X", X: 1, Law: bath.Law{Kind: bath.HeatBath, Rate: 1}}},
	})
	if err != nil {
		t.Fatal(err)
	}
	obs, err := Bind(g, []Request{{Name: "magnetization", Kind: Magnetization}})
	if err != nil {
		t.Fatal(err)
	}
	e, err := kinetic.NewClasses(g, [32]byte{1}, 0, kinetic.StartRandom)
	if err != nil {
		t.Fatal(err)
	}
	const span, step = 20000.0, 0.02
	u, err := Record(context.Background(), e, g, obs, [][2]int{{0, 0}}, Plan{Settle: 0, Span: span, Step: step}, Label{}, nil)
	if err != nil {
		t.Fatal(err)
	}
	if len(u.Flips) != len(flipShares) {
		t.Fatalf("%d rows", len(u.Flips))
	}
	// Seen at samples, sign changes come with probability (1 - exp(-step))/2.
	want := span / step * (1 - math.Exp(-step)) / 2
	for _, r := range u.Flips {
		if math.Abs(float64(r.Flips)-want) > 4*math.Sqrt(want) || r.Time != span {
			t.Errorf("level %v: %d flips in %v, want %.0f(%.0f)", r.Level, r.Flips, r.Time, want, math.Sqrt(want))
		}
	}
}

// Excursions that do not reach the other level are no flips.
func TestFlipsNeedBothLevels(t *testing.T) {
	f := &flips{channels: []int{0}, layout: []int{0}, levels: []float64{8, 4, 2, 1}, side: make([]int8, 4), count: make([]int64, 4), lanes: 1}
	r := &reading{channels: 1, values: make([]float64, 1)}
	for _, v := range []float64{0, 3, 9, -1.5, 3, -3, 9, -5, -9, 0, 8, 9} {
		r.values[0] = v
		f.add(r)
	}
	for k, want := range []int64{2, 2, 4, 6} {
		if f.count[k] != want {
			t.Errorf("level %v: %d flips, want %d", f.levels[k], f.count[k], want)
		}
	}
}
