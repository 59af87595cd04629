package kinetic

import (
	"encoding/binary"
	"fmt"
	"math"
)

const savedLanes = "lanes 1\n"

// Save appends all that the trajectories depend on. Attempts drawn ahead are
// drawn again from where their streams stood.
func (e *lanes) Save(dst []byte) []byte {
	return seal(dst, savedLanes, e.plan.g, func(b []byte) []byte {
		pcg, err := e.from.src.pcg.MarshalBinary()
		if err != nil {
			panic("kinetic: " + err.Error())
		}
		b = append(b, pcg...)
		bulk := e.from.bulk
		for _, v := range []uint64{
			bulk.a, bulk.b, bulk.c, bulk.d,
			math.Float64bits(e.next.begin), math.Float64bits(e.now), uint64(e.done), e.jumps,
		} {
			b = binary.LittleEndian.AppendUint64(b, v)
		}
		for _, w := range e.words[:e.plan.layout.spare] {
			b = binary.LittleEndian.AppendUint64(b, w)
		}
		return b
	})
}

// Restore continues from a state that Save wrote, bit for bit. On error the
// engine is as it was.
func (e *lanes) Restore(src []byte) error {
	size := len(savedLanes) + 32 + 16 + 8*8 + 8*int(e.plan.layout.spare) + 8
	r, err := unseal(src, savedLanes, e.plan.g, size)
	if err != nil {
		return err
	}
	if err := e.next.src.pcg.UnmarshalBinary(r.take(16)); err != nil {
		return fmt.Errorf("%w: %w", ErrSaved, err)
	}
	e.next.bulk = bulk{r.u64(), r.u64(), r.u64(), r.u64()}
	begin := r.f64()
	e.now = r.f64()
	done := int(r.u64())
	e.jumps = r.u64()
	for i := range e.plan.layout.spare {
		e.words[i] = r.u64()
	}
	e.draw(begin)
	e.done = done
	e.fresh = false
	return nil
}

// Audit checks the words that moves cannot change, the clock, and the sums
// against the levels read one by one.
func (e *lanes) Audit() error {
	g, p := e.plan.g, e.plan
	if e.now < e.next.begin || e.now >= e.next.end || e.next.before(e.now) != e.done {
		return fmt.Errorf("%d attempts between %v and %v are made at time %v", e.done, e.next.begin, e.next.end, e.now)
	}
	width := len(g.Families) + len(g.Lines)
	want := make([]int64, width*lanesPerWord)
	words := make([]uint64, g.Cells())
	for f := range g.Families {
		e.Words(f, words)
		if err := e.conserved(f, words); err != nil {
			return err
		}
		e.sumSlowly(words, func(c int) bool { return g.TermExists(f, c) }, want[f:], width)
	}
	for l, line := range g.Lines {
		at := p.layout.lines[l]
		e.sumSlowly(e.words[at:at+uint32(line.Positions)], func(i int) bool {
			return line.Exists == nil || line.Exists[i]
		}, want[len(g.Families)+l:], width)
	}
	e.count()
	for i, w := range want {
		if e.sums[i] != w {
			return fmt.Errorf("lane %d: sum %d is %d, the levels add up to %d", i/width, i%width, e.sums[i], w)
		}
	}
	return nil
}

// sumSlowly adds eigenvalues to dst[lane*step].
func (e *lanes) sumSlowly(words []uint64, exists func(i int) bool, dst []int64, step int) {
	for i, w := range words {
		if !exists(i) {
			continue
		}
		for lane := range lanesPerWord {
			dst[lane*step] += 1 - 2*int64(w>>lane&1)
		}
	}
}

// conserved checks that a family of which every move turns an even number of
// terms keeps its parity.
func (e *lanes) conserved(f int, words []uint64) error {
	g := e.plan.g
	for _, pl := range g.Places {
		for m := range g.Seats[pl.Seat].Moves {
			odd := false
			for _, b := range slotsOf(g.Shapes[pl.Shape].turned[m]) {
				odd = odd != (g.Seats[pl.Seat].Slots[b].Family == f)
			}
			if odd {
				return nil
			}
		}
	}
	parity := uint64(0)
	for c, w := range words {
		if g.Reference != nil && g.Reference[f] != nil && g.Reference[f][c] == 1 && g.TermExists(f, c) {
			w = ^w
		}
		parity ^= w
	}
	if parity != 0 {
		return fmt.Errorf("the number of terms of %q at level 1 has the wrong parity in lanes %x", g.Families[f].Name, parity)
	}
	return nil
}
