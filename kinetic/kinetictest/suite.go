package kinetictest

import (
	"crypto/sha256"
	"fmt"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/lattice"
)

// Make builds an engine: the given unit of the stream that seed identifies.
type Make func(g *kinetic.Generator, seed [32]byte, unit int, start kinetic.Start) (kinetic.Engine, error)

// Suite is what every engine has to pass. On lattices whose states can be
// listed it compares the law of the trajectories with the exact one: the law
// of the starts, waiting times, which jump happens, the states after a time
// from a start and from one another, covariances in time and, through them, the
// stationary law. On these and on larger ones it checks that all readings of a
// state agree with each other and with an enumeration, that trajectories do
// not depend on how time is cut, that a saved state continues bit for bit and a
// foreign or damaged one is refused, and that streams are kept apart.
//
// All seeds are fixed. With other seeds a right engine would fail once in 1000:
// the comparisons of a run are judged together (see verdicts.judge).
// With -short a few models stand for all.
func Suite(t *testing.T, make Make) { run(t, make, listed(t), large(t)) }

// SuiteLevels is Suite for models of 3, 4 and 5 levels per site.
func SuiteLevels(t *testing.T, make Make) { run(t, make, listedLevels(t), largeLevels(t)) }

func run(t *testing.T, make Make, subjects, beyond []*subject) {
	var v verdicts
	for _, s := range subjects {
		t.Run(s.name, func(t *testing.T) {
			h := &harness{T: t, subject: s, make: make, v: &v}
			h.starts()
			h.afterTime()
			h.longRun()
			h.jumpByJump()
			h.states(200)
			h.streams()
			h.cuts()
			h.saves()
		})
	}
	for _, s := range beyond {
		t.Run(s.name, func(t *testing.T) {
			h := &harness{T: t, subject: s, make: make, v: &v}
			h.states(40)
			h.cuts()
			h.saves()
		})
	}
	t.Run("foreign", func(t *testing.T) { foreign(t, make, subjects) })
	v.judge(t)
}

// subject is a generator with what there is to compare it with.
type subject struct {
	name string
	spec kinetic.Spec
	g    *kinetic.Generator
	s    *exact.System
	c    *generatorCheck
	all  *exact.States // every state that the moves reach; nil if too many
	rate float64       // mean rate of all jumps from these states, or of the reference state
}

func newSubject(t *testing.T, name string, spec kinetic.Spec, list bool) *subject {
	t.Helper()
	g, err := kinetic.Compile(spec)
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	s, err := exact.NewSystem(spec)
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	u := &subject{name: name, spec: spec, g: g, s: s, c: &generatorCheck{g: g, s: s}}
	u.c.index()
	if !list {
		for m := range s.Moves {
			u.rate += s.Rate(m, s.Reference)
		}
		return u
	}
	if u.all, err = s.Orbit(1 << 12); err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	for _, e := range u.all.Matrix().Exit {
		u.rate += e / float64(u.all.Len())
	}
	return u
}

// listed returns generators whose states can be listed.
func listed(t *testing.T) []*subject {
	cubic := bath.Law{Kind: bath.Power, Rate: 1, Exponent: 3}
	open, err := lattice.New([]int{3, 2}, []bool{true, false})
	if err != nil {
		t.Fatal(err)
	}
	field := Ising(Lattice(5), 0.4, HeatBath)
	field.Families = append(field.Families, kinetic.FamilySpec{
		Name: "field", Coupling: 0.3, Operator: Operator(2, 1, nil, []string{"1"}),
	})
	strengths := ToricCode(Lattice(2, 2), 0.6, "XYZ", HeatBath, "zx")
	strengths.Bath[1].Law = bath.Law{Kind: bath.Metropolis, Rate: 0.5}
	strengths.Bath[2].Law = bath.Law{Kind: bath.Power, Rate: 2, Exponent: 1}
	out := []*subject{
		newSubject(t, "ring-1", Ising(Lattice(1), 0.5, HeatBath), true),
		newSubject(t, "ring-2", Ising(Lattice(2), 0.5, HeatBath), true),
		newSubject(t, "ring-3-field", field, true),
		newSubject(t, "torus-2x3", Ising(Lattice(2, 3), 0.4, bath.Law{Kind: bath.Metropolis, Rate: 1}), true),
		newSubject(t, "open-3x2", Ising(open, 0.4, bath.Law{Kind: bath.Symmetric, Rate: 1}), true),
		newSubject(t, "ring-4-frozen", Ising(Lattice(4), 0.4, cubic), true),
		newSubject(t, "toric-2x2", strengths, true),
	}
	n := 25
	if testing.Short() {
		n = 5
	}
	for seed := range n {
		out = append(out, newSubject(t, fmt.Sprint("random-", seed), RandomSpec(uint64(seed), Enumerable), true))
	}
	out = append(out, newSubject(t, "potts-2-ring-5", Potts(2, Lattice(5), 0.7, HeatBath), true))
	out = append(out, newSubject(t, "planar-2x2", PlanarCode(2, 2, 0.6, "XZ", HeatBath), true))
	for seed := range n / 5 {
		out = append(out, newSubject(t, fmt.Sprint("edges-", seed), RandomEdges(uint64(seed), Enumerable), true))
	}
	return out
}

