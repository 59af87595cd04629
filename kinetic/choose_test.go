package kinetic

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
	"time"

	"sojourn/kinetic/bath"
)

// An attempt is accepted by a share of lanes; what they share is measured as the
// ratio of the variance of a bundle's mean of s(0) s(t), at the relaxation time,
// to that of 64 independent lanes. At infinite temperature and a clock of twice
// the rate the formula is exact.
func TestSharedEffect(t *testing.T) {
	if got := sharedEffect(1); math.Abs(got-64) > 1e-12 {
		t.Errorf("lanes that always accept are one trajectory, not 64/%v", got)
	}
	if got := sharedEffect(0); got != 1 {
		t.Errorf("lanes that hardly ever accept are independent, not %v", got)
	}
	// Given the attempts that they share, lanes have mean (1-2a)^n: summed over
	// the Poisson distribution of n.
	for _, a := range []float64{0.1, 0.35, 0.5, 0.72} {
		mean, square := 0.0, 0.0
		m := 1 / (2 * a)
		p := math.Exp(-m)
		for n := range 200 {
			c := math.Pow(1-2*a, float64(n))
			mean += p * c
			square += p * c * c
			p *= m / float64(n+1)
		}
		want := 1 + 63*(square-mean*mean)/(1-mean*mean)
		if got := sharedEffect(a); math.Abs(got-want) > 1e-9*want {
			t.Errorf("acceptance %v: effect %v, want %v", a, got, want)
		}
	}
}

func TestChoose(t *testing.T) {
	cold := isingSpec(t, 1.2, false, 64, 64)
	disorder := isingSpec(t, 0.5, false, 8, 8)
	disorder.Families[0].Couplings = slices.Repeat([]float64{1, 0.7}, 32)
	potts := Spec{
		Lattice: testLattice(t, false, 8), Levels: 3, Sites: 1, Beta: 0.5,
		Bath: []BathOperator{
			{Name: "X", X: 1, Law: bath.Law{Kind: bath.HeatBath, Rate: 1}},
			{Name: "XX", X: 2, Law: bath.Law{Kind: bath.HeatBath, Rate: 1}},
		},
	}
	for _, c := range []struct {
		name string
		spec Spec
		use  Use
		want string
	}{
		{"hot", isingSpec(t, 0.3, false, 64, 64), Use{}, LaneEngine},
		{"hot, terms one by one", isingSpec(t, 0.1, false, 64, 64), Use{OneByOne: true}, LaneEngine},
		{"critical", isingSpec(t, 0.4406868, false, 256, 256), Use{Step: 0.25}, LaneEngine},
		{"cold", cold, Use{}, ClassEngine},
		{"cold and large", isingSpec(t, 1.0, false, 4096, 4096), Use{}, TileEngine},
		{"couplings that vary", disorder, Use{}, CompositionEngine},
		{"three levels", potts, Use{}, ClassEngine},
		{"codes", toricSpec(t, 0.8, 16, "X", "Y", "Z"), Use{OneByOne: true}, LaneEngine},
	} {
		g := compiled(t, c.spec)
		engine, why, err := Choose(g, AutoEngine, c.use)
		if engine != c.want || err != nil || why == "" {
			t.Errorf("%s: %q because %q (%v), want %q", c.name, engine, why, err, c.want)
		}
		again, whyAgain, _ := Choose(compiled(t, c.spec), AutoEngine, c.use)
		if again != engine || whyAgain != why {
			t.Errorf("%s: another time %q because %q", c.name, again, whyAgain)
		}
	}
	g := compiled(t, disorder)
	if _, _, err := Choose(g, LaneEngine, Use{}); err == nil {
		t.Error("lanes were given couplings that vary")
	}
	if engine, why, err := Choose(compiled(t, cold), TileEngine, Use{}); engine != TileEngine || why != "as asked for" || err != nil {
		t.Errorf("tiles were asked for: %q, %q, %v", engine, why, err)
	}
	if _, _, err := Choose(g, "abacus", Use{}); err == nil || !strings.Contains(err.Error(), "abacus") {
		t.Errorf("an engine that does not exist: %v", err)
	}
}

