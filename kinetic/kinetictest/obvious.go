package kinetictest

import (
	"bytes"
	"crypto/sha256"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/exact"
)

// Obvious draws one trajectory by the direct method (D. T. Gillespie, J. Phys.
// Chem. 81, 2340 (1977)): after every jump it computes every rate anew from the
// levels. It is slow and has nothing to get wrong. It runs from an enumeration;
// the generator only tells it how patterns are laid out.
type Obvious struct {
	g *kinetic.Generator
	s *exact.System
	c *generatorCheck // where slots and families are found

	levels []uint8 // by instance
	pcg    *rand.PCG
	rng    *rand.Rand
	now    float64
	next   float64 // time of the next jump
	jumps  uint64
	rates  []float64 // scratch, by move
}

// NewObvious has the signature of an engine's constructor.
func NewObvious(g *kinetic.Generator, seed [32]byte, unit int, start kinetic.Start) (kinetic.Engine, error) {
	s, err := exact.NewSystem(g.Spec)
	if err != nil {
		return nil, err
	}
	o := &Obvious{g: g, s: s, c: &generatorCheck{g: g, s: s}, rates: make([]float64, len(s.Moves))}
	o.c.index()
	if err := errors.Join(o.c.faults...); err != nil {
		return nil, err
	}
	key := sha256.Sum256(binary.LittleEndian.AppendUint64(seed[:], uint64(unit)))
	o.pcg = rand.NewPCG(binary.LittleEndian.Uint64(key[:8]), binary.LittleEndian.Uint64(key[8:16]))
	o.rng = rand.New(o.pcg)
	o.levels = slices.Clone(s.Reference)
	if err := o.begin(start); err != nil {
		return nil, err
	}
	o.wait()
	return o, nil
}

// begin puts the levels into the state that a start names.
func (o *Obvious) begin(start kinetic.Start) error {
	switch start {
	case kinetic.StartReference:
	case kinetic.StartRandom:
		// Every state that the moves reach has the same number of words in them.
		for m := range o.s.Moves {
			for range o.rng.IntN(o.s.Levels()) {
				o.s.Apply(m, o.levels)
			}
		}
	case kinetic.StartUp, kinetic.StartDown:
		want := uint8(0)
		if start == kinetic.StartDown {
			want = uint8(o.s.Levels() / 2)
		}
		return o.align(want)
	default:
		return fmt.Errorf("start %q is unknown", start)
	}
	return nil
}

// align turns every spin to the wanted level by moves that turn no other.
func (o *Obvious) align(want uint8) error {
	found := false
	for _, k := range o.s.Kinds {
		if !k.Order || k.Line {
			continue
		}
		found = true
		for i := k.First; i < k.First+k.Count; i++ {
			m := o.turns(i, k)
			for n := 0; o.levels[i] != want; n++ {
				if m < 0 || n == o.s.Levels() {
					return fmt.Errorf("no bath operator turns spin %d", i-k.First)
				}
				o.s.Apply(m, o.levels)
			}
		}
	}
	if !found {
		return kinetic.ErrNoSpins
	}
	return nil
}

// turns returns a move that changes instance i and no other of its kind, or -1.
func (o *Obvious) turns(i int, k exact.Kind) int {
	for m, mv := range o.s.Moves {
		this, others := false, false
		for _, c := range mv.Changes {
			this = this || c.Instance == i
			others = others || c.Instance != i && c.Instance >= k.First && c.Instance < k.First+k.Count
		}
		if this && !others {
			return m
		}
	}
	return -1
}

// total returns the rate of all jumps from the present state.
func (o *Obvious) total() float64 {
	sum := 0.0
	for m := range o.rates {
		o.rates[m] = o.s.Rate(m, o.levels)
		sum += o.rates[m]
	}
	return sum
}

// wait draws the time of the next jump.
func (o *Obvious) wait() {
	r := o.total()
	if r == 0 {
		o.next = math.Inf(1)
		return
	}
	o.next += o.rng.ExpFloat64() / r
}

// Advance implements kinetic.Engine.
func (o *Obvious) Advance(t float64) {
	if t < o.now {
		panic("kinetictest: Advance to an earlier time")
	}
	for o.next <= t {
		left := o.rng.Float64() * o.total()
		last := 0
		for m, r := range o.rates {
			if r > 0 {
				last = m
				if left -= r; left < 0 {
					break
				}
			}
		}
		o.s.Apply(last, o.levels)
		o.jumps++
		o.wait()
	}
	o.now = t
}