// listedLevels returns generators of more than two levels whose states can be
// listed.
func listedLevels(t *testing.T) []*subject {
	out := []*subject{
		newSubject(t, "potts-3-ring-4", Potts(3, Lattice(4), 0.7, HeatBath), true),
		newSubject(t, "potts-4-torus-2x2", Potts(4, Lattice(2, 2), 0.5, bath.Law{Kind: bath.Metropolis, Rate: 1}), true),
		newSubject(t, "potts-5-ring-3", Potts(5, Lattice(3), 1.1, bath.Law{Kind: bath.Symmetric, Rate: 1}), true),
	}
	n := 5
	if testing.Short() {
		n = 1
	}
	for _, q := range []int{3, 4, 5} {
		for seed := range n {
			out = append(out, newSubject(t, fmt.Sprint("random-", q, "-", seed), RandomLevels(uint64(seed), q, Enumerable), true))
		}
	}
	return out
}

// largeLevels returns generators of more than two levels beyond listing.
func largeLevels(t *testing.T) []*subject {
	out := []*subject{newSubject(t, "potts-3-9x8", Potts(3, Lattice(9, 8), 0.8, HeatBath), false)}
	for _, q := range []int{3, 4, 5} {
		out = append(out, newSubject(t, fmt.Sprint("random-large-", q), RandomLevels(1000, q, Larger), false))
	}
	return out
}

// large returns generators beyond listing.
func large(t *testing.T) []*subject {
	open, err := lattice.New([]int{3, 4, 5}, []bool{false, true, true})
	if err != nil {
		t.Fatal(err)
	}
	out := []*subject{
		newSubject(t, "ising-9x8", Ising(Lattice(9, 8), 0.4, HeatBath), false),
		newSubject(t, "ising-open-3x4x5", Ising(open, 0.25, HeatBath), false),
		newSubject(t, "toric-5x4", ToricCode(Lattice(5, 4), 0.5, "XYZ", HeatBath, "zx"), false),
	}
	n := 8
	if testing.Short() {
		n = 2
	}
	for seed := range n {
		out = append(out, newSubject(t, fmt.Sprint("random-large-", seed), RandomSpec(uint64(1000+seed), Larger), false))
	}
	return append(out,
		newSubject(t, "planar-6x5", PlanarCode(6, 5, 0.5, "XYZ", HeatBath), false),
		newSubject(t, "edges-large", RandomEdges(1000, Larger), false))
}

// harness runs the checks of one subject.
type harness struct {
	*testing.T
	*subject
	make Make
	v    *verdicts
}

// seed gives every subject streams of its own, so that what is found of several
// can be judged together.
func (s *subject) seed() [32]byte { return sha256.Sum256([]byte("suite " + s.name)) }

func (h *harness) engine(unit int, start kinetic.Start) kinetic.Engine {
	h.Helper()
	e, err := h.make(h.g, h.seed(), unit, start)
	if err != nil {
		h.Fatalf("unit %d from %s: %v", unit, start, err)
	}
	return e
}

// read returns the levels of a lane, by instance.
func (s *subject) read(e kinetic.Engine, lane int, levels []uint8) []uint8 {
	if levels == nil {
		levels = make([]uint8, len(s.s.Instances))
	}
	var buf []uint8
	for f, k := range s.c.kind {
		if len(buf) != k.Positions {
			buf = make([]uint8, k.Positions)
		}
		e.Terms(f, lane, buf)
		for p, i := range s.c.at[f] {
			levels[i] = buf[p]
		}
	}
	return levels
}

// state returns the number of the state that a lane is in.
func (h *harness) state(e kinetic.Engine, lane int, scratch []uint8) int {
	h.Helper()
	i := h.all.Find(h.read(e, lane, scratch))
	if i < 0 {
		h.Fatalf("at time %v the levels %v are a state that the moves do not reach", e.Time(), scratch)
	}
	return i
}
