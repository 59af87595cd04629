package kinetictest

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The p-values of right comparisons must be uniform, and wrong ones found.
func TestComparisons(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	law := []float64{0.4, 0.3, 0.2, 0.06, 0.03, 0.01}
	draw := func(law []float64) int {
		u := r.Float64()
		for i, p := range law {
			if u -= p; u < 0 {
				return i
			}
		}
		return 0
	}
	const repeats, draws = 400, 300
	var square, waits, steps []float64
	for range repeats {
		counts := make([]int, len(law))
		d := newDrift(len(law))
		u := make([]float64, draws)
		for i := range u {
			counts[draw(law)]++
			u[i] = r.Float64()
			p := law
			if i%2 == 1 { // a law that changes from draw to draw
				p = []float64{0.1, 0.1, 0.1, 0.3, 0.2, 0.2}
			}
			d.outcome(draw(p), p)
		}
		p, _, _ := chiSquare(counts, law)
		square = append(square, p)
		p, _ = kolmogorov(u)
		waits = append(waits, p)
		p, _, _ = d.test()
		steps = append(steps, p)
	}
	for name, p := range map[string][]float64{"chi-square": square, "kolmogorov": waits, "drift": steps} {
		if q, note := kolmogorov(p); q < 1e-3 {
			t.Errorf("%s: p-values are not uniform: %s", name, note)
		}
	}

	wrong := []float64{0.34, 0.36, 0.2, 0.06, 0.03, 0.01}
	counts := make([]int, len(law))
	d := newDrift(len(law))
	u := make([]float64, 3000)
	for i := range u {
		k := draw(wrong)
		counts[k]++
		d.outcome(k, law)
		u[i] = math.Pow(r.Float64(), 1.2)
	}
	if p, _, _ := chiSquare(counts, law); p > 1e-6 {
		t.Errorf("a wrong law has the chi-square p-value %v", p)
	}
	if p, _, _ := d.test(); p > 1e-6 {
		t.Errorf("a wrong law has the drift p-value %v", p)
	}
	if p, _ := kolmogorov(u); p > 1e-4 {
		t.Errorf("wrong waits have the p-value %v", p)
	}
	if p, _, _ := chiSquare([]int{100, 1}, []float64{1, 0}); p != 0 {
		t.Error("an impossible outcome was accepted")
	}
}

func TestHolm(t *testing.T) {
	// Two small p-values among four: 1e-3/4 and 1e-3/3 are their limits.
	v := verdicts{}
	v.add("a", 0.5, "")
	v.add("b", 2e-4, "")
	v.add("c", 3e-4, "")
	v.add("d", 0.01, "")
	if got := v.rejected(); len(got) != 2 || got[0].name != "b" || got[1].name != "c" {
		t.Errorf("rejected %v", got)
	}
	v.add("not a number", math.NaN(), "")
	if got := v.rejected(); len(got) != 3 {
		t.Errorf("with a NaN, rejected %v", got)
	}
}
