package exact_test

import (
	"math"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/kinetictest"
)

// A sector against the full list of states: statics, modes and the lowest
// eigenvalues, each of which must be one of the full generator.
func TestSectors(t *testing.T) {
	field := kinetictest.Ising(kinetictest.Lattice(3, 3), 0.3, kinetictest.HeatBath)
	field.Families = append(field.Families, kinetic.FamilySpec{Name: "field", Coupling: 0.2, Operator: kinetictest.Operator(2, 2, nil, []string{"1"})})
	specs := []kinetic.Spec{
		kinetictest.Ising(kinetictest.Lattice(8), 0.5, kinetictest.HeatBath),
		kinetictest.Ising(kinetictest.Lattice(3, 3), 0.4, bath.Law{Kind: bath.Metropolis, Rate: 1}),
		kinetictest.Ising(kinetictest.Lattice(2, 4), 0.4, kinetictest.HeatBath),
		field,
		kinetictest.ToricCode(kinetictest.Lattice(2, 2), 0.5, "XZ", kinetictest.HeatBath, "zx"),
		kinetictest.ToricCode(kinetictest.Lattice(3, 2), 0.5, "X", kinetictest.HeatBath, "z"),
		kinetictest.Ising(kinetictest.Lattice(6), 0.4, bath.Law{Kind: bath.Power, Rate: 1, Exponent: 3}),
	}
	for seed := range uint64(40) {
		specs = append(specs, kinetictest.RandomSpec(seed, kinetictest.Size{MinStates: 4, MaxStates: 256, MaxCells: 8}))
	}
	reduced, left := 0, 0
	for i, spec := range specs {
		s := newSystem(t, spec)
		st := explore(t, s)
		all, err := st.Lowest(40)
		if err != nil {
			t.Fatal(err)
		}
		observables := []exact.Observable{s.Energy()}
		for _, k := range s.Kinds {
			o, err := s.Local(k.Index)
			if k.Line {
				o, err = s.Line(k.Index)
			}
			if err == nil {
				observables = append(observables, o)
			}
			if o, err := s.Terms(k.Index); err == nil && !k.Line && k.Count > 0 {
				observables = append(observables, o)
			}
		}
		for _, o := range observables {
			want, err := st.Relaxation(o)
			if err != nil {
				t.Fatal(err)
			}
			x, err := s.Sector(1<<12, o)
			if err != nil {
				t.Fatal(err)
			}
			if x.Order > 1 && x.Orbits < st.Len() {
				reduced++
			}
			if x.States.Int64() < int64(st.Len()) {
				left++
			}
			got, err := x.Relaxation(o)
			if err != nil {
				t.Fatalf("%d, %s: %v", i, o.Name, err)
			}
			what := o.Name + " in its sector"
			near(t, what+", mean", got.Mean, want.Mean, 1e-11*(1+math.Abs(want.Mean)))
			near(t, what+", variance", got.Variance, want.Variance, 1e-11*(1+want.Variance))
			near(t, what+", Dirichlet form", got.Dirichlet, want.Dirichlet, 1e-11*(1+want.Dirichlet))
			near(t, what+", tau_int", got.TauInt, want.TauInt, 1e-8*(1+want.TauInt))
			for _, floor := range []float64{0.2, 0.01, 0} {
				near(t, what+", tau_slowest", got.TauSlowest(floor), want.TauSlowest(floor), 1e-8*(1+want.TauSlowest(floor)))
			}
			levels, err := x.Lowest(3)
			if err != nil {
				t.Fatal(err)
			}
			for _, l := range levels {
				found := len(all) == 40 && l.Rate > all[39].Rate
				for _, a := range all {
					found = found || math.Abs(a.Rate-l.Rate) <= 1e-9*a.Rate && (a.Multiplicity >= l.Multiplicity || a.AtLeast)
				}
				if !found {
					t.Errorf("%d, %s: the sector has the level %+v, the generator has not", i, o.Name, l)
				}
			}
		}
	}
	if reduced < 100 || left < 3 {
		t.Errorf("only %d cases were reduced, and %d left orbits out", reduced, left)
	}
	s := newSystem(t, kinetictest.Ising(kinetictest.Lattice(6), 0.4, kinetictest.HeatBath))
	x, err := s.Sector(1<<12, must(s.Magnetization()))
	if err != nil {
		t.Fatal(err)
	}
	if _, err := x.Relaxation(s.Energy()); err == nil {
		t.Error("the energy was accepted in the sector of the magnetisation")
	}
}
