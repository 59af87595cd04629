//go:build long

package exact_test

import (
	"math"
	"testing"

	"sojourn/kinetic/kinetictest"
)

// The second eigenvalue of one random single-site update of the 5 x 5 torus at
// the critical point, out of 2^25 states: M. P. Nightingale, H. W. J. Bloete,
// Phys. Rev. Lett. 76, 4548 (1996), from memory. Two minutes and 2 GB.
func TestCriticalTorus5(t *testing.T) {
	s := newSystem(t, kinetictest.Ising(kinetictest.Lattice(5, 5), math.Log(1+math.Sqrt2)/2, kinetictest.HeatBath))
	m := must(s.Magnetization())
	x, err := s.Sector(1<<20, m)
	if err != nil {
		t.Fatal(err)
	}
	r, err := x.Relaxation(m)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "second eigenvalue", 1-r.Modes[0].Rate/25, 0.999708953624452, 1e-13)
}
