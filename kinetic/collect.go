package kinetic

import (
	"fmt"
	"math/big"
	"sort"

	"sojourn/kinetic/lattice"
)

// collect lists energy families, local tracked families and lines.
func (k *compiler) collect() error {
	for _, f := range k.spec.Families {
		if f.Operator.Extended() {
			return fmt.Errorf("family %q runs along an axis; only tracked operators can", f.Name)
		}
		energy, err := levelEnergies(f, k.spec.Levels)
		if err != nil {
			return err
		}
		if err := checkDisorder(f, k.spec); err != nil {
			return err
		}
		if err := f.Cut.check(k.spec.Lattice.Axes); err != nil {
			return fmt.Errorf("family %q: %w", f.Name, err)
		}
		k.add(family{
			name: f.Name, group: f.Group, factors: f.Operator.Factors(), keep: f.Cut.rules(),
			absent: k.spec.Absent, energy: energy,
		})
	}
	for _, t := range k.spec.Tracked {
		if t.Operator.Extended() {
			k.addLine(t)
			continue
		}
		k.add(family{name: t.Name, factors: t.Operator.Factors(), absent: k.spec.Absent, order: t.Order})
	}
	return nil
}

func (k *compiler) add(f family) {
	k.families = append(k.families, f)
	k.g.Families = append(k.g.Families, Family{
		Name: f.name, Group: f.group, Energy: floats(f.energy), Order: f.order,
		Terms: f.count(k.g.Lattice), terms: f,
	})
}

func floats(r []*big.Rat) []float64 {
	if r == nil {
		return nil
	}
	out := make([]float64, len(r))
	for i := range r {
		out[i], _ = r[i].Float64()
	}
	return out
}

// findSeats lists, for every site of the cell, its moves and the slots that
// they change on an unbounded lattice.
func (k *compiler) findSeats() error {
	g := k.g
	for site := range k.spec.Sites {
		seat := Seat{Site: site}
		for b, op := range k.spec.Bath {
			if actsOn(op, site) {
				seat.Moves = append(seat.Moves, MoveSpec{Bath: b, X: op.X, Z: op.Z})
			}
		}
		for f := range k.families {
			for _, offset := range k.slotOffsets(f, seat) {
				g.Families[f].Slots = append(g.Families[f].Slots, SlotRef{site, len(seat.Slots), offset.Neg()})
				seat.Slots = append(seat.Slots, Slot{f, offset})
			}
		}
		if len(seat.Slots) > MaxSlots {
			return &TooManyTerms{site, len(seat.Slots)}
		}
		if len(seat.Slots)*g.SlotBits > MaxBits && !k.wide {
			return errWide
		}
		for m := range seat.Moves {
			seat.Moves[m].Change = k.freeChange(seat, seat.Moves[m])
		}
		g.Bits = max(g.Bits, 1, len(seat.Slots)*g.SlotBits)
		g.Seats = append(g.Seats, seat)
	}
	return nil
}

func actsOn(op BathOperator, site int) bool {
	if op.Sites == nil {
		return true
	}
	for _, s := range op.Sites {
		if s == site {
			return true
		}
	}
	return false
}

// slotOffsets returns where the terms of family f lie that a move of the seat
// changes.
func (k *compiler) slotOffsets(f int, seat Seat) []lattice.Offset {
	var out []lattice.Offset
	for _, factor := range k.families[f].factors {
		if factor.Site != seat.Site {
			continue
		}
		for _, m := range seat.Moves {
			if turn(m.X, m.Z, factor.X, factor.Z, k.g.Levels) != 0 {
				out = append(out, factor.Exp.Neg())
				break
			}
		}
	}
	sort.Slice(out, func(i, j int) bool { return out[i].Less(out[j]) })
	return out
}

// freeChange is what a move adds to the seat's slots on an unbounded lattice.
func (k *compiler) freeChange(seat Seat, m MoveSpec) []int {
	change := make([]int, len(seat.Slots))
	for b, s := range seat.Slots {
		for _, factor := range k.families[s.Family].factors {
			if factor.Site == seat.Site && factor.Exp == s.Offset.Neg() {
				change[b] = turn(m.X, m.Z, factor.X, factor.Z, k.g.Levels)
			}
		}
	}
	return change
}
