package kinetic

import "testing"

func BenchmarkLanes(b *testing.B) {
	for _, c := range []struct {
		name string
		spec Spec
	}{
		{"ising-256x256/0.3", isingSpec(b, 0.3, false, 256, 256)},
		{"ising-256x256/critical", isingSpec(b, 0.4406868, false, 256, 256)},
		{"ising-256x256/0.6", isingSpec(b, 0.6, false, 256, 256)},
		{"ising-250x250/critical", isingSpec(b, 0.4406868, false, 250, 250)},
		{"ising-1024x1024/critical", isingSpec(b, 0.4406868, false, 1024, 1024)},
		{"ising-256x256-open/critical", isingSpec(b, 0.4406868, true, 256, 256)},
		{"ising-40x40x40/0.2", isingSpec(b, 0.2, false, 40, 40, 40)},
		{"toric-180x180-X/0.8", toricSpec(b, 0.8, 180, "X")},
		{"toric-180x180-XYZ/0.8", toricSpec(b, 0.8, 180, "X", "Y", "Z")},
	} {
		b.Run(c.name, func(b *testing.B) {
			g := compiled(b, c.spec)
			start := StartRandom
			if c.spec.Beta > 0.5 {
				start = StartReference
			}
			made, err := NewLanes(g, [32]byte{1}, 0, start)
			if err != nil {
				b.Fatal(err)
			}
			e := made.(*lanes)
			e.Advance(30)
			// A fixed number of attempts per iteration.
			step := (1 << 16) / e.plan.clock
			b.ReportAllocs()
			first, since := e.Jumps(), e.Time()
			for b.Loop() {
				e.Advance(e.Time() + step)
			}
			elapsed := float64(b.Elapsed().Nanoseconds())
			b.ReportMetric(elapsed/float64(e.Jumps()-first), "ns/jump")
			b.ReportMetric(elapsed/((e.Time()-since)*e.plan.clock), "ns/attempt")
			b.ReportMetric(float64(e.plan.bytes())/float64(g.Addresses()), "bytes/site")
		})
	}
}

// BenchmarkLaneReadings times what is read from a state, per site and 64 lanes.
func BenchmarkLaneReadings(b *testing.B) {
	g := compiled(b, isingSpec(b, 0.4406868, false, 256, 256))
	made, err := NewLanes(g, [32]byte{1}, 0, StartRandom)
	if err != nil {
		b.Fatal(err)
	}
	e := made.(*lanes)
	sums := make([]int64, 0, lanesPerWord*len(e.plan.still))
	census := make([]int64, len(g.Shapes)<<g.Bits)
	patterns := make([]uint16, g.Addresses())
	for _, c := range []struct {
		name string
		read func()
	}{
		{"sums", func() { e.fresh = false; sums = e.Sums(sums[:0]) }},
		{"census", func() { e.Census(census) }},
		{"patterns", func() { e.Patterns(5, patterns) }},
	} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				c.read()
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*g.Addresses()), "ns/site")
		})
	}
}
