package models

import (
	"math"
	"testing"

	"sojourn/kinetic"
)

// TestMeanTerm runs models whose terms are independent, up to relations that
// tie all of them together, and compares the mean of a term with the exact one.
func TestMeanTerm(t *testing.T) {
	const beta = 0.7
	th := math.Tanh(beta)
	parity := func(n int) float64 { return (th + math.Pow(th, float64(n-1))) / (1 + math.Pow(th, float64(n))) }
	for _, c := range []struct {
		name   string
		size   []int
		want   float64
		source string
	}{
		{"triangular-plaquette", []int{8, 8}, th, "Newman, Moore, Phys. Rev. E 60, 5068 (1999): independent terms for L a power of 2"},
		{"cluster", []int{9}, th, "independent terms, elementary"},
		{"cluster", []int{4, 5}, th, "independent terms, elementary"},
		{"cubic-code", []int{3, 3, 3}, parity(27), "terms of a type with one relation for k = 2, the product of all; elementary"},
	} {
		s := specOf(t, c.name, c.size, nil, nil)
		s.Beta = beta
		g, err := kinetic.Compile(s)
		if err != nil {
			t.Fatal(err)
		}
		e, err := kinetic.NewClasses(g, [32]byte{3}, 0, kinetic.StartRandom)
		if err != nil {
			t.Fatal(err)
		}
		e.Advance(300)
		const blocks, samples = 40, 300
		var sums []int64
		m, q := 0.0, 0.0 // mean and mean square of block means
		for range blocks {
			b := 0.0
			for range samples {
				e.Advance(e.Time() + 3)
				sums = e.Sums(sums[:0])
				b += float64(sums[0]) / float64(g.Families[0].Terms) / samples
			}
			m += b / blocks
			q += b * b / blocks
		}
		se := math.Sqrt((q - m*m) / (blocks - 1))
		if err := e.Audit(); err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
		if math.Abs(m-c.want) > 4*se || se > 0.01*c.want {
			t.Errorf("%s %v: mean term %.5f(%.5f), want %.5f: %.1f standard errors (%s)", c.name, c.size, m, se, c.want, (m-c.want)/se, c.source)
		}
	}
}
