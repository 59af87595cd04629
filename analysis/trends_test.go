package analysis

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

// study makes results whose tau_int follows f with a relative error.
func study(lengths []int, beta []float64, f func(l, b float64) float64, relative float64, seed uint64) []Result {
	rng := rand.New(rand.NewPCG(seed, 5))
	var out []Result
	for _, b := range beta {
		for _, l := range lengths {
			y := f(float64(l), b)
			v := y * math.Exp(relative*rng.NormFloat64())
			out = append(out, Result{
				Beta: b, Size: []int{l, l}, Open: []bool{false, false},
				Observables: []ObservableResult{{Name: "m", Integrated: logarithmic(math.Log(v), relative, 16)}},
			})
		}
	}
	return out
}

func trendOf(t *testing.T, c Comparison, against string) Trend {
	t.Helper()
	for _, x := range c.Trends {
		if x.Against == against && x.Quantity == "tau_int" {
			return x
		}
	}
	t.Fatalf("no trend against %s", against)
	return Trend{}
}

func parameter(t *testing.T, x Trend, model, name string) Parameter {
	t.Helper()
	for _, m := range x.Models {
		for _, p := range m.Parameters {
			if m.Name == model && p.Name == name {
				return p
			}
		}
	}
	t.Fatalf("no parameter %s of %s in %+v", name, model, x.Models)
	return Parameter{}
}

func TestTrendInLength(t *testing.T) {
	lengths := []int{8, 12, 16, 24, 32, 48}
	for _, test := range []struct {
		name, regime string
		f            func(l, b float64) float64
	}{
		{"constant", "flat", func(l, _ float64) float64 { return 7 }},
		{"power", "power", func(l, _ float64) float64 { return 0.3 * math.Pow(l, 2.1665) }},
		{"exponential", "exponentially", func(l, _ float64) float64 { return 2 * math.Exp(l/6) }},
		{"exponential of L^2", "exponentially", func(l, _ float64) float64 { return 2 * math.Exp(l*l/400) }},
		{"logarithm", "logarithm", func(l, _ float64) float64 { return 1 + 2*math.Log(l) }},
		{"power, then saturation", "saturates", func(l, _ float64) float64 { return 50 / (1 + math.Pow(14/l, 3)) }},
	} {
		x := trendOf(t, Compare(study(lengths, []float64{0.4}, test.f, 0.01, 1)), "length")
		if x.Models[0].Name != test.name || !strings.Contains(x.Regime, test.regime) {
			t.Errorf("%s: best %s (weight %.2f), %q", test.name, x.Models[0].Name, x.Models[0].Weight, x.Regime)
		}
		sum := 0.0
		for _, m := range x.Models {
			sum += m.Weight
		}
		if math.Abs(sum-1) > 1e-12 || len(x.Warnings) > 0 {
			t.Errorf("%s: weights add up to %g, warnings %v", test.name, sum, x.Warnings)
		}
	}
	z := parameter(t, trendOf(t, Compare(study(lengths, []float64{0.4}, func(l, _ float64) float64 { return math.Pow(l, 2.1665) }, 0.01, 2)), "length"), "power", "z")
	if math.Abs(z.Value-2.1665) > 4*z.Err || z.Err > 0.02 {
		t.Errorf("z = %.4f(%.4f)", z.Value, z.Err)
	}
	// Noisy data must not decide, and must not be called flat.
	x := trendOf(t, Compare(study(lengths, []float64{0.4}, func(l, _ float64) float64 { return math.Pow(l, 0.3) }, 0.3, 3)), "length")
	if !strings.Contains(x.Regime, "do not decide") {
		t.Errorf("noisy: %q", x.Regime)
	}
	// A time that falls towards that of a large lattice, like that of the energy
	// on short rings, does not grow.
	x = trendOf(t, Compare(study(lengths, []float64{0.4}, func(l, _ float64) float64 { return 1 + 20/(l*l) }, 0.01, 5)), "length")
	if !strings.Contains(x.Regime, "does not grow") {
		t.Errorf("falling: %q", x.Regime)
	}
	// Something that no form describes is said.
	x = trendOf(t, Compare(study(lengths, []float64{0.4}, func(l, _ float64) float64 { return 5 + 3*math.Sin(l) }, 0.005, 4)), "length")
	if len(x.Warnings) != 1 || x.Warnings[0].Code != codePoorFit {
		t.Errorf("no form: %v", x.Warnings)
	}
}

func TestTrendInBeta(t *testing.T) {
	beta := []float64{1, 1.2, 1.5, 1.8, 2.2}
	for _, test := range []struct {
		name, regime string
		f            func(l, b float64) float64
	}{
		{"Arrhenius", "activation energy", func(_, b float64) float64 { return math.Exp(4 * b) }},
		{"super-Arrhenius", "faster than Arrhenius", func(_, b float64) float64 { return math.Exp(b + b*b) }},
		{"constant", "same", func(_, b float64) float64 { return 3 }},
	} {
		x := trendOf(t, Compare(study([]int{8}, beta, test.f, 0.01, 1)), "beta")
		if x.Models[0].Name != test.name {
			t.Errorf("%s: best %s, %q", test.name, x.Models[0].Name, x.Regime)
		}
	}
	x := trendOf(t, Compare(study([]int{8}, beta, func(_, b float64) float64 { return math.Exp(4 * b) }, 0.01, 7)), "beta")
	if d := parameter(t, x, "Arrhenius", "D"); math.Abs(d.Value-4) > 4*d.Err {
		t.Errorf("activation energy %g(%g), want 4", d.Value, d.Err)
	}
}

// Points that are not equilibrated, of another group or another shape stay out
// of each other's trends.
func TestTrendsApart(t *testing.T) {
	r := study([]int{8, 16, 32}, []float64{0.4}, func(l, _ float64) float64 { return l * l }, 0.01, 1)
	spoiled := append([]Result(nil), r...)
	spoiled[1].Tests = []Test{{Kind: "drift", OK: true, P: 1e-9}}
	if c := Compare(spoiled); len(c.Trends) != 0 {
		t.Errorf("a point that drifts took part: %+v", c.Trends)
	}
	spoiled = append([]Result(nil), r...)
	spoiled[1].Tests, spoiled[1].Group = nil, "hamiltonian.field 0.1"
	if c := Compare(spoiled); len(c.Trends) != 0 {
		t.Error("a point of another group took part")
	}
	spoiled = append([]Result(nil), r...)
	spoiled[2].Group, spoiled[2].Size = "", []int{32, 16}
	if c := Compare(spoiled); len(c.Trends) != 0 {
		t.Error("a lattice of another shape took part")
	}
}

func TestTrendInXi(t *testing.T) {
	r := study([]int{64}, []float64{0.3, 0.35, 0.38, 0.4}, func(_, b float64) float64 { return math.Pow(1/(0.44-b), 2) }, 0.01, 6)
	for i := range r {
		r[i].Decay = []Decay{{Of: "spin", Xi: logarithmic(-math.Log(0.44-r[i].Beta), 0.001, 16)}}
	}
	x := trendOf(t, Compare(r), "xi")
	if z := parameter(t, x, "power", "z"); math.Abs(z.Value-2) > 4*z.Err || !strings.Contains(x.Regime, "necessary, not sufficient") {
		t.Errorf("z = %g(%g), %q", z.Value, z.Err, x.Regime)
	}
}
