package exact_test

import (
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/kinetictest"
)

// One term of each set of translates says what all terms say, on random
// generators and on tori, where one is left.
func TestInequivalentTerms(t *testing.T) {
	specs := []kinetic.Spec{
		kinetictest.Ising(kinetictest.Lattice(3, 3), 0.3, kinetictest.HeatBath),
		kinetictest.ToricCode(kinetictest.Lattice(2, 2), 0.5, "XZ", kinetictest.HeatBath, "zx"),
		kinetictest.Potts(3, kinetictest.Lattice(4), 0.4, kinetictest.HeatBath),
	}
	for seed := range uint64(20) {
		specs = append(specs, kinetictest.RandomSpec(seed, kinetictest.Size{MinStates: 4, MaxStates: 256, MaxCells: 8}))
	}
	reduced := 0
	for i, spec := range specs {
		s := newSystem(t, spec)
		st := explore(t, s)
		for _, k := range s.Kinds {
			o, err := s.Local(k.Index)
			if k.Line {
				o, err = s.Line(k.Index)
			}
			if err != nil {
				continue
			}
			few := s.Inequivalent(o)
			if len(few.Components) < len(o.Components) {
				reduced++
			}
			if i == 0 && !k.Line && len(few.Components) != 1 {
				t.Errorf("%d of %d terms %s of a torus are left", len(few.Components), len(o.Components), k.Name)
			}
			var r [2]exact.Relaxation
			for n, x := range []exact.Observable{o, few} {
				if r[n], err = st.Relaxation(x); err != nil {
					t.Fatal(err)
				}
			}
			near(t, k.Name+", mean", r[1].Mean, r[0].Mean, 1e-12)
			near(t, k.Name+", variance", r[1].Variance, r[0].Variance, 1e-12)
			near(t, k.Name+", Dirichlet form", r[1].Dirichlet, r[0].Dirichlet, 1e-12*(1+r[0].Dirichlet))
			near(t, k.Name+", tau_int", r[1].TauInt, r[0].TauInt, 1e-8*(1+r[0].TauInt))
		}
	}
	if reduced < 6 {
		t.Errorf("only %d observables were reduced", reduced)
	}
}
