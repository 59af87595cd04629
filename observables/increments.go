package observables

import (
	"slices"

	"sojourn/kinetic"
)

// increments tells by how much a move changes each observable.
type increments struct {
	g     *kinetic.Generator
	r     *reading
	terms []int // by observable: terms of its families, or positions
}

func newIncrements(g *kinetic.Generator, r *reading) *increments {
	in := &increments{g: g, r: r}
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

// slot returns the change of the value in a slot by a move.
func (in *increments) slot(shape, m, b, pattern int) complex128 {
	g := in.g
	of := &g.Shapes[shape]
	d := int(of.Change[m][b])
	if d == 0 {
		return 0
	}
	s := pattern >> (b * g.SlotBits) & (1<<g.SlotBits - 1)
	value := in.r.value[g.Seats[of.Seat].Slots[b].Family]
	return value[(s+d)%g.Levels] - value[s]
}

// of writes into dst what a move changes, by observable: scalars by their
// increment, others by the sum over components of its square, divided by the
// norm:
//
//   - complex sums: the squared modulus of their increment;
//   - Fourier: |sum_b Delta s_b exp(i k.d_b)|^2 over the slots b of the move, d_b
//     the term's offset from the seat;
//   - Local: the squares of all terms of the family, divided by their number: the
//     mean over all terms, which on a periodic lattice equals that over the
//     chosen ones in expectation, and is less noisy;
//   - Operator: |w^d - 1|^2 for each position whose level grows by d, which is 4
//     for two levels, divided by the number of positions.
func (in *increments) of(dst []float64, shape, m, pattern int) {
	for o := range in.r.layout {
		l := &in.r.layout[o]
		switch l.Kind {
		case Fourier, Local:
			dst[o] = in.square(shape, m, pattern, l) / float64(in.terms[o])
		case Operator:
			dst[o] = in.line(shape, m, l.Line) / float64(in.terms[o])
		default:
			sum := in.sum(shape, m, pattern, l)
			if dst[o] = real(sum); l.amplitude() {
				dst[o] = squared(sum)
			}
		}
	}
}

// squared returns |c|^2.
func squared(c complex128) float64 { return real(c)*real(c) + imag(c)*imag(c) }

// line returns the sum of the squared increments of a line's positions.
func (in *increments) line(shape, m, line int) float64 {
	s := &in.g.Shapes[shape]
	if in.g.Levels == 2 {
		return 4 * float64(s.LineHits[m][line])
	}
	sum := 0.0
	for _, d := range s.LineChanges[m][line] {
		sum += squared(turn(int(d), in.g.Levels) - 1)
	}
	return sum
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
		squares += squared(step)
		amplitude += step * cellPhase(in.g.Lattice, o.Wavevector, slot.Offset)
	}
	if o.Kind == Fourier {
		return squared(amplitude)
	}
	return squares
}

// sum returns the change of an energy or a sum of terms by a move.
func (in *increments) sum(shape, m, pattern int, o *slot) complex128 {
	g := in.g
	if g.Levels > 2 {
		return in.levelSum(shape, m, pattern, o)
	}
	delta := g.Shapes[shape].Delta[(m<<g.Bits|pattern)*len(g.Families):][:len(g.Families)]
	change := 0.0
	for f := range g.Families {
		energy := g.Families[f].Energy
		switch {
		case o.Kind == Energy && energy != nil:
			// A term that goes from -1 to +1 adds 2 to the sum.
			change += float64(delta[f]) / 2 * (energy[0] - energy[1])
		case o.Kind != Energy && slices.Contains(o.Families, f):
			change += float64(delta[f])
		}
	}
	return complex(change, 0)
}

// levelSum is sum for more than two levels.
func (in *increments) levelSum(shape, m, pattern int, o *slot) complex128 {
	g := in.g
	of := &g.Shapes[shape]
	var change complex128
	for b, d := range of.Change[m] {
		family := g.Seats[of.Seat].Slots[b].Family
		energy := g.Families[family].Energy
		switch {
		case d == 0:
		case o.Kind != Energy:
			if slices.Contains(o.Families, family) {
				change += in.slot(shape, m, b, pattern)
			}
		case energy != nil:
			s := pattern >> (b * g.SlotBits) & (1<<g.SlotBits - 1)
			change += complex(energy[(s+int(d))%g.Levels]-energy[s], 0)
		}
	}
	return change
}
