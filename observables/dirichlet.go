package observables

import (
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// dirichlet sums the Dirichlet form
//
//	E(f,g) = 1/2 sum_a r_a (Delta_a f)(Delta_a g)
//
// of pairs of observables over states, with the true increments of each jump. A
// seat's rates and increments depend on its shape and pattern alone, so the
// form of a state is its census contracted with a weight for each shape and
// pattern, computed when that entry is first seen:
//
//   - scalars: increments of the family sums and of the energy;
//   - Fourier: |sum_b Delta s_b exp(i k.d_b)|^2 over the slots b of the move, d_b
//     the term's offset from the seat;
//   - Local on a periodic lattice: 4 for each term of the family that the move
//     turns over, divided by the number of terms: the mean over all terms, which
//     equals that over the chosen ones in expectation and is less noisy;
//   - Operator: 4 for each position that the move turns over, divided by the
//     number of positions.
//
// On a lattice with open edges a Local observable reads chosen terms only, and
// so does its form: it is summed over the seats that show them.
type dirichlet struct {
	e     kinetic.Engine
	g     *kinetic.Generator
	r     *reading
	pairs [][2]int // of observables

	census  []int64
	index   []int32   // census entry -> 1 + place in weights, 0 if not yet seen
	weights []float64 // place, pair
	open    []openLocal
	local   []bool // by pair: whether it is summed over open

	sums     []float64 // segment, pair
	count    [PairSegments]int64
	patterns []uint16
}

// openLocal sums the form of one Local observable over the seats that show its
// chosen terms.
type openLocal struct {
	pair       int
	components int
	shown      []shown
}

type shown struct {
	address int32
	slot    uint8
	shape   uint16
}

func newDirichlet(e kinetic.Engine, g *kinetic.Generator, r *reading, pairs [][2]int) *dirichlet {
	d := &dirichlet{
		e: e, g: g, r: r, pairs: pairs,
		census: make([]int64, len(g.Shapes)<<g.Bits),
		index:  make([]int32, len(g.Shapes)<<g.Bits),
		local:  make([]bool, len(pairs)),
		sums:   make([]float64, PairSegments*len(pairs)),
	}
	if g.Lattice.Periodic() {
		return d
	}
	for p, pair := range pairs {
		if s := &r.layout[pair[0]]; s.Kind == Local {
			d.local[p] = true
			d.open = append(d.open, newOpenLocal(g, p, r.tracks[s.track].chosen))
			d.patterns = r.patterns
		}
	}
	return d
}

func newOpenLocal(g *kinetic.Generator, pair int, chosen []chosenTerm) openLocal {
	o := openLocal{pair: pair, components: len(chosen)}
	for _, c := range chosen {
		c.loc.each(c.cell, func(address, slot int) bool {
			o.shown = append(o.shown, shown{int32(address), uint8(slot), g.Places[g.PlaceOf(address)].Shape})
			return true
		})
	}
	return o
}

// add takes in the present state of all lanes.
func (d *dirichlet) add(segment int) {
	n := len(d.pairs)
	if n == 0 {
		return
	}
	clear(d.census)
	d.e.Census(d.census)
	sums := d.sums[segment*n:][:n]
	for entry, seats := range d.census {
		if seats == 0 {
			continue
		}
		at := d.index[entry]
		if at == 0 {
			d.weights = append(d.weights, d.weigh(entry)...)
			at = int32(len(d.weights) / n)
			d.index[entry] = at
		}
		for p, w := range d.weights[int(at-1)*n:][:n] {
			sums[p] += float64(seats) * w
		}
	}
	for lane := 0; lane < d.r.lanes && len(d.open) > 0; lane++ {
		d.e.Patterns(lane, d.patterns)
		for i := range d.open {
			sums[d.open[i].pair] += d.open[i].form(d.g, d.patterns)
		}
	}
	d.count[segment] += int64(d.r.lanes)
}

// form returns the mean over the chosen terms of E(s, s) = 1/2 sum r 4.
func (o *openLocal) form(g *kinetic.Generator, patterns []uint16) float64 {
	sum := 0.0
	for _, at := range o.shown {
		shape := &g.Shapes[at.shape]
		p := int(patterns[at.address])
		for m := range shape.Rate {
			if turns(g, shape, m, int(at.slot)) {
				sum += 2 * shape.Rate[m][p]
			}
		}
	}
	return sum / float64(o.components)
}

// turns reports whether move m of a shape turns over the term in a slot: only
// then does the level of that slot decide how the sum of its family changes.
func turns(g *kinetic.Generator, s *kinetic.Shape, m, slot int) bool {
	n := len(g.Families)
	f := g.Seats[s.Seat].Slots[slot].Family
	return s.Present>>slot&1 == 1 && s.Delta[(m<<g.Bits|1<<slot)*n+f] != s.Delta[(m<<g.Bits)*n+f]
}

// weigh returns the forms of all pairs for one seat of the given shape and
// pattern.
func (d *dirichlet) weigh(entry int) []float64 {
	g := d.g
	shape := &g.Shapes[entry>>g.Bits]
	pattern := entry & (1<<g.Bits - 1)
	w := make([]float64, len(d.pairs))
	for m := range shape.Rate {
		rate := shape.Rate[m][pattern]
		if rate == 0 {
			continue
		}
		for p, pair := range d.pairs {
			if !d.local[p] {
				w[p] += rate / 2 * d.product(shape, m, pattern, pair)
			}
		}
	}
	return w
}

// product returns (Delta f)(Delta g) of a move.
func (d *dirichlet) product(s *kinetic.Shape, m, pattern int, pair [2]int) float64 {
	f, g := &d.r.layout[pair[0]], &d.r.layout[pair[1]]
	switch f.Kind {
	case Fourier:
		a := d.amplitude(s, m, pattern, f)
		return real(a)*real(a) + imag(a)*imag(a)
	case Local:
		terms := 0
		for _, family := range f.Families {
			terms += d.g.Families[family].Terms
		}
		n := 0
		for b, slot := range d.g.Seats[s.Seat].Slots {
			if slices.Contains(f.Families, slot.Family) && turns(d.g, s, m, b) {
				n++
			}
		}
		return 4 * float64(n) / float64(terms)
	case Operator:
		return 4 * float64(s.LineHits[m][f.Line]) / float64(d.r.components(pair[0]))
	}
	return d.increment(s, m, pattern, f) * d.increment(s, m, pattern, g)
}

// increment returns the change of a scalar by a move.
func (d *dirichlet) increment(s *kinetic.Shape, m, pattern int, o *slot) float64 {
	families := len(d.g.Families)
	delta := s.Delta[(m<<d.g.Bits|pattern)*families:][:families]
	if o.Kind != Energy {
		n := 0
		for _, f := range o.Families {
			n += int(delta[f])
		}
		return float64(n)
	}
	change := 0.0
	for f, n := range delta {
		if e := d.g.Families[f].Energy; e != nil {
			// A term that goes from -1 to +1 adds 2 to the sum and
			// E(0) - E(1) to the energy.
			change += float64(n) / 2 * (e[0] - e[1])
		}
	}
	return change
}

// amplitude returns the change of a Fourier amplitude by a move, up to the
// phase of the seat's cell.
func (d *dirichlet) amplitude(s *kinetic.Shape, m, pattern int, o *slot) complex128 {
	var sum complex128
	for b, slot := range d.g.Seats[s.Seat].Slots {
		if !slices.Contains(o.Families, slot.Family) || !turns(d.g, s, m, b) {
			continue
		}
		phase := complex(float64(4*(pattern>>b&1)-2), 0)
		for a := range lattice.MaxAxes {
			phase *= turn(o.Wavevector[a]*slot.Offset[a], d.g.Lattice.Size[a])
		}
		sum += phase
	}
	return sum
}
