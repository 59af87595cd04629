//go:build long

package kinetic

import (
	"math"
	"testing"
)

// A billion jumps leave lists, levels and sums as a recount finds them, and the
// energy per site where Kaufman's torus has it (Phys. Rev. 76, 1232 (1949),
// evaluated).
func TestBillionJumps(t *testing.T) {
	s := isingSpec(t, 0.42, false, 64, 64)
	for name, make := range map[string]func(*Generator, [32]byte, int, Start) (Engine, error){
		ClassEngine: NewClasses, TileEngine: NewTiles, LaneEngine: NewLanes,
	} {
		t.Run(name, func(t *testing.T) {
			g := compiled(t, s)
			e, err := make(g, [32]byte{8}, 0, StartRandom)
			if err != nil {
				t.Fatal(err)
			}
			e.Advance(500)
			var n, m, q float64
			for e.Jumps() < 1e9 {
				block := 0.0
				const each = 100
				for range each {
					e.Advance(e.Time() + 20)
					for lane := range e.Lanes() {
						block += e.Energy(lane) / float64(each*e.Lanes()*g.Cells())
					}
				}
				n++
				m += block
				q += block * block
			}
			if err := e.Audit(); err != nil {
				t.Error(err)
			}
			m /= n
			se := math.Sqrt((q/n - m*m) / (n - 1))
			if want := -1.22663698; math.Abs(m-want) > 4*se || se > 0.001 {
				t.Errorf("energy per site %.6f(%.6f), want %.6f after %d jumps", m, se, want, e.Jumps())
			}
		})
	}
}