// Time implements kinetic.Engine.
func (o *Obvious) Time() float64 { return o.now }

// Lanes implements kinetic.Engine.
func (o *Obvious) Lanes() int { return 1 }

// Jumps implements kinetic.Engine.
func (o *Obvious) Jumps() uint64 { return o.jumps }

// Sums implements kinetic.Engine.
func (o *Obvious) Sums(dst []int64) []int64 {
	for _, k := range o.c.kind {
		dst = append(dst, sums(o.g, o.levels[k.First:k.First+k.Count])...)
	}
	return dst
}

// sums returns the sum of the eigenvalues (-1)^s, or for q > 2 the counts by
// level.
func sums(g *kinetic.Generator, levels []uint8) []int64 {
	counts := make([]int64, g.Levels)
	for _, l := range levels {
		counts[l]++
	}
	if g.Levels == 2 {
		return []int64{counts[0] - counts[1]}
	}
	return counts
}

// Energy implements kinetic.Engine.
func (o *Obvious) Energy(int) float64 { return o.s.EnergyOf(o.levels) }

// Terms implements kinetic.Engine.
func (o *Obvious) Terms(family, _ int, dst []uint8) {
	for i := range dst {
		dst[i] = kinetic.Absent
	}
	for p, i := range o.c.at[family] {
		dst[p] = o.levels[i]
	}
}

// Patterns implements kinetic.Engine.
func (o *Obvious) Patterns(_ int, dst []uint16) { patterns(o.g, o.c, o.levels, dst) }

// patterns computes the pattern of every address from levels.
func patterns(g *kinetic.Generator, c *generatorCheck, levels []uint8, dst []uint16) {
	for a := range dst {
		dst[a] = 0
		for b, i := range c.slots[a] {
			if i >= 0 {
				dst[a] |= uint16(levels[i]) << (b * g.SlotBits)
			}
		}
	}
}

// Census implements kinetic.Engine.
func (o *Obvious) Census(dst []int64) {
	p := make([]uint16, o.g.Addresses())
	o.Patterns(0, p)
	for a, v := range p {
		dst[int(o.g.Places[o.g.PlaceOf(a)].Shape)<<o.g.Bits|int(v)]++
	}
}

// identity is equal for engines of the same generator.
func (o *Obvious) identity() []byte {
	h := sha256.New()
	fmt.Fprintf(h, "%+v", o.s.Spec)
	return h.Sum(nil)
}

// Save implements kinetic.Engine.
func (o *Obvious) Save(dst []byte) []byte {
	start := len(dst)
	dst = append(dst, o.identity()...)
	dst = append(dst, o.levels...)
	state, err := o.pcg.MarshalBinary()
	if err != nil {
		panic("kinetictest: " + err.Error())
	}
	dst = append(dst, state...)
	for _, v := range []uint64{math.Float64bits(o.now), math.Float64bits(o.next), o.jumps} {
		dst = binary.LittleEndian.AppendUint64(dst, v)
	}
	sum := sha256.Sum256(dst[start:])
	return append(dst, sum[:]...)
}

// Restore implements kinetic.Engine.
func (o *Obvious) Restore(src []byte) error {
	if len(src) != len(o.Save(nil)) {
		return errors.New("a saved state of another length")
	}
	body, digest := src[:len(src)-sha256.Size], src[len(src)-sha256.Size:]
	if sum := sha256.Sum256(body); !bytes.Equal(sum[:], digest) {
		return errors.New("a saved state with a wrong digest")
	}
	id := o.identity()
	if !bytes.HasPrefix(body, id) {
		return errors.New("a saved state of another generator")
	}
	body = body[len(id):]
	numbers := body[len(body)-24:]
	if err := o.pcg.UnmarshalBinary(body[len(o.levels) : len(body)-24]); err != nil {
		return err
	}
	copy(o.levels, body)
	o.now = math.Float64frombits(binary.LittleEndian.Uint64(numbers))
	o.next = math.Float64frombits(binary.LittleEndian.Uint64(numbers[8:]))
	o.jumps = binary.LittleEndian.Uint64(numbers[16:])
	return nil
}

// Audit implements kinetic.Engine. There is nothing that could disagree.
func (o *Obvious) Audit() error { return nil }
