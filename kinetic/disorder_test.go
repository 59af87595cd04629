package kinetic

import (
	"math"
	"slices"
	"testing"
)

// Normal couplings have the moments of the normal law: mean, variance, and
// fourth moment 3 (4 standard errors each), and tails as the error function
// says.
func TestNormalCouplings(t *testing.T) {
	const n = 200000
	j := NewDisorder(7, 3, []byte("bond")).Normal(n, 0.5, 2)
	var m1, m2, m4 float64
	far := 0
	for _, x := range j {
		z := (x - 0.5) / 2
		m1 += z / n
		m2 += z * z / n
		m4 += z * z * z * z / n
		if math.Abs(z) > 3 {
			far++
		}
	}
	for _, c := range []struct {
		what            string
		got, want, unit float64
	}{
		{"mean", m1, 0, 1},
		{"second moment", m2, 1, math.Sqrt(2)},
		{"fourth moment", m4, 3, math.Sqrt(96)}, // <z^8> - 9 = 96
		{"beyond three", float64(far) / n, math.Erfc(3 / math.Sqrt2), math.Sqrt(math.Erfc(3 / math.Sqrt2))},
	} {
		if math.Abs(c.got-c.want) > 4*c.unit/math.Sqrt(n) {
			t.Errorf("%s %.5f, want %.5f(%.5f)", c.what, c.got, c.want, c.unit/math.Sqrt(n))
		}
	}
	// They are decimals, so that energies are exact: |mean| + 9 sd < 100.
	for _, x := range j {
		if math.Round(x*1e7)/1e7 != x {
			t.Fatalf("coupling %v is not a multiple of 1e-7", x)
		}
	}
	if c := NewDisorder(1, 0, nil).Normal(3, 0, 0); !slices.Equal(c, []float64{0, 0, 0}) {
		t.Errorf("no mean and no spread give %v", c)
	}
}

func TestNormalByInversion(t *testing.T) {
	// The ends of the range, and the middle (from tables of the normal law:
	// P(|z| > 0.674490) = 1/2).
	if z := normal(0); math.IsInf(z, 0) || z > -8.1 || z < -9 {
		t.Errorf("the least number gives %v", z)
	}
	if z := normal(math.MaxUint64); math.Abs(z) > 1e-15 {
		t.Errorf("the largest number gives %v", z)
	}
	if z := normal(1<<63 | 1); math.Abs(z-0.6744897501960817) > 1e-12 {
		t.Errorf("one half gives %v", z)
	}
}

// Couplings depend on seed, sample, operator and cell only: on a larger lattice
// the first ones are the same.
func TestDisorderStreams(t *testing.T) {
	signs := NewDisorder(7, 3, []byte("bond")).Signs(100000, 0.3)
	n := 0
	for _, s := range signs {
		n += int(s)
	}
	if p, se := float64(n)/100000, math.Sqrt(0.21/100000); math.Abs(p-0.3) > 4*se {
		t.Errorf("a share of %.4f(%.4f) is turned round, want 0.3", p, se)
	}
	if !slices.Equal(NewDisorder(7, 3, []byte("bond")).Signs(64, 0.3), signs[:64]) {
		t.Error("a smaller lattice has other signs")
	}
	for what, d := range map[string]*Disorder{
		"seed": NewDisorder(8, 3, []byte("bond")), "sample": NewDisorder(7, 4, []byte("bond")), "operator": NewDisorder(7, 3, []byte("bonds")),
	} {
		if slices.Equal(d.Signs(64, 0.3), signs[:64]) {
			t.Errorf("another %s gives the same signs", what)
		}
	}
	if n := NewDisorder(1, 0, nil).Signs(1000, 0); slices.Max(n) != 0 {
		t.Error("a coupling is turned round with probability 0")
	}
	if n := NewDisorder(1, 0, nil).Signs(1000, 1); slices.Min(n) != 1 {
		t.Error("a coupling is not turned round with probability 1")
	}
}
