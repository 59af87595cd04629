package kinetic_test

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/kinetictest"
)

// On lattices beyond enumeration lanes and the class engine agree in the mean and
// the variance of the energy and in the mean square of every sum at times after a
// random start, whose law is the same: no equilibrium is assumed. Errors of
// lanes come from bundles. With other seeds one comparison in 30000 would be
// beyond 4.5 standard errors (and the t distribution of 40 bundles has somewhat
// more in its tails).
func TestLanesAgreeWithClasses(t *testing.T) {
	specs := map[string]kinetic.Spec{
		"ising-8x9":    kinetictest.Ising(kinetictest.Lattice(8, 9), 0.4, kinetictest.HeatBath),
		"ising-4x5x3":  kinetictest.Ising(kinetictest.Lattice(4, 5, 3), 0.25, bath.Law{Kind: bath.Metropolis, Rate: 1}),
		"toric-5x4":    kinetictest.ToricCode(kinetictest.Lattice(5, 4), 0.5, "XYZ", kinetictest.HeatBath, "zx"),
		"ising-ring-9": kinetictest.Ising(kinetictest.Lattice(9), 0.7, bath.Law{Kind: bath.Symmetric, Rate: 1}),
	}
	for seed := range 6 {
		specs[fmt.Sprint("random-", seed)] = kinetictest.RandomSpec(uint64(2000+seed), kinetictest.Larger)
	}
	for name, spec := range specs {
		g, err := kinetic.Compile(spec)
		if err != nil {
			t.Fatal(err)
		}
		const bundles, singles = 40, 400
		one, all := newTrace(g), newTrace(g)
		for unit := range singles {
			e, err := kinetic.NewClasses(g, [32]byte{8}, unit, kinetic.StartRandom)
			if err != nil {
				t.Fatal(err)
			}
			one.follow(e)
		}
		for unit := range bundles {
			e, err := kinetic.NewLanes(g, [32]byte{8}, unit, kinetic.StartRandom)
			var limit *kinetic.LaneLimit
			if errors.As(err, &limit) {
				t.Logf("%s: %v", name, err)
				break
			}
			if err != nil {
				t.Fatal(err)
			}
			all.follow(e)
		}
		if len(all.units) == 0 {
			continue
		}
		for i := range one.units[0] {
			column := func(tr *trace) (x []float64) {
				for _, u := range tr.units {
					x = append(x, u[i])
				}
				return x
			}
			a, sa := meanError(column(one))
			b, sb := meanError(column(all))
			if d := math.Hypot(sa, sb); math.Abs(a-b) > 4.5*d+1e-9 {
				t.Errorf("%s, quantity %d: %.5g(%.2g) with lanes, %.5g(%.2g) with classes, %.1f standard errors", name, i, b, sb, a, sa, (b-a)/d)
			}
		}
	}
}

// trace holds for each unit the means over its lanes, at some times, of E, E^2
// and the squares of all sums.
type trace struct {
	g     *kinetic.Generator
	units [][]float64
}

func newTrace(g *kinetic.Generator) *trace { return &trace{g: g} }

func (tr *trace) follow(e kinetic.Engine) {
	var out []float64
	fast := tr.g.MaxRate()
	for _, time := range []float64{0.3, 2, 8} {
		e.Advance(time / fast)
		sums := e.Sums(nil)
		width := len(sums) / e.Lanes()
		q := make([]float64, 2+width)
		for lane := range e.Lanes() {
			energy := e.Energy(lane)
			q[0] += energy / float64(e.Lanes())
			q[1] += energy * energy / float64(e.Lanes())
			for i, s := range sums[lane*width:][:width] {
				q[2+i] += float64(s*s) / float64(e.Lanes())
			}
		}
		out = append(out, q...)
	}
	tr.units = append(tr.units, out)
}
