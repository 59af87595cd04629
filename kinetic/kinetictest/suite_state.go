package kinetictest

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"testing"

	"sojourn/kinetic"
)

// states checks after every few jumps, and at every start, that all readings of
// the state agree with each other and with the enumeration.
func (h *harness) states(times int) {
	for _, start := range []kinetic.Start{kinetic.StartReference, kinetic.StartRandom} {
		e := h.engine(2, start)
		step := 0.0
		if h.rate > 0 {
			step = 3 / h.rate
		}
		for k := range times {
			e.Advance(float64(k) * step)
			if err := h.consistent(e); err != nil {
				h.Fatalf("from %s, at time %v, after %d jumps: %v", start, e.Time(), e.Jumps(), err)
			}
		}
	}
}

// consistent compares all readings of an engine's state.
func (s *subject) consistent(e kinetic.Engine) error {
	if err := e.Audit(); err != nil {
		return fmt.Errorf("audit: %w", err)
	}
	width := s.g.SumWidth()
	columns := len(s.c.kind) * width
	got := e.Sums([]int64{-7})
	if len(got) != 1+columns*e.Lanes() || got[0] != -7 {
		return fmt.Errorf("%d sums were not appended for %d families and lines", len(got)-1, len(s.c.kind))
	}
	census := make([]int64, len(s.g.Shapes)<<s.g.Bits)
	e.Census(census)
	have, want := make([]uint16, s.g.Addresses()), make([]uint16, s.g.Addresses())
	for lane := range e.Lanes() {
		if err := s.termsExist(e, lane); err != nil {
			return err
		}
		levels := s.read(e, lane, nil)
		for f, k := range s.c.kind {
			want := sums(s.g, levels[k.First:k.First+k.Count])
			if have := got[1+lane*columns+f*width:][:width]; !slices.Equal(have, want) {
				return fmt.Errorf("lane %d: the sum of %q is %d, its terms add up to %d", lane, k.Name, have, want)
			}
		}
		energy := s.s.EnergyOf(levels)
		if have := e.Energy(lane); math.Abs(have-energy) > 1e-9*(1+math.Abs(energy)) {
			return fmt.Errorf("lane %d: the energy is %v, the terms give %v", lane, have, energy)
		}
		e.Patterns(lane, have)
		patterns(s.g, s.c, levels, want)
		if !slices.Equal(have, want) {
			return fmt.Errorf("lane %d: the patterns are %v, the terms give %v", lane, have, want)
		}
		for a, p := range want {
			census[int(s.g.Places[s.g.PlaceOf(a)].Shape)<<s.g.Bits|int(p)]--
		}
	}
	for i, n := range census {
		if n != 0 {
			return fmt.Errorf("the census counts %+d seats too many of shape %d with pattern %b", n, i>>s.g.Bits, i&(1<<s.g.Bits-1))
		}
	}
	return nil
}

// termsExist checks that Terms marks exactly the absent terms as such.
func (s *subject) termsExist(e kinetic.Engine, lane int) error {
	for f, k := range s.c.kind {
		buf := make([]uint8, k.Positions)
		e.Terms(f, lane, buf)
		for p, l := range buf {
			if _, exists := s.c.at[f][p]; exists != (l != kinetic.Absent) || exists && int(l) >= s.g.Levels {
				return fmt.Errorf("%q at %d reads %d", k.Name, p, l)
			}
		}
	}
	return nil
}

// span is a time of about so many jumps.
func (s *subject) span(jumps float64) float64 {
	if s.rate == 0 {
		return 1
	}
	return jumps / s.rate
}

// same reports a difference between two engines of one generator.
func (s *subject) same(a, b kinetic.Engine) error {
	if a.Time() != b.Time() || a.Jumps() != b.Jumps() || a.Lanes() != b.Lanes() {
		return fmt.Errorf("times %v and %v, jumps %d and %d", a.Time(), b.Time(), a.Jumps(), b.Jumps())
	}
	for lane := range a.Lanes() {
		if x, y := s.read(a, lane, nil), s.read(b, lane, nil); !bytes.Equal(x, y) {
			return fmt.Errorf("lane %d: levels %v and %v", lane, x, y)
		}
	}
	if x, y := a.Save(nil), b.Save(nil); !bytes.Equal(x, y) {
		return fmt.Errorf("saved states differ")
	}
	return nil
}

// streams checks that a trajectory is a function of seed and unit, and that
// others give others.
func (h *harness) streams() {
	a, b := h.engine(5, kinetic.StartRandom), h.engine(5, kinetic.StartRandom)
	a.Advance(h.span(60))
	b.Advance(h.span(60))
	if err := h.same(a, b); err != nil {
		h.Errorf("the same seed and unit: %v", err)
	}
	if h.rate == 0 || h.all.Len() < 4 {
		return
	}
	other := h.seed()
	other[31]++
	c, err := h.make(h.g, other, 5, kinetic.StartRandom)
	if err != nil {
		h.Fatal(err)
	}
	c.Advance(h.span(60))
	d := h.engine(6, kinetic.StartRandom)
	d.Advance(h.span(60))
	if bytes.Equal(a.Save(nil), c.Save(nil)) || bytes.Equal(a.Save(nil), d.Save(nil)) {
		h.Error("another seed or unit gives the same state and stream")
	}
}

