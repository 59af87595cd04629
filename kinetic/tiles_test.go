package kinetic

import (
	"fmt"
	"testing"
)

func BenchmarkTiles(b *testing.B) {
	for _, l := range []int{256, 1024, 4096} {
		b.Run(fmt.Sprintf("ising-%dx%d/0.5", l, l), func(b *testing.B) {
			g := compiled(b, isingSpec(b, 0.5, false, l, l))
			e, err := NewTiles(g, [32]byte{1}, 0, StartReference)
			if err != nil {
				b.Fatal(err)
			}
			e.Advance(3)
			before := e.Jumps()
			e.Advance(3.2)
			step := 0.2 * (1 << 18) / float64(e.Jumps()-before)
			first := e.Jumps()
			b.ReportAllocs()
			for b.Loop() {
				e.Advance(e.Time() + step)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(e.Jumps()-first), "ns/jump")
			b.ReportMetric(float64(TileBytes(g))/float64(g.Addresses()), "bytes/site")
		})
	}
}
