package kinetic

import (
	"math"

	"sojourn/kinetic/bath"
)

// seatRates computes the rates of a seat's moves from its pattern and its own
// couplings.
type seatRates struct {
	g     *Generator
	j     []int32 // slots to a seat
	slots int
	// moves lists, by shape and move, the law and the slots with energy that
	// the move turns.
	moves [][]turning
	unit  float64
	beta  float64
}

type turning struct {
	acts  bool // it changes something
	law   *bath.Law
	slots []uint8
}

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
			t := turning{acts: shape.acts[m], law: &g.Spec.Bath[move.Bath].Law}
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
		s := int64(pattern >> b & 1)
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

// total is the rate of a seat.
func (r *seatRates) total(a int, shape uint16, pattern uint32) float64 {
	sum := 0.0
	for i := range r.moves[shape] {
		rate, _ := r.move(a, &r.moves[shape][i], pattern)
		sum += rate
	}
	return sum
}

// bound returns a rate that no move of law t reaches beyond at a seat: all its
// terms let go of their energy. Without its cutoff every law grows with w.
func (r *seatRates) bound(a int, t *turning) float64 {
	w := int64(0)
	for _, b := range t.slots {
		j := int64(r.j[a*r.slots+int(b)])
		w += max(j, -j)
	}
	if !t.acts {
		return 0
	}
	law := *t.law
	law.Cutoff = 0
	return law.Float(float64(w)*r.unit, r.beta)
}

// each calls f for every seat with its shape.
func (r *seatRates) each(f func(a int, shape uint16)) {
	for a := range r.g.Addresses() {
		f(a, r.g.Places[r.g.PlaceOf(a)].Shape)
	}
}

// maxSeat bounds the rate of a seat, maxMove that of a move.
func (r *seatRates) maxSeat() float64 {
	best := 0.0
	r.each(func(a int, shape uint16) {
		sum := 0.0
		for i := range r.moves[shape] {
			sum += r.bound(a, &r.moves[shape][i])
		}
		best = math.Max(best, sum)
	})
	return best
}

func (r *seatRates) maxMove() float64 {
	best := 0.0
	r.each(func(a int, shape uint16) {
		for i := range r.moves[shape] {
			best = math.Max(best, r.bound(a, &r.moves[shape][i]))
		}
	})
	return best
}