// cuts checks that a trajectory does not depend on how its span is cut.
func (h *harness) cuts() {
	const jumps, pieces = 300, 97
	whole, cut := h.engine(7, kinetic.StartRandom), h.engine(7, kinetic.StartRandom)
	end := h.span(jumps)
	whole.Advance(end)
	for k := range pieces {
		x := float64(k) / pieces
		cut.Advance(end * x * x) // from almost nothing to several jumps
		cut.Advance(end * x * x)
	}
	cut.Advance(end)
	if err := h.same(whole, cut); err != nil {
		h.Errorf("a span in one piece and in %d: %v", pieces, err)
	}
	defer func() {
		if recover() == nil {
			h.Error("time ran backwards without a panic")
		}
	}()
	whole.Advance(end / 2)
}

// saves checks that a saved state continues bit for bit, in a fresh engine of
// another unit as in the one that wrote it, and that damage is refused without
// touching the engine.
func (h *harness) saves() {
	a, b := h.engine(8, kinetic.StartRandom), h.engine(9, kinetic.StartReference)
	a.Advance(h.span(50))
	prefix := []byte("before")
	saved := a.Save(bytes.Clone(prefix))
	if !bytes.HasPrefix(saved, prefix) {
		h.Fatal("Save does not append")
	}
	saved = saved[len(prefix):]
	middle := h.read(a, 0, nil)
	a.Advance(h.span(150))
	b.Advance(h.span(20))
	if err := b.Restore(saved); err != nil {
		h.Fatal(err)
	}
	if !bytes.Equal(h.read(b, 0, nil), middle) || b.Time() != h.span(50) {
		h.Error("the restored state is not the saved one")
	}
	if err := h.consistent(b); err != nil {
		h.Errorf("restored: %v", err)
	}
	b.Advance(h.span(150))
	if err := h.same(a, b); err != nil {
		h.Errorf("the saved trajectory, and it continued: %v", err)
	}
	if err := a.Restore(saved); err != nil {
		h.Fatal(err)
	}
	a.Advance(h.span(150))
	if err := h.same(a, b); err != nil {
		h.Errorf("restored into the engine that saved: %v", err)
	}
	h.damage(a, saved)
}

func (h *harness) damage(e kinetic.Engine, saved []byte) {
	before := e.Save(nil)
	refuse := func(what string, data []byte) {
		if err := e.Restore(data); err == nil {
			h.Errorf("%s was restored", what)
		} else if !bytes.Equal(e.Save(nil), before) {
			h.Errorf("%s was refused, but changed the engine", what)
		}
	}
	refuse("nothing", nil)
	refuse("a state without its last byte", saved[:len(saved)-1])
	refuse("half a state", saved[:len(saved)/2])
	refuse("a state with a byte more", append(bytes.Clone(saved), 0))
	for k := range 16 {
		bad := bytes.Clone(saved)
		at := k * (len(bad) - 1) / 15
		bad[at] ^= 1 << (k % 8)
		refuse(fmt.Sprintf("a state with byte %d of %d damaged", at, len(bad)), bad)
	}
}

// foreign checks that the saved state of one generator is refused by others,
// those of equal size above all.
func foreign(t *testing.T, make Make, subjects []*subject) {
	varying := slices.ContainsFunc(subjects[0].spec.Families, func(f kinetic.FamilySpec) bool { return f.Couplings != nil })
	ising := func(beta, coupling float64, size ...int) kinetic.Engine {
		s := Ising(Lattice(size...), beta, HeatBath)
		for f := range s.Families {
			s.Families[f].Coupling = coupling
			if varying {
				s.Families[f].Couplings = slices.Repeat([]float64{coupling}, s.Lattice.Cells())
			}
		}
		return fresh(t, make, s)
	}
	saved := ising(0.5, 1, 6).Save(nil)
	if err := ising(0.6, 1, 6).Restore(saved); err == nil {
		t.Error("a state at another temperature was restored")
	}
	if err := ising(0.5, 2, 6).Restore(saved); err == nil {
		t.Error("a state of another coupling was restored")
	}
	if err := ising(0.5, 1, 2, 3).Restore(ising(0.5, 1, 3, 2).Save(nil)); err == nil {
		t.Error("a state of the transposed lattice was restored")
	}
	for i, s := range subjects[1:] {
		a, b := fresh(t, make, subjects[i].spec), fresh(t, make, s.spec)
		if err := b.Restore(a.Save(nil)); err == nil {
			t.Errorf("a state of %s was restored by %s", subjects[i].name, s.name)
		}
	}
}

func fresh(t *testing.T, make Make, spec kinetic.Spec) kinetic.Engine {
	t.Helper()
	g, err := kinetic.Compile(spec)
	if err != nil {
		t.Fatal(err)
	}
	e, err := make(g, [32]byte{0x50}, 0, kinetic.StartReference)
	if err != nil {
		t.Fatal(err)
	}
	return e
}
