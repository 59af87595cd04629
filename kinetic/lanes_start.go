package kinetic

import "fmt"

// start sets the words to the state in which the trajectories begin.
func (e *lanes) start(start Start, src *source) error {
	e.setReference()
	switch start {
	case StartReference:
	case StartRandom:
		e.eachSeat(func(base int32, _ int, place *lanePlace, moves []zonedMove, row, col int) {
			for m := range moves {
				e.apply(&moves[m], base, row, col, src.next())
			}
		})
	case StartUp, StartDown:
		return e.align(start)
	default:
		return fmt.Errorf("start %q is not one of reference, random, up, down", start)
	}
	return nil
}

func (e *lanes) setReference() {
	g, l := e.plan.g, e.plan.layout
	clear(e.words)
	for i, levels := range g.ReferenceLines {
		for p, s := range levels {
			if s != 0 && (g.Lines[i].Exists == nil || g.Lines[i].Exists[p]) {
				e.words[int(l.lines[i])+p] = ^uint64(0)
			}
		}
	}
	for f, levels := range g.Reference {
		if levels == nil || l.level[f] < 0 {
			continue
		}
		for c, s := range levels {
			if s == 1 && g.TermExists(f, c) {
				e.words[l.term(f, g.Lattice.Coord(c), 0)[0]] = ^uint64(0)
			}
		}
	}
}

// eachSeat calls visit for every address in order: base is the first word of its
// cell, moves are those of its seat.
func (e *lanes) eachSeat(visit func(base int32, seat int, place *lanePlace, moves []zonedMove, row, col int)) {
	p := e.plan
	seats := len(p.g.Seats)
	base := int32(0)
	for row, zr := range p.zoneRow {
		for col, zc := range p.zoneCol {
			zone := int(zr + zc)
			for seat := range seats {
				first := zone*len(p.moves) + p.first[seat]
				moves := p.zoned[first : first+len(p.g.Seats[seat].Moves)]
				visit(base, seat, &p.places[zone*seats+seat], moves, row, col)
			}
			base += int32(p.layout.planes)
		}
	}
}

// apply makes a move in the given lanes.
func (e *lanes) apply(mv *zonedMove, base int32, row, col int, which uint64) {
	p := e.plan
	for _, w := range p.words[mv.changes.first:mv.changes.last] {
		e.words[base+w] ^= which
	}
	for h := mv.firstHit; h < mv.lastHit; h++ {
		e.words[p.hitWord(h, row, col)] ^= which
	}
}

// slot returns the levels of a term that a seat shows.
func (e *lanes) slot(place *lanePlace, slot int, base int32) uint64 {
	p := e.plan
	var w uint64
	list := p.slots[int(place.first)+slot]
	for _, d := range p.words[list.first:list.last] {
		w ^= e.words[base+d]
	}
	return w
}

// align turns every spin to the given side, each by a move of its own site.
func (e *lanes) align(start Start) error {
	g := e.plan.g
	want := uint64(0)
	if start == StartDown {
		want = ^uint64(0)
	}
	spins := false
	for f := range g.Families {
		if g.Families[f].Order {
			spins = true
			e.alignFamily(f, want)
		}
	}
	if !spins {
		return ErrNoSpins
	}
	levels := make([]uint64, g.Cells())
	for f := range g.Families {
		if !g.Families[f].Order {
			continue
		}
		e.Words(f, levels)
		for c, w := range levels {
			if w != want && g.TermExists(f, c) {
				return fmt.Errorf("the bath operators cannot turn the spin of cell %v to start %s; use reference or random", g.Lattice.Coord(c), start)
			}
		}
	}
	return nil
}

func (e *lanes) alignFamily(order int, want uint64) {
	g := e.plan.g
	e.eachSeat(func(base int32, _ int, place *lanePlace, moves []zonedMove, row, col int) {
		if b, m := orderMove(g, &g.Shapes[place.shape], order); b >= 0 {
			e.apply(&moves[m], base, row, col, e.slot(place, b, base)^want)
		}
	})
}
