package main

import (
	"context"
	"math"
	"reflect"
	"strings"
	"testing"

	"sojourn/analysis"
	"sojourn/configs"
	"sojourn/kinetic"
	"sojourn/observables"
)

// Each engine runs a study to its fit, and finds the magnetization's relaxation
// time on the 4 x 4 torus at beta = 0.2 within 4 of its standard errors of the
// class engine's.
func TestEveryEngineRunsStudies(t *testing.T) {
	const study = `
[lattice]
size = [4, 4]

[hamiltonian]
model = "ising"

[bath]
beta = 0.2

[trajectory]
count  = 16
settle = 20.0
span   = 400.0
step   = 0.4

[[observable]]
kind = "magnetization"
`
	fits := map[string]analysis.Estimate{}
	for _, name := range kinetic.EngineNames() {
		s, err := configs.Decode("test", "test.toml", []byte(study))
		if err != nil {
			t.Fatal(err)
		}
		s.Points[0].Trajectory.EngineName = name
		q, err := prepare(&s.Points[0], 0)
		if err != nil {
			t.Logf("%s: %v", name, err) // composition is for couplings that vary
			continue
		}
		m, err := manifest(s, []*prepared{q})
		if err != nil {
			t.Fatal(err)
		}
		g := newGathering(&m.Points[0], "")
		for unit := range 16 {
			u, err := q.record(context.Background(), unit, true, nil)
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			if err := g.add(&u); err != nil {
				t.Fatalf("%s: %v", name, err)
			}
		}
		if g.trajectories != 16*kinetic.EngineLanes(name) || g.jumps == 0 {
			t.Errorf("%s: %d trajectories, %v jumps", name, g.trajectories, g.jumps)
		}
		r := analysis.Infer(g.finish(1), analysis.Options{})
		fits[name] = r.Observables[0].Integrated
		t.Logf("%s: tau_int %s", name, estimate(fits[name]))
	}
	if len(fits) < 3 {
		t.Errorf("only %d engines ran", len(fits))
	}
	want := fits["classes"]
	for name, x := range fits {
		if !x.OK || math.Abs(x.Value-want.Value) > 4*math.Hypot(x.Err, want.Err) {
			t.Errorf("%s: tau_int %s, by classes %s", name, estimate(x), estimate(want))
		}
	}
}

// A custom study that spells out the toric code gives the same rows as the
// built-in one, bit for bit: neither names nor the way in which a Hamiltonian is
// written enter the random streams.
func TestSpeltOutToricCodeGivesTheSameRows(t *testing.T) {
	const rest = `
[lattice]
size = [6, 5]

[bath]
beta = 0.7
couples = ["X", "Z"]

[trajectory]
count  = 2
settle = 10.0
span   = 200.0

[[observable]]
kind = "energy"

[[observable]]
kind = "terms"
family = "plaquette"
`
	const spelt = `
[hamiltonian]
model = "custom"
sites_per_cell = 2

[[hamiltonian.family]]
name = "plaquette"
z = ["1 + y", "1 + x"]

[[hamiltonian.family]]
name = "star"
x = ["1 + x^-1", "1 + y^-1"]
`
	record := func(text string) observables.Unit {
		t.Helper()
		s, err := configs.Decode("test", "test.toml", []byte(text))
		if err != nil {
			t.Fatal(err)
		}
		q, err := prepare(&s.Points[0], 0)
		if err != nil {
			t.Fatal(err)
		}
		u, err := q.record(context.Background(), 1, false, nil)
		if err != nil {
			t.Fatal(err)
		}
		return u
	}
	built, custom := record(rest+"\n[hamiltonian]\nmodel = \"toric-code\"\n"), record(rest+spelt)
	if !reflect.DeepEqual(built, custom) {
		t.Error("the rows differ")
	}
	if other := record(strings.Replace(rest, "0.7", "0.71", 1) + spelt); reflect.DeepEqual(other, custom) {
		t.Error("rows at another beta are the same")
	}
}
