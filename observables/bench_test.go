package observables

import (
	"fmt"
	"testing"
	"time"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

// A sample of each kind of observable, and a Dirichlet form and a snapshot, on
// the Ising torus. ns/site is to be seen beside the jumps between two samples:
// at one sample for every N/8 jumps of 40 ns these take 5 ns per site.
func BenchmarkSample(b *testing.B) {
	const size = 256
	g := compile(b, kinetictest.Ising(kinetictest.Lattice(size, size), 0.44, kinetictest.HeatBath))
	e, err := kinetic.NewClasses(g, [32]byte{1}, 0, kinetic.StartRandom)
	if err != nil {
		b.Fatal(err)
	}
	e.Advance(50)
	for _, c := range []struct {
		name string
		r    []Request
	}{
		{"scalars", []Request{{Kind: Energy}, {Kind: Magnetization}, {Kind: Terms, Family: "bond"}}},
		{"local", []Request{{Kind: Local, Family: "spin"}}},
		{"fourier-1-0", []Request{{Kind: Fourier, Family: "spin", Wavevector: lattice.Offset{1, 0}}}},
		{"fourier-0-1", []Request{{Kind: Fourier, Family: "spin", Wavevector: lattice.Offset{0, 1}}}},
		{"fourier-1-1", []Request{{Kind: Fourier, Family: "spin", Wavevector: lattice.Offset{1, 1}}}},
	} {
		for i := range c.r {
			c.r[i].Name = fmt.Sprint(i)
		}
		obs, err := Bind(g, c.r)
		if err != nil {
			b.Fatal(err)
		}
		b.Run(c.name, func(b *testing.B) {
			r := benchRecorder(b, e, g, obs)
			b.ReportAllocs()
			for b.Loop() {
				if r.tl.t == r.tl.samples {
					b.StopTimer()
					r = benchRecorder(b, e, g, obs)
					b.StartTimer()
				}
				r.take()
				r.tl.next()
				r.correlator.add(r.reading)
				r.moments.add(0, r.reading)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/(size*size), "ns/site")
		})
	}
}

func benchRecorder(b *testing.B, e kinetic.Engine, g *kinetic.Generator, obs []Observable) *recorder {
	r, err := newRecorder(e, g, obs, allPairs(obs), Plan{Span: 1 << 20, Step: 1})
	if err != nil {
		b.Fatal(err)
	}
	return r
}

// What recording adds to the time of the jumps, in per cent, at one sample for
// every N/8 jumps.
func BenchmarkShare(b *testing.B) {
	const size = 128
	g := compile(b, kinetictest.Ising(kinetictest.Lattice(size, size), 0.44, kinetictest.HeatBath))
	few := []Request{{Name: "e", Kind: Energy}, {Name: "m", Kind: Magnetization}}
	many := append(few[:2:2],
		Request{Name: "s", Kind: Local, Family: "spin"},
		Request{Name: "k", Kind: Fourier, Family: "spin", Wavevector: lattice.Offset{0, 1}})
	for name, requests := range map[string][]Request{"energy and magnetization": few, "with local and fourier": many} {
		obs, err := Bind(g, requests)
		if err != nil {
			b.Fatal(err)
		}
		b.Run(name, func(b *testing.B) {
			e, err := kinetic.NewClasses(g, [32]byte{1}, 0, kinetic.StartRandom)
			if err != nil {
				b.Fatal(err)
			}
			shareOf(b, e, g, obs)
		})
	}
}

// shareOf times jumps and recording apart, so that what else the machine does
// falls on both.
func shareOf(b *testing.B, e kinetic.Engine, g *kinetic.Generator, obs []Observable) {
	plan := Plan{Settle: 100, Span: 1 << 20, Step: 1}
	e.Advance(plan.Settle)
	plan.Step = max(1, float64(g.Addresses()*e.Lanes())/8*plan.Settle/float64(e.Jumps()))
	r, err := newRecorder(e, g, obs, allPairs(obs), plan)
	if err != nil {
		b.Fatal(err)
	}
	r.stride = r.dirichletStride()
	var jumping, recording time.Duration
	before := e.Jumps()
	for k := int64(0); b.Loop(); k++ {
		start := time.Now()
		e.Advance(plan.Settle + float64(k+1)*plan.Step)
		middle := time.Now()
		r.take()
		r.sample(k)
		jumping += middle.Sub(start)
		recording += time.Since(middle)
	}
	b.ReportMetric(100*float64(recording)/float64(jumping), "%")
	b.ReportMetric(float64(jumping.Nanoseconds())/float64(e.Jumps()-before), "ns/jump")
}

// The lane engine at one sample for every N/8 jumps of a lane.
func BenchmarkShareOfLanes(b *testing.B) {
	const size = 128
	g := compile(b, kinetictest.Ising(kinetictest.Lattice(size, size), 0.44, kinetictest.HeatBath))
	for _, requests := range [][]Request{
		{{Name: "e", Kind: Energy}, {Name: "m", Kind: Magnetization}},
		{{Name: "e", Kind: Energy}, {Name: "m", Kind: Magnetization}, {Name: "s", Kind: Local, Family: "spin"}},
	} {
		obs, err := Bind(g, requests)
		if err != nil {
			b.Fatal(err)
		}
		b.Run(fmt.Sprint(len(obs)), func(b *testing.B) {
			e, err := kinetic.NewLanes(g, [32]byte{1}, 0, kinetic.StartRandom)
			if err != nil {
				b.Fatal(err)
			}
			shareOf(b, e, g, obs)
		})
	}
}

func BenchmarkDirichlet(b *testing.B) {
	for _, l := range []lattice.Lattice{kinetictest.Lattice(256, 256), opened(kinetictest.Lattice(256, 256), 0, 1)} {
		b.Run(fmt.Sprint("open=", l.Open[0]), func(b *testing.B) {
			g := compile(b, kinetictest.Ising(l, 0.44, kinetictest.HeatBath))
			e, err := kinetic.NewClasses(g, [32]byte{1}, 0, kinetic.StartRandom)
			if err != nil {
				b.Fatal(err)
			}
			obs, err := Bind(g, []Request{{Name: "e", Kind: Energy}, {Name: "m", Kind: Magnetization}})
			if err != nil {
				b.Fatal(err)
			}
			r := benchRecorder(b, e, g, obs)
			b.ReportAllocs()
			for b.Loop() {
				r.dirichlet.add(0)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(g.Cells()), "ns/site")
		})
	}
}

func BenchmarkSnapshot(b *testing.B) {
	for _, l := range []lattice.Lattice{
		kinetictest.Lattice(256, 256), kinetictest.Lattice(1024, 1024), opened(kinetictest.Lattice(256, 256), 0, 1),
		kinetictest.Lattice(40, 40, 40), kinetictest.Lattice(1 << 16),
	} {
		b.Run(fmt.Sprint(l.Lengths(), l.Open[0]), func(b *testing.B) {
			g := compile(b, kinetictest.Ising(l, 0.2, kinetictest.HeatBath))
			e, err := kinetic.NewClasses(g, [32]byte{1}, 0, kinetic.StartRandom)
			if err != nil {
				b.Fatal(err)
			}
			s := newSpatial(e, g, []int{l.Axes}, 4)
			b.ReportAllocs()
			for b.Loop() {
				s.add()
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(g.Cells()), "ns/site")
			b.ReportMetric(float64(len(s.d)), "displacements")
		})
	}
}
