package kinetictest

import (
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/exact"
)

func TestProbeGen(t *testing.T) {
	for name, s := range map[string]kinetic.Spec{
		"ring1":    Ising(Lattice(1), 0.5, HeatBath),
		"ring2":    Ising(Lattice(2), 0.5, HeatBath),
		"ring3":    Ising(Lattice(3), 0.5, HeatBath),
		"ising22":  Ising(Lattice(2, 2), 0.5, HeatBath),
		"ising45":  Ising(Lattice(4, 5), 0.5, HeatBath),
		"ising123": Ising(Lattice(1, 2, 3), 0.5, HeatBath),
		"toric22":  ToricCode(Lattice(2, 2), 0.5, "XYZ", HeatBath, "zx"),
		"toric13":  ToricCode(Lattice(1, 3), 0.5, "XYZ", HeatBath, "zx"),
		"toric33":  ToricCode(Lattice(3, 3), 0.5, "Y", HeatBath, "zx"),
		"toric44":  ToricCode(Lattice(4, 4), 0.5, "XZ", HeatBath, "zx"),
	} {
		g, err := kinetic.Compile(s)
		if err != nil {
			t.Fatal(name, err)
		}
		sys, err := exact.NewSystem(s)
		if err != nil {
			t.Fatal(name, err)
		}
		if err := CheckGenerator(g, sys); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestProbeRandom(t *testing.T) {
	for seed := range uint64(400) {
		size := Enumerable
		if seed%4 == 3 {
			size = Larger
		}
		s := RandomSpec(seed, size)
		sys, err := exact.NewSystem(s)
		if err != nil {
			t.Fatal(seed, err)
		}
		g, err := kinetic.Compile(s)
		if err != nil {
			t.Log(seed, err)
			continue
		}
		if err := CheckGenerator(g, sys); err != nil {
			t.Errorf("%d: %v\n%+v", seed, err, s)
		}
	}
}
