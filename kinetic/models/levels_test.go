package models

import (
	"fmt"
	"math"
	"testing"

	"sojourn/kinetic"
)

// A code of k encoded qubits keeps q^k states with q levels, whether or not q is
// prime (S. S. Bullock, G. K. Brennen, J. Phys. A 40, 3481 (2007) for the toric
// code, from memory).
func TestEncodedLevels(t *testing.T) {
	for q := 2; q <= 9; q++ {
		for _, c := range []struct {
			name string
			size []int
			open bool
			want float64
		}{
			{"potts", []int{4, 3}, false, 1},
			{"clock", []int{5}, false, 1},
			{"toric-code", []int{1, 1}, false, 2},
			{"toric-code", []int{2, 3}, false, 2},
			{"toric-code", []int{2, 2, 2}, false, 3},
			{"toric-code", []int{2, 2, 1, 2}, false, 6},
			{"planar-code", []int{3, 2}, true, 1},
		} {
			var open []bool
			if c.open {
				open = []bool{true, true}
			}
			g, err := kinetic.GroundStates(specOf(t, c.name, c.size, open, Values{"levels": float64(q)}))
			if err != nil || !g.Known || math.Abs(g.Encoded-c.want) > 1e-12 || !g.Satisfied || !g.Reference {
				t.Errorf("%s %v with %d levels: %+v, %v; want %v", c.name, c.size, q, g, err, c.want)
			}
		}
	}
}

// Every model compiles with up to 16 levels: with tables, as README says, for
// Potts and clock models of up to 8 levels on two axes and 4 on three.
func TestMostLevels(t *testing.T) {
	for _, c := range []struct {
		name   string
		size   []int
		tables int // the most levels with tables
	}{
		{"potts", []int{4}, 16}, {"potts", []int{3, 3}, 8}, {"potts", []int{3, 3, 3}, 4},
		{"clock", []int{3, 3}, 8}, {"clock", []int{3, 3, 3}, 4},
		{"toric-code", []int{3, 3}, 0}, {"toric-code", []int{2, 2, 2}, 0}, {"toric-code", []int{2, 2, 1, 2}, 0},
	} {
		for _, q := range []int{c.tables, c.tables + 1, 16} {
			if q < 3 || q > 16 {
				continue
			}
			g, err := kinetic.Compile(specOf(t, c.name, c.size, nil, Values{"levels": float64(q)}))
			if err != nil || c.tables > 0 && (g.Wide == nil) != (q <= c.tables) {
				t.Errorf("%s %v with %d levels: %v", c.name, c.size, q, err)
			}
		}
	}
}

// The sites of the planar code are those of a distance-d code: d^2 + (d - 1)^2.
func TestPlanarSites(t *testing.T) {
	for d := 1; d <= 6; d++ {
		s := specOf(t, "planar-code", []int{d, d}, []bool{true, true}, nil)
		if n := s.SiteCount(); n != d*d+(d-1)*(d-1) {
			t.Errorf("d = %d: %d sites", d, n)
		}
		stars, plaquettes := map[int]int{}, map[int]int{} // terms by factors
		for cell := range s.Lattice.Cells() {
			for i, f := range s.Families {
				if factors, ok := s.Term(f.Operator, f.Cut, cell); ok {
					[]map[int]int{plaquettes, stars}[i][len(factors)]++
				}
			}
		}
		want := map[int]int{}
		if d > 2 {
			want = map[int]int{4: (d - 1) * (d - 2), 3: 2 * (d - 1)}
		} else if d == 2 {
			want = map[int]int{3: 2}
		}
		if fmt.Sprint(stars) != fmt.Sprint(want) || fmt.Sprint(plaquettes) != fmt.Sprint(want) {
			t.Errorf("d = %d: stars %v, plaquettes %v by their factors, want %v", d, stars, plaquettes, want)
		}
	}
}

// The plaquettes of the toric code on a torus of N cells are independent but for
// one relation: their product is 1, so that their levels add up to 0 mod q. With
// weights w(s) = exp(beta J cos(2 pi s/q)) and their transform
// W_k = sum_s w(s) cos(2 pi k s/q), the mean of cos(2 pi s/q) is
//
//	sum_k U_k W_k^(N-1) / sum_k W_k^N,   U_k = sum_s cos(2 pi s/q) w(s) cos(2 pi k s/q)
//
// (elementary; q = 2 gives (t + t^(N-1))/(1 + t^N)).
func TestMeanPlaquetteLevels(t *testing.T) {
	const beta = 0.9
	for _, c := range []struct {
		q    int
		size []int
	}{{3, []int{2, 2}}, {4, []int{3, 2}}, {5, []int{2, 2}}} {
		n := float64(c.size[0] * c.size[1])
		turn := 2 * math.Pi / float64(c.q)
		var above, below float64
		for k := range c.q {
			var w, u float64
			for s := range c.q {
				v := math.Cos(turn * float64(s))
				x := math.Exp(beta*v) * math.Cos(turn*float64(k*s))
				w += x
				u += v * x
			}
			above += u * math.Pow(w, n-1)
			below += math.Pow(w, n)
		}
		want := above / below
		s := specOf(t, "toric-code", c.size, nil, Values{"levels": float64(c.q)})
		s.Beta = beta
		s.Tracked = nil
		mean, se := meanValue(t, s, 3)
		if math.Abs(mean-want) > 4*se || se > 0.01*want {
			t.Errorf("q = %d, %v: plaquette %.5f(%.5f), want %.5f", c.q, c.size, mean, se, want)
		}
	}
}

// meanValue returns the mean of -E/J over the terms of the first family, with
// its standard error from 40 blocks.
func meanValue(t *testing.T, s kinetic.Spec, step float64) (mean, se float64) {
	t.Helper()
	g, err := kinetic.Compile(s)
	if err != nil {
		t.Fatal(err)
	}
	e, err := kinetic.NewClasses(g, [32]byte{5}, 0, kinetic.StartRandom)
	if err != nil {
		t.Fatal(err)
	}
	e.Advance(200)
	const blocks, samples = 40, 400
	var counts []int64
	var m, square float64
	for range blocks {
		b := 0.0
		for range samples {
			e.Advance(e.Time() + step)
			counts = e.Sums(counts[:0])
			for l, v := range s.Families[0].Shape {
				b += v * float64(counts[l]) / float64(g.Families[0].Terms) / samples
			}
		}
		m += b / blocks
		square += b * b / blocks
	}
	if err := e.Audit(); err != nil {
		t.Error(err)
	}
	return m, math.Sqrt((square - m*m) / (blocks - 1))
}
