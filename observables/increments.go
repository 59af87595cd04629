package observables

import (
	"slices"

	"sojourn/kinetic"
)

// increments tells by how much a move changes each observable.
type increments struct {
	g      *kinetic.Generator
	r      *reading
	change [][]uint8 // by shape: move, slot: added to the level
	terms  []int     // by observable: terms of its families, or positions
}

func newIncrements(g *kinetic.Generator, r *reading) *increments {
	in := &increments{g: g, r: r, change: make([][]uint8, len(g.Shapes))}
	for i := range g.Shapes {
		s := &g.Shapes[i]
		for m := range s.Rate {
			for b := range g.Seats[s.Seat].Slots {
				in.change[i] = append(in.change[i], slotChange(g, s, m, b))
			}
		}
	}
	for o := range r.layout {
		n := r.components(o)
		if r.layout[o].Kind == Local {
			n = 0
			for _, f := range r.layout[o].Families {
				n += g.Families[f].Terms
			}
		}
		in.terms = append(in.terms, n)
	}
	return in
}

// slotChange returns what a move of a shape adds to the level in a slot: on short
// axes not what it would be on an unbounded lattice. It is read off how the
// change of the family's sum depends on the level in that slot alone.
func slotChange(g *kinetic.Generator, s *kinetic.Shape, m, b int) uint8 {
	if s.Present>>b&1 == 0 {
		return 0
	}
	width := g.SumWidth()
	f := g.Seats[s.Seat].Slots[b].Family
	at := func(pattern int) []int8 {
		return s.Delta[((m<<g.Bits|pattern)*len(g.Families)+f)*width:][:width]
	}
	zero, one := at(0), at(1<<(b*g.SlotBits))
	if g.Levels == 2 {
		if zero[0] != one[0] {
			return 1
		}
		return 0
	}
	for d := range g.Levels {
		want := slices.Clone(zero) // with the term at level 1, not 0
		want[0]++
		want[d]--
		want[1]--
		want[(1+d)%g.Levels]++
		if slices.Equal(want, one) {
			return uint8(d)
		}
	}
	panic("observables: a move changes a term by no number")
}

// slot returns the change of the eigenvalue in a slot by a move.
func (in *increments) slot(shape, m, b, pattern int) float64 {
	g := in.g
	d := int(in.change[shape][m*len(g.Seats[g.Shapes[shape].Seat].Slots)+b])
	if d == 0 {
		return 0
	}
	s := pattern >> (b * g.SlotBits) & (1<<g.SlotBits - 1)
	return in.r.eigenvalue[(s+d)%g.Levels] - in.r.eigenvalue[s]
}

// of writes into dst what a move changes, by observable: scalars by their
// increment, others by the sum over components of its square, divided by the
// norm:
//
//   - Fourier: |sum_b Delta s_b exp(i k.d_b)|^2 over the slots b of the move, d_b
//     the term's offset from the seat;
//   - Local: the squares of all terms of the family, divided by their number: the
//     mean over all terms, which on a periodic lattice equals that over the
//     chosen ones in expectation, and is less noisy;
//   - Operator: 4 for each position, divided by the number of positions.
func (in *increments) of(dst []float64, shape, m, pattern int) {
	for o := range in.r.layout {
		l := &in.r.layout[o]
		switch l.Kind {
		case Fourier, Local:
			dst[o] = in.square(shape, m, pattern, l) / float64(in.terms[o])
		case Operator:
			dst[o] = 4 * float64(in.g.Shapes[shape].LineHits[m][l.Line]) / float64(in.terms[o])
		default:
			dst[o] = in.scalar(shape, m, pattern, l)
		}
	}
}

// square returns the squared increment of a Fourier amplitude, or the sum of
// those of single terms.
func (in *increments) square(shape, m, pattern int, o *slot) float64 {
	var amplitude complex128
	squares := 0.0
	for b, slot := range in.g.Seats[in.g.Shapes[shape].Seat].Slots {
		if !slices.Contains(o.Families, slot.Family) {
			continue
		}
		step := in.slot(shape, m, b, pattern)
		squares += step * step
		amplitude += complex(step, 0) * cellPhase(in.g.Lattice, o.Wavevector, slot.Offset)
	}
	if o.Kind == Fourier {
		return real(amplitude)*real(amplitude) + imag(amplitude)*imag(amplitude)
	}
	return squares
}

// scalar returns the change of a scalar by a move.
func (in *increments) scalar(shape, m, pattern int, o *slot) float64 {
	g := in.g
	width := g.SumWidth()
	delta := g.Shapes[shape].Delta[(m<<g.Bits|pattern)*len(g.Families)*width:][:len(g.Families)*width]
	change := 0.0
	for f := range g.Families {
		energy := g.Families[f].Energy
		if o.Kind == Energy && energy == nil || o.Kind != Energy && !slices.Contains(o.Families, f) {
			continue
		}
		of := delta[f*width:][:width]
		switch {
		case g.Levels == 2 && o.Kind == Energy:
			// A term that goes from -1 to +1 adds 2 to the sum.
			change += float64(of[0]) / 2 * (energy[0] - energy[1])
		case g.Levels == 2:
			change += float64(of[0])
		case o.Kind == Energy:
			for s, n := range of {
				change += float64(n) * energy[s]
			}
		default:
			for s, n := range of {
				change += float64(n) * in.r.eigenvalue[s]
			}
		}
	}
	return change
}
