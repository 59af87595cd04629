package kinetic

import (
	"math"
	"testing"
)

// The columns give back the weights, also where rounding or zeros make them
// awkward, and nothing without weight is ever drawn.
func TestAliasesGiveBackWeights(t *testing.T) {
	src := newSource([32]byte{3}, 0, "test")
	for round := range 2000 {
		weights := make([]float64, 1+round%40)
		positive := false
		for k := range weights {
			if u := src.next(); u&3 != 0 {
				weights[k] = math.Exp(40 * (uniform(u) - 0.5))
				positive = true
			}
		}
		if !positive {
			continue
		}
		var d aliases
		d.set(weights)
		got := make([]float64, len(weights))
		for k, c := range d.column {
			keep := float64(c.cut) / 0x1p64
			got[k] += keep
			got[c.alias] += 1 - keep
		}
		for k, w := range weights {
			p := got[k] / float64(len(weights))
			if math.Abs(p-w/d.sum) > 1e-12 || (w == 0 && d.column[k].cut != 0) {
				t.Fatalf("round %d: index %d of %v has probability %v, want %v", round, k, weights, p, w/d.sum)
			}
		}
		for range 100 {
			if k := d.draw(src.next()); weights[k] == 0 {
				t.Fatalf("round %d: drew index %d without weight of %v", round, k, weights)
			}
		}
	}
}

func TestExponentialMoments(t *testing.T) {
	const n = 4_000_000
	src := newSource([32]byte{4}, 0, "test")
	var m1, m2, m3, beyond float64
	for range n {
		x := src.exponential()
		m1 += x
		m2 += x * x
		m3 += x * x * x
		if x > 9 { // beyond the edge of the base layer, at 7.7
			beyond++
		}
	}
	// Moments k! with variances (2k)! - k!^2; four standard errors.
	for k, c := range []struct{ got, want, variance float64 }{
		{m1, 1, 1}, {m2, 2, 24 - 4}, {m3, 6, 720 - 36}, {beyond, math.Exp(-9), math.Exp(-9)},
	} {
		if se := math.Sqrt(c.variance / n); math.Abs(c.got/n-c.want) > 4*se {
			t.Errorf("moment %d is %v(%v), want %v", k+1, c.got/n, se, c.want)
		}
	}
}

// Wide tags give the same trajectory as narrow ones.
func TestWideTags(t *testing.T) {
	g := compiled(t, isingSpec(t, 0.4, false, 12, 9))
	start := func() (*state, source) {
		src := newSource([32]byte{5}, 0, "start")
		s, err := newState(g, StartRandom, &src)
		if err != nil {
			t.Fatal(err)
		}
		return s, src
	}
	s, src := start()
	narrow := newClasses[uint32](g, s, src)
	s, src = start()
	wide := newClasses[uint64](g, s, src)
	for i := range 200 {
		narrow.Advance(float64(i))
		wide.Advance(float64(i))
		if narrow.Jumps() != wide.Jumps() || narrow.next != wide.next || narrow.Sums(nil)[2] != wide.Sums(nil)[2] {
			t.Fatalf("time %d: %d jumps and %v with narrow tags, %d and %v with wide", i, narrow.Jumps(), narrow.Sums(nil), wide.Jumps(), wide.Sums(nil))
		}
	}
	if err := wide.Audit(); err != nil {
		t.Error(err)
	}
}
