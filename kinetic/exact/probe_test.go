package exact_test

import (
	"fmt"
	"math"
	"testing"

	"sojourn/kinetic/bath"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/kinetictest"
)

func TestProbe(t *testing.T) {
	for n := 2; n <= 8; n++ {
		s, err := exact.NewSystem(kinetictest.Ising(kinetictest.Lattice(n), 0.7, kinetictest.HeatBath))
		if err != nil {
			t.Fatal(err)
		}
		st, err := s.Explore(1 << 20)
		if err != nil {
			t.Fatal(err)
		}
		sp, err := st.Spectrum()
		if err != nil {
			t.Fatal(err)
		}
		e := sp.Relaxation(s.Energy())
		fmt.Println(n, st.Len(), sp.Gap()-(1-math.Tanh(1.4)), 1/e.TauSlowest(0)-2*(1-math.Tanh(1.4)*math.Cos(math.Pi/float64(n))))
	}
	for _, tr := range []string{"", "z", "x", "zx"} {
		s, err := exact.NewSystem(kinetictest.ToricCode(kinetictest.Lattice(2, 2), 1, "Y", kinetictest.HeatBath, tr))
		if err != nil {
			t.Fatal(err)
		}
		c, err := s.ClosedClasses(exact.Everything, 1<<16)
		fmt.Println(tr, s.TotalSize(), s.OrbitSize(), len(c), err)
	}
	s, _ := exact.NewSystem(kinetictest.Ising(kinetictest.Lattice(4, 4), 0.7, bath.Law{Kind: bath.Power, Rate: 1, Exponent: 3}))
	c, err := s.ClosedClasses(exact.Everything, 1<<16)
	fmt.Println(len(c), c, err)
	for L := 2; L <= 3; L++ {
		for _, tr := range []string{"z"} {
			s, err := exact.NewSystem(kinetictest.ToricCode(kinetictest.Lattice(L, L), 1, "X", kinetictest.HeatBath, tr))
			if err != nil {
				t.Fatal(err)
			}
			st, err := s.Explore(1 << 20)
			if err != nil {
				t.Fatal(err)
			}
			fmt.Println(st.Len())
			sp, err := st.Spectrum()
			if err != nil {
				t.Fatal(err)
			}
			for l := range 2 {
				o, _ := s.Line(l)
				r := sp.Relaxation(o)
				fmt.Println(L, tr, st.Len(), l, sp.Gap(), r.Modes[:3])
			}
		}
	}
}