// The pilot's activity on a lattice cut down is that of the whole.
func TestPilot(t *testing.T) {
	for _, s := range []Spec{
		isingSpec(t, 0.3, false, 150, 150), toricSpec(t, 0.9, 60, "X", "Y", "Z"), isingSpec(t, 0.15, true, 20, 30, 40),
	} {
		g := compiled(t, s)
		e, err := NewLanes(g, [32]byte{1}, 0, StartReference)
		if err != nil {
			t.Fatal(err)
		}
		e.Advance(15)
		before := e.Jumps()
		e.Advance(20)
		want := float64(e.Jumps()-before) / 64 / 5 / float64(g.Addresses())
		if got := pilot(g); math.Abs(got-want) > 0.03*want {
			t.Errorf("activity %v, on the whole lattice %v", got, want)
		}
	}
}

// gridCases are models, sizes and temperatures on which engines compete.
func gridCases(b *testing.B) (names []string, specs []Spec) {
	add := func(name string, s Spec) { names, specs = append(names, name), append(specs, s) }
	for _, l := range []int{16, 64, 256, 1024} {
		for _, beta := range []float64{0.1, 0.3, 0.4406868, 0.6, 0.8, 1.0} {
			add(fmt.Sprintf("ising-%dx%d/%.2f", l, l, beta), isingSpec(b, beta, false, l, l))
		}
	}
	add("ising-4096x4096/0.5", isingSpec(b, 0.5, false, 4096, 4096))
	add("ising-4096x4096/0.9", isingSpec(b, 0.9, false, 4096, 4096))
	add("ising-ring-4096/1", isingSpec(b, 1, false, 4096))
	add("ising-ring-4096/3", isingSpec(b, 3, false, 4096))
	for _, beta := range []float64{0.2, 0.3, 0.5} {
		add(fmt.Sprintf("ising-40x40x40/%.1f", beta), isingSpec(b, beta, false, 40, 40, 40))
	}
	for _, beta := range []float64{0.8, 1.6, 2.4} {
		add(fmt.Sprintf("toric-180x180-X/%.1f", beta), toricSpec(b, beta, 180, "X"))
		add(fmt.Sprintf("toric-180x180-XYZ/%.1f", beta), toricSpec(b, beta, 180, "X", "Y", "Z"))
	}
	return names, specs
}

// BenchmarkEngines measures what a jump of one trajectory costs with each engine
// that can run a case (lanes divided by 64 and multiplied by their design
// effect), and how much more the engine that Choose takes costs than the best.
// Slices of a tenth of a millisecond or so are timed, and the fastest twentieth
// counts, so that other work on the machine does not.
func BenchmarkEngines(b *testing.B) {
	engines := []struct {
		name string
		make func(*Generator, [32]byte, int, Start) (Engine, error)
	}{{ClassEngine, NewClasses}, {LaneEngine, NewLanes}, {TileEngine, NewTiles}}
	names, specs := gridCases(b)
	for i, name := range names {
		b.Run(name, func(b *testing.B) {
			g := compiled(b, specs[i])
			chosen, _, err := Choose(g, AutoEngine, Use{})
			if err != nil {
				b.Fatal(err)
			}
			estimates := map[string]Estimate{}
			for _, e := range Estimates(g, Use{}) {
				estimates[e.Engine] = e
			}
			cost := map[string]float64{}
			for b.Loop() {
				for _, engine := range engines {
					e, err := engine.make(g, [32]byte{1}, 0, StartReference)
					if err != nil {
						continue
					}
					est := estimates[engine.name]
					c := timePerUnit(e, 1e5/est.PerTime) * est.Effect / float64(est.Lanes)
					if old, ok := cost[engine.name]; !ok || c < old {
						cost[engine.name] = c
					}
				}
			}
			best := math.Inf(1)
			activity := pilot(g) * float64(g.Addresses())
			for _, engine := range engines {
				c, ok := cost[engine.name]
				if !ok {
					continue
				}
				best = math.Min(best, c)
				b.ReportMetric(c/activity, engine.name+"-ns/jump")
				b.ReportMetric(estimates[engine.name].Cost()/c, engine.name+"-model/measured")
			}
			b.ReportMetric(cost[chosen]/best, "chosen/best")
			b.ReportMetric(0, "ns/op")
		})
	}
}

// timePerUnit returns nanoseconds per unit of time.
func timePerUnit(e Engine, slice float64) float64 {
	// The lattice has to be as full of jumps as it will be, but large ones need
	// not be in equilibrium throughout.
	for end := time.Now().Add(300 * time.Millisecond); e.Time() < 10 && time.Now().Before(end); {
		e.Advance(e.Time() + slice)
	}
	times := make([]float64, 300)
	for k := range times {
		begin := time.Now()
		e.Advance(e.Time() + slice)
		times[k] = float64(time.Since(begin).Nanoseconds())
	}
	slices.Sort(times)
	return times[len(times)/20] / slice
}
