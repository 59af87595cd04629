package observables

import (
	"sojourn/kinetic"
)

// dirichlet sums the Dirichlet form
//
//	E(f,g) = 1/2 sum_a r_a (Delta_a f)(Delta_a g)
//
// of pairs of observables over states, with the true increments of each jump. A
// seat's rates and increments depend on its shape and pattern alone, so the
// form of a state is its census contracted with a weight for each shape and
// pattern, computed when that entry is first seen. Where couplings vary in size
// rates depend on the place, and the form is summed over the seats; so it is where
// patterns are too wide to be counted.
//
// On a lattice with open edges a Local observable reads chosen terms only, and
// so does its form: it is summed over the seats that show them, in one lane in
// rotation that stands for all.
type dirichlet struct {
	e     kinetic.Engine
	g     *kinetic.Generator
	r     *reading
	pairs [][2]int // of observables
	apart []bool   // by pair: it is not summed over all seats
	jumps *increments

	census  []int64
	index   []int32            // census entry -> 1 + place in weights or steps, 0 if not yet seen
	weights []float64          // place, pair; without varying couplings
	steps   []float64          // place, move, observable; with them
	rates   *kinetic.MoveRates // nil without
	shapes  []uint16           // by address, with varying couplings
	wide    *wideForms         // nil with tables
	open    []openLocal
	lane    int // the next of the rotation

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
		e: e, g: g, r: r, pairs: pairs, jumps: newIncrements(g, r),
		apart: make([]bool, len(pairs)),
		sums:  make([]float64, PairSegments*len(pairs)),
	}
	if g.Wide == nil {
		d.census = make([]int64, len(g.Shapes)<<g.Bits)
		d.index = make([]int32, len(g.Shapes)<<g.Bits)
	} else {
		d.wide = newWideForms(g)
	}
	for p, pair := range pairs {
		s := &r.layout[pair[0]]
		if s.Kind == Local && !g.Lattice.Periodic() {
			d.apart[p] = true
			d.open = append(d.open, newOpenLocal(g, p, r.tracks[s.track].chosen))
		}
	}
	if g.Wide == nil && (d.open != nil || g.Couplings != nil) {
		d.patterns = make([]uint16, g.Addresses())
	}
	if g.Couplings != nil {
		d.rates = g.MoveRates()
		d.shapes = make([]uint16, g.Addresses())
		for a := range d.shapes {
			d.shapes[a] = g.Places[g.PlaceOf(a)].Shape
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
	sums := d.sums[segment*n:][:n]
	switch {
	case d.wide != nil:
		for lane := range d.r.lanes {
			d.addWide(sums, lane)
		}
	case d.rates == nil:
		d.addCensus(sums)
	default:
		for lane := range d.r.lanes {
			d.e.Patterns(lane, d.patterns)
			d.addSeats(sums)
		}
	}
	if d.open != nil {
		if d.wide != nil {
			d.e.(kinetic.WidePatterns).WidePatterns(d.lane, d.wide.patterns)
		} else {
			d.e.Patterns(d.lane, d.patterns)
		}
		d.lane = (d.lane + 1) % d.r.lanes
		for i := range d.open {
			sums[d.open[i].pair] += float64(d.r.lanes) * d.form(&d.open[i])
		}
	}
	d.count[segment] += int64(d.r.lanes)
}

// addCensus sums over shapes and patterns.
func (d *dirichlet) addCensus(sums []float64) {
	clear(d.census)
	d.e.Census(d.census)
	n := len(d.pairs)
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
}

// weigh returns the forms of all pairs for one seat of the given shape and
// pattern.
func (d *dirichlet) weigh(entry int) []float64 {
	shape, pattern := entry>>d.g.Bits, entry&(1<<d.g.Bits-1)
	w := make([]float64, len(d.pairs))
	steps := make([]float64, len(d.r.layout))
	for m := range d.g.Shapes[shape].Rate {
		if rate := d.g.Shapes[shape].Rate[m][pattern]; rate > 0 {
			d.jumps.of(steps, shape, m, pattern)
			d.accumulate(w, rate, steps)
		}
	}
	return w
}

// accumulate adds rate/2 times the products of the increments of a jump.
func (d *dirichlet) accumulate(sums []float64, rate float64, steps []float64) {
	for p, pair := range d.pairs {
		switch {
		case d.apart[p]:
		case d.r.layout[pair[0]].Scalar():
			sums[p] += rate / 2 * steps[pair[0]] * steps[pair[1]]
		default:
			sums[p] += rate / 2 * steps[pair[0]]
		}
	}
}

// addSeats sums over the seats of one lane.
func (d *dirichlet) addSeats(sums []float64) {
	n := len(d.r.layout)
	steps := make([]float64, n)
	for a, shape := range d.shapes {
		pattern := d.patterns[a]
		entry := int(shape)<<d.g.Bits | int(pattern)
		moves := len(d.g.Shapes[shape].Rate)
		if d.index[entry] == 0 {
			for m := range moves {
				d.jumps.of(steps, int(shape), m, int(pattern))
				d.steps = append(d.steps, steps...)
			}
			d.index[entry] = int32(len(d.steps)/n-moves) + 1
		}
		at := int(d.index[entry]-1) * n
		for m := range moves {
			rate, change := d.rates.Rate(a, shape, m, pattern)
			if rate == 0 {
				continue
			}
			copy(steps, d.steps[at+m*n:][:n])
			for o := range steps {
				if d.r.layout[o].Kind == Energy {
					steps[o] = change
				}
			}
			d.accumulate(sums, rate, steps)
		}
	}
}

// form returns the mean over the chosen terms of E(s, s).
func (d *dirichlet) form(o *openLocal) float64 {
	sum := 0.0
	for _, at := range o.shown {
		shape := &d.g.Shapes[at.shape]
		var p uint64
		if d.wide != nil {
			p = d.wide.patterns[at.address]
		} else {
			p = uint64(d.patterns[at.address])
		}
		for m := range shape.Change {
			step := d.jumps.slot(int(at.shape), m, int(at.slot), int(p))
			if step == 0 {
				continue
			}
			var rate float64
			switch {
			case d.wide != nil:
				rate = d.g.Wide.Rate(int(at.shape), m, p)
			case d.rates != nil:
				rate, _ = d.rates.Rate(int(at.address), at.shape, m, uint16(p))
			default:
				rate = shape.Rate[m][p]
			}
			sum += rate / 2 * squared(step)
		}
	}
	return sum / float64(o.components)
}
