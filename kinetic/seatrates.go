package kinetic

import (
	"math"

	"sojourn/kinetic/bath"
)

// seatRates computes the rates of a seat's moves from its pattern and its own
// couplings, and bounds of them that are cheaper to have.
type seatRates struct {
	g     *Generator
	j     []int32 // of energy terms, `slots` to a seat
	slots int
	// moves lists, by shape and move, the law and the slots with energy that
	// the move turns.
	moves [][]turning
	unit  float64
	beta  float64
	bins  []rateBins // by bath operator; see findBins
}

type turning struct {
	acts  bool // it changes something
	bath  int
	law   *bath.Law
	slots []uint8
}

// rateBins bounds the rates of a law: every energy w that occurs falls into a
// bin, (w+offset)>>shift, and no rate in a bin is above its ceiling or below its
// floor.
type rateBins struct {
	offset int64
	shift  uint
	bounds []rateBounds
	octave []uint8 // of the ceiling, once octaves are chosen
}

type rateBounds struct{ floor, ceiling float64 }

// binsAtMost is how many bins there are at most. Rates within one differ by a
// factor of about exp(beta*range/binsAtMost).
const binsAtMost = 1 << 10

func newSeatRates(g *Generator) *seatRates {
	r := &seatRates{g: g, unit: 2 * g.Couplings.Unit, beta: g.Spec.Beta}
	r.j, r.slots = g.seatCouplings()
	r.moves = make([][]turning, len(g.Shapes))
	seen := make([]bool, len(g.Shapes))
	for _, p := range g.Places {
		if seen[p.Shape] {
			continue
		}
		seen[p.Shape] = true
		shape := &g.Shapes[p.Shape]
		for m, move := range g.Seats[p.Seat].Moves {
			t := turning{acts: shape.acts[m], bath: move.Bath, law: &g.Spec.Bath[move.Bath].Law}
			for b := range g.Seats[p.Seat].Slots {
				if shape.turned[m]>>b&1 != 0 && g.Families[g.Seats[p.Seat].Slots[b].Family].Energy != nil {
					t.slots = append(t.slots, uint8(b))
				}
			}
			r.moves[p.Shape] = append(r.moves[p.Shape], t)
		}
	}
	return r
}

// energy is the energy that a move hands to the bath, in units of 2 Unit.
func (r *seatRates) energy(a int, t *turning, pattern uint32) int64 {
	j := r.j[a*r.slots : (a+1)*r.slots]
	w := int64(0)
	for _, b := range t.slots {
		s := int64(pattern >> (b & 31) & 1)
		w += int64(j[b]) * (2*s - 1)
	}
	return w
}

// move is the rate of one move, and the energy it hands to the bath.
func (r *seatRates) move(a int, t *turning, pattern uint32) (rate float64, w int64) {
	if !t.acts {
		return 0, 0
	}
	w = r.energy(a, t, pattern)
	return t.law.Float(float64(w)*r.unit, r.beta), w
}

// widest is the largest energy that a move of a bath operator can hand to the
// bath anywhere, all its terms letting go of theirs.
func (r *seatRates) widest(bathOperator int) int64 {
	most := int64(0)
	r.each(func(a int, shape uint16) {
		for i := range r.moves[shape] {
			t := &r.moves[shape][i]
			w := int64(0)
			for _, b := range t.slots {
				j := int64(r.j[a*r.slots+int(b)])
				w += max(j, -j)
			}
			if t.bath == bathOperator {
				most = max(most, w)
			}
		}
	})
	return most
}

// findBins fills in the bounds of all laws.
func (r *seatRates) findBins() {
	for b, op := range r.g.Spec.Bath {
		c := rateBins{offset: r.widest(b)}
		for c.offset*2>>c.shift >= binsAtMost {
			c.shift++
		}
		c.bounds = make([]rateBounds, c.offset*2>>c.shift+1)
		c.octave = make([]uint8, len(c.bounds))
		for i := range c.bounds {
			low := int64(i)<<c.shift - c.offset
			high := min(low+1<<c.shift-1, c.offset)
			x, y := float64(low)*r.unit, float64(high)*r.unit
			c.bounds[i] = rateBounds{op.Law.Floor(x, y, r.beta), op.Law.Ceiling(x, y, r.beta)}
		}
		r.bins = append(r.bins, c)
	}
}

// most bounds the rate of any seat, and least the smallest ceiling of a move
// that is not 0.
func (r *seatRates) most() (most, least float64) {
	least = math.Inf(1)
	top := make([]float64, len(r.bins))
	for b, c := range r.bins {
		for _, x := range c.bounds {
			top[b] = math.Max(top[b], x.ceiling)
			if x.ceiling > 0 {
				least = math.Min(least, x.ceiling)
			}
		}
	}
	for _, moves := range r.moves {
		sum := 0.0
		for i := range moves {
			sum += top[moves[i].bath]
		}
		most = math.Max(most, sum)
	}
	return most, least
}

// octave returns the octave of the bound of a seat's rate.
func (r *seatRates) octave(a int, shape uint16, pattern uint32, o *octaves) uint32 {
	moves := r.moves[shape]
	if len(moves) == 1 && moves[0].acts {
		t := &moves[0]
		c := &r.bins[t.bath]
		return uint32(c.octave[uint64(r.energy(a, t, pattern)+c.offset)>>(c.shift&63)])
	}
	sum := 0.0
	for i := range moves {
		if t := &moves[i]; t.acts {
			sum += r.bins[t.bath].at(r.energy(a, t, pattern)).ceiling
		}
	}
	return o.of(sum)
}

// at returns the bounds of the rate at an energy.
func (c *rateBins) at(w int64) *rateBounds { return &c.bounds[uint64(w+c.offset)>>(c.shift&63)] }

// choose returns the move of a seat that x stands for, and the energy that it
// hands to the bath; -1 if none. Moves share out x >= 0 by the ceilings of their
// rates, and each claims as much of its share as its rate. So the rate itself
// is seldom needed.
func (r *seatRates) choose(a int, shape uint16, pattern uint32, x float64) (move int, w int64) {
	moves := r.moves[shape]
	for i := range moves {
		t := &moves[i]
		if !t.acts {
			continue
		}
		w := r.energy(a, t, pattern)
		c := r.bins[t.bath].at(w)
		if x < c.ceiling {
			if x < c.floor || x < t.law.Float(float64(w)*r.unit, r.beta) {
				return i, w
			}
			return -1, 0
		}
		x -= c.ceiling
	}
	return -1, 0
}

// total is the rate of a seat.
func (r *seatRates) total(a int, shape uint16, pattern uint32) float64 {
	sum := 0.0
	for i := range r.moves[shape] {
		rate, _ := r.move(a, &r.moves[shape][i], pattern)
		sum += rate
	}
	return sum
}

// each calls f for every seat with its shape.
func (r *seatRates) each(f func(a int, shape uint16)) {
	for a := range r.g.Addresses() {
		f(a, r.g.Places[r.g.PlaceOf(a)].Shape)
	}
}

// maxMoves bounds, by bath operator, the rate of a move of any seat: that of
// letting go of the energy of all terms. Without its cutoff every law grows with
// the energy.
func (r *seatRates) maxMoves() []float64 {
	out := make([]float64, len(r.g.Spec.Bath))
	for b, op := range r.g.Spec.Bath {
		op.Law.Cutoff = 0
		out[b] = op.Law.Float(float64(r.widest(b))*r.unit, r.beta)
	}
	return out
}
