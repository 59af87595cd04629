package kinetic

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// gaussian gives every bond of a spec its own normal coupling.
func gaussian(s Spec, seed uint64) Spec {
	r := rand.New(rand.NewPCG(seed, 1))
	s.Families = append([]FamilySpec(nil), s.Families...)
	for f := range s.Families {
		s.Families[f].Couplings = make([]float64, s.Lattice.Cells())
		for c := range s.Families[f].Couplings {
			s.Families[f].Couplings[c] = r.NormFloat64()
		}
	}
	return s
}

// The bonds of an open chain are independent, whatever their couplings: each
// has mean tanh(beta J) (elementary).
func TestCompositionOnRandomChain(t *testing.T) {
	s := gaussian(isingSpec(t, 0.8, true, 12), 3)
	g := compiled(t, s)
	e, err := NewComposition(g, [32]byte{2}, 0, StartRandom)
	if err != nil {
		t.Fatal(err)
	}
	e.Advance(200)
	const blocks, each = 50, 2000
	levels := make([]uint8, 12)
	mean := make([]float64, 12)
	square := make([]float64, 12)
	for range blocks {
		block := make([]float64, 12)
		for range each {
			e.Advance(e.Time() + 1)
			e.Terms(0, 0, levels)
			for b, s := range levels[:11] {
				block[b] += (1 - 2*float64(s)) / each
			}
		}
		for b, v := range block {
			mean[b] += v / blocks
			square[b] += v * v / blocks
		}
	}
	if err := e.Audit(); err != nil {
		t.Error(err)
	}
	for b := range 11 {
		want := math.Tanh(0.8 * s.Families[0].Couplings[b])
		se := math.Sqrt((square[b] - mean[b]*mean[b]) / (blocks - 1))
		if math.Abs(mean[b]-want) > 4*se || se > 0.02 {
			t.Errorf("bond %d: mean %.5f(%.5f), want %.5f", b, mean[b], se, want)
		}
	}
}

// With equal couplings given term by term, means are those of the class engine:
// Kaufman's energy of the torus (Phys. Rev. 76, 1232 (1949), evaluated).
func TestCompositionWithEqualCouplings(t *testing.T) {
	s := isingSpec(t, 0.35, false, 8, 8)
	for f := range s.Families {
		s.Families[f].Couplings = make([]float64, 64)
		for c := range 64 {
			s.Families[f].Couplings[c] = 1
		}
	}
	g := compiled(t, s)
	e, err := NewComposition(g, [32]byte{2}, 0, StartRandom)
	if err != nil {
		t.Fatal(err)
	}
	e.Advance(200)
	var m, q float64
	const blocks, each = 40, 500
	for range blocks {
		b := 0.0
		for range each {
			e.Advance(e.Time() + 2)
			b += e.Energy(0) / 64 / each
		}
		m += b / blocks
		q += b * b / blocks
	}
	se := math.Sqrt((q - m*m) / (blocks - 1))
	if want := -0.9191479; math.Abs(m-want) > 4*se || se > 0.009 {
		t.Errorf("energy per site %.5f(%.5f), want %.5f", m, se, want)
	}
	// Restored in mid-flight it goes on bit for bit.
	saved := e.Save(nil)
	other, err := NewComposition(g, [32]byte{9}, 5, StartUp)
	if err != nil {
		t.Fatal(err)
	}
	if err := other.Restore(saved); err != nil {
		t.Fatal(err)
	}
	e.Advance(e.Time() + 300)
	other.Advance(e.Time())
	if e.Jumps() != other.Jumps() || e.Energy(0) != other.Energy(0) {
		t.Errorf("restored: %d jumps and energy %v, the original %d and %v", other.Jumps(), other.Energy(0), e.Jumps(), e.Energy(0))
	}
	if err := other.Audit(); err != nil {
		t.Error(err)
	}
}

// Signs make a spin glass that a change of gauge can undo: the energy of a
// torus with signs s_x s_y on its bonds is Kaufman's.
func TestSignsByGauge(t *testing.T) {
	s := isingSpec(t, 0.35, false, 8, 8)
	r := rand.New(rand.NewPCG(5, 5))
	spin := make([]uint8, 64)
	for c := range spin {
		spin[c] = uint8(r.IntN(2))
	}
	for f := range s.Families {
		s.Families[f].Signs = make([]uint8, 64)
		for c := range 64 {
			at := s.Lattice.Coord(c)
			at[f] = (at[f] + 1) % 8
			s.Families[f].Signs[c] = spin[c] ^ spin[s.Lattice.Index(at)]
		}
	}
	mean, se := meanTerm(t, s, 200, 2, 40, 400)
	if want := 0.9191479 / 2; math.Abs(mean-want) > 4*se || se > 0.01 {
		t.Errorf("mean satisfied bond %.5f(%.5f), want %.5f", mean, se, want)
	}
}

// The goal is three times the time of BenchmarkClasses at equal size.
func BenchmarkComposition(b *testing.B) {
	for _, n := range []int{64, 256, 1024} {
		b.Run(fmt.Sprintf("glass-%dx%d/0.6", n, n), func(b *testing.B) {
			g := compiled(b, gaussian(isingSpec(b, 0.6, false, n, n), 1))
			e, err := NewComposition(g, [32]byte{1}, 0, StartRandom)
			if err != nil {
				b.Fatal(err)
			}
			e.Advance(30)
			before := e.Jumps()
			e.Advance(31)
			step := float64(1<<18) / float64(e.Jumps()-before)
			first := e.Jumps()
			b.ReportAllocs()
			for b.Loop() {
				e.Advance(e.Time() + step)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(e.Jumps()-first), "ns/jump")
			b.ReportMetric(float64(CompositionBytes(g))/float64(g.Addresses()), "bytes/site")
		})
	}
}
