package observables

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

// At beta = 0 a Potts spin goes to each other level at G(0) = 1: w^s decays as
// exp(-q t), of any weight; on a bond two spins act (elementary). A bond is
// satisfied with probability 1/q, and [s = 0] - 1/q is a sum of the powers of
// w^s, which all decay alike.
func TestIndependentLevels(t *testing.T) {
	const step = 0.1
	for _, q := range []int{3, 4} {
		law := bath.Law{Kind: bath.Metropolis, Rate: 1}
		g := compile(t, kinetictest.Potts(q, kinetictest.Lattice(5, 4), 0, law))
		obs, err := Bind(g, []Request{
			{Name: "magnetization", Kind: Magnetization},
			{Name: "terms", Kind: Terms, Family: "spin"},
			{Name: "local", Kind: Local, Family: "spin"},
			{Name: "fourier", Kind: Fourier, Family: "spin", Wavevector: lattice.Offset{1, 2}},
		})
		if err != nil {
			t.Fatal(err)
		}
		p := pool(t, g, obs, Plan{Span: 150, Step: step}, 24, 1)
		rate := float64(q)
		p.check(t, "magnetization", 20, rate, step, 3/rate)
		p.check(t, "terms", 20, rate, step, 3/rate)
		p.check(t, "local", 1, rate, step, 3/rate)
		p.check(t, "fourier", 20, rate, step, 3/rate)
	}
}

// A loop of the toric code over Z_q takes c = 1 or q - 1 steps by each jump of X
// or X^-1 on its n sites: at beta = 0 it decays at 2 n G(0) (1 - cos(2 pi/q)).
func TestLoopOfLevels(t *testing.T) {
	const q, n, step = 5, 3, 0.05
	spec := kinetic.Spec{
		Lattice: kinetictest.Lattice(n, 4), Levels: q, Sites: 2,
		Families: []kinetic.FamilySpec{
			{Name: "plaquette", Coupling: 1, Shape: kinetic.ClockShape(q), Operator: kinetictest.Operator(q, 2, nil, []string{"1 - y", "-1 + x"})},
		},
		Tracked: []kinetic.TrackedSpec{{Name: "loop", Operator: kinetictest.Operator(q, 2, nil, []string{"line x", "0"})}},
		Bath:    kinetic.BathOperator{Name: "X", X: 1, Law: bath.Law{Kind: bath.Metropolis, Rate: 1}}.Powers(nil, q),
	}
	g := compile(t, spec)
	obs, err := Bind(g, []Request{{Name: "loop", Kind: Operator, Tracked: "loop"}})
	if err != nil {
		t.Fatal(err)
	}
	p := pool(t, g, obs, Plan{Span: 150, Step: step}, 24, 1)
	rate := 2 * n * (1 - math.Cos(2*math.Pi/q))
	p.check(t, "loop", 1, rate, step, 3/rate)
}

// The covariance of Potts spins on the ring, by its transfer matrix (textbook):
// (a^r + a^(N-r) + (q - 2) a^N)/(1 + (q - 1) a^N), a = (e^b - 1)/(e^b + q - 1).
func TestCovarianceOfPottsRing(t *testing.T) {
	const q, n, beta = 3, 12, 1.0
	g := compile(t, kinetictest.Potts(q, kinetictest.Lattice(n), beta, kinetictest.HeatBath))
	units := make([]*averages, 7)
	for r := range units {
		units[r] = newAverages(1)
	}
	for unit := range 24 {
		u := record(t, newBundle(t, g, 1, byte(unit)), g, nil, Plan{Settle: 30, Span: 3000, Step: 1, Covariance: "spin", Every: 1, Limit: 1})
		for _, row := range u.Covariance {
			if row.Axis == 0 {
				units[row.Displacement[0]].add(0, row.SumFG/float64(row.Pairs))
			}
		}
	}
	a := (math.Exp(beta) - 1) / (math.Exp(beta) + q - 1)
	for r := 1; r < len(units); r++ {
		want := (math.Pow(a, float64(r)) + math.Pow(a, float64(n-r)) + (q-2)*math.Pow(a, n)) / (1 + (q-1)*math.Pow(a, n))
		units[r].check(t, fmt.Sprint("covariance at distance ", r), 0, want, 4)
	}
}

// Tracked operators whose mean can be complex are refused, unless a symmetry
// makes it vanish.
func TestComplexMeans(t *testing.T) {
	chiral := kinetictest.Potts(3, kinetictest.Lattice(4, 4), 0.5, kinetictest.HeatBath)
	for i := range chiral.Families {
		chiral.Families[i].Shape = []float64{1, 0.5, 0}
	}
	field := chiral
	field.Families = append(slices.Clone(chiral.Families), kinetic.FamilySpec{
		Name: "field", Coupling: 1, Shape: []float64{1, 0, 0}, Operator: kinetictest.Operator(3, 2, nil, []string{"1"}),
	})
	for _, c := range []struct {
		name  string
		spec  kinetic.Spec
		wrong bool
	}{{"chiral bonds", chiral, false}, {"chiral bonds in a field", field, true}} {
		g := compile(t, c.spec)
		for _, r := range []Request{{Name: "m", Kind: Magnetization}, {Name: "l", Kind: Local, Family: "spin"}} {
			_, err := Bind(g, []Request{r})
			if c.wrong != (err != nil) || err != nil && !strings.Contains(err.Error(), "can be complex") {
				t.Errorf("%s, %s: %v", c.name, r.Kind, err)
			}
		}
		err := Plan{Span: 1, Step: 1, Covariance: "spin", Every: 1}.Check(g)
		if c.wrong != (err != nil) {
			t.Errorf("%s: covariance: %v", c.name, err)
		}
		if _, err := Bind(g, []Request{{Name: "t", Kind: Terms, Family: "bond"}}); err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
	}
}
