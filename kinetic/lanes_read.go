package kinetic

// LaneWords is what an engine offers whose lanes are the bits of words: bit l
// of a word belongs to lane l.
type LaneWords interface {
	Engine
	// Words writes the levels of a family's terms by cell, or those of line l for
	// family = len(Families)+l by position; 0 where there is none.
	Words(family int, dst []uint64)
	// SlotWords writes the levels that slots[i] of the seat at addresses[i] shows.
	SlotWords(addresses []int32, slots []uint8, dst []uint64)
}

// stretch is a run of cells in a row that lie in the same zone.
type stretch struct {
	col, n int
	zone   uint32 // relative to the row's
}

// stretches divides a row into runs of equal zone.
func (p *lanePlan) stretches() []stretch {
	var out []stretch
	for col, zone := range p.zoneCol {
		if k := len(out) - 1; k >= 0 && out[k].zone == zone {
			out[k].n++
			continue
		}
		out = append(out, stretch{col, 1, zone})
	}
	return out
}

// wordsOf lists the differences of a range.
func (p *lanePlan) wordsOf(l wordList) []int32 { return p.words[l.first:l.last] }

// Sums counts words and remembers what it found until the state changes.
func (e *lanes) Sums(dst []int64) []int64 {
	e.count()
	return append(dst, e.sums...)
}

// count brings sums up to date.
func (e *lanes) count() {
	if e.fresh {
		return
	}
	e.fresh = true
	g, p := e.plan.g, e.plan
	width := len(g.Families) + len(g.Lines)
	for lane := range lanesPerWord {
		copy(e.sums[lane*width:], p.still)
	}
	c := &e.counter
	for f := range g.Families {
		e.countFamily(f)
		c.addTo(e.sums[f:], width, -2)
	}
	for l, line := range g.Lines {
		c.add(e.words[p.layout.lines[l]:][:line.Positions])
		c.addTo(e.sums[len(g.Families)+l:], width, -2)
	}
}

// countFamily counts the terms of a family at level 1.
func (e *lanes) countFamily(f int) {
	l := e.plan.layout
	if l.flips {
		e.eachStretch(f, e.countRun)
	} else if l.level[f] >= 0 {
		e.countRun(0, l.g.Cells(), l.words[f][:])
	}
}

// countRun counts terms of n cells.
func (e *lanes) countRun(base, n int, words []int32) {
	c := &e.counter
	if e.plan.layout.planes == 1 {
		x := e.words[base+int(words[0]):][:n]
		switch len(words) {
		case 1:
			c.add(x)
			return
		case 2:
			c.addPairs(x, e.words[base+int(words[1]):][:n])
			return
		}
	}
	some := &e.some
	for n > 0 {
		k := min(n, gathered)
		e.gather(words, base, some[:k])
		c.add(some[:k])
		base += k * e.plan.layout.planes
		n -= k
	}
}

// gather writes the levels of terms of successive cells, given by the
// differences of their words from the first word of the cell.
func (e *lanes) gather(words []int32, base int, dst []uint64) {
	planes := e.plan.layout.planes
	if len(words) == 0 {
		clear(dst)
		return
	}
	at := base + int(words[0])
	if len(words) == 1 {
		for i := range dst {
			dst[i] = e.words[at]
			at += planes
		}
		return
	}
	with := base + int(words[1])
	for i := range dst {
		dst[i] = e.words[at] ^ e.words[with]
		at += planes
		with += planes
	}
	for _, d := range words[2:] {
		at := base + int(d)
		for i := range dst {
			dst[i] ^= e.words[at]
			at += planes
		}
	}
}

// eachStretch calls visit for runs of cells in which a seat stands for a term of
// family f: the words of the term, as differences from the first word of a cell,
// the first of which is at base. Runs with the same differences are joined.
func (e *lanes) eachStretch(f int, visit func(base, n int, words []int32)) {
	p := e.plan
	seats := len(p.g.Seats)
	planes := p.layout.planes
	for _, ref := range p.g.Families[f].Slots {
		base, n := 0, 0
		var list wordList
		for row, zr := range p.zoneRow {
			cell := row * int(p.cols)
			for _, s := range p.runs {
				place := &p.places[int(zr+s.zone)*seats+ref.Seat]
				own := p.slots[int(place.first)+ref.Slot]
				if place.own>>ref.Slot&1 == 0 || own != list {
					if n > 0 {
						visit(base*planes, n, p.wordsOf(list))
					}
					base, n, list = cell, 0, own
				}
				if place.own>>ref.Slot&1 != 0 {
					n += s.n
				}
				cell += s.n
			}
		}
		if n > 0 {
			visit(base*planes, n, p.wordsOf(list))
		}
	}
}

// Energy is the total energy of a lane.
func (e *lanes) Energy(lane int) float64 {
	e.count()
	g := e.plan.g
	sums := e.sums[lane*(len(g.Families)+len(g.Lines)):]
	sum := 0.0
	for f, fam := range g.Families {
		if fam.Energy != nil {
			sum += fam.energyOf(sums[f])
		}
	}
	return sum
}

// Census counts seats by shape and pattern, over all lanes.
func (e *lanes) Census(dst []int64) {
	p := e.plan
	if e.census == nil {
		e.census = newPatternCounter(p.g)
	}
	seats := len(p.g.Seats)
	for seat := range seats {
		base := 0
		for _, zr := range p.zoneRow {
			for _, s := range p.runs {
				e.countSeats(&p.places[int(zr+s.zone)*seats+seat], base, s.n, dst)
				base += s.n * p.layout.planes
			}
		}
	}
	e.census.finish(dst)
}

// countSeats counts the patterns of a run of seats in one place.
func (e *lanes) countSeats(place *lanePlace, base, n int, dst []int64) {
	p, c := e.plan, e.census
	c.begin(int(place.shape), dst)
	for n > 0 {
		first, k := c.room(n, dst)
		for i, b := range c.slots {
			e.gather(p.wordsOf(p.slots[int(place.first)+b]), base, c.words[i][first:first+k])
		}
		base += k * p.layout.planes
		n -= k
	}
}

// Words writes the levels of a family's terms, or of a line, in all lanes.
func (e *lanes) Words(family int, dst []uint64) {
	p := e.plan
	g := p.g
	if l := family - len(g.Families); l >= 0 {
		copy(dst, e.words[p.layout.lines[l]:][:g.Lines[l].Positions])
		return
	}
	clear(dst)
	e.eachTerm(family, func(cell int, w uint64) { dst[cell] = w })
	if g.Reference != nil {
		for c, s := range g.Reference[family] {
			if s == 1 && p.layout.level[family] < 0 && g.TermExists(family, c) {
				dst[c] = ^uint64(0)
			}
		}
	}
}

// eachTerm calls visit for every term of a family that has words.
func (e *lanes) eachTerm(f int, visit func(cell int, w uint64)) {
	p := e.plan
	if !p.layout.flips {
		if p.layout.level[f] < 0 {
			return
		}
		for c := range p.g.Cells() {
			if p.g.TermExists(f, c) {
				visit(c, e.words[p.layout.term(f, p.g.Lattice.Coord(c), 0)[0]])
			}
		}
		return
	}
	e.eachSeat(func(base int32, seat int, place *lanePlace, _ []zonedMove, _, _ int) {
		for _, b := range slotsOf(place.own) {
			slot := p.g.Seats[seat].Slots[b]
			if slot.Family == f {
				t, _ := p.g.Lattice.Wrap(p.g.Lattice.Coord(int(base)/p.layout.planes), slot.Offset)
				visit(p.g.Lattice.Index(t), e.slot(place, b, base))
			}
		}
	})
}

// SlotWords writes what slots show.
func (e *lanes) SlotWords(addresses []int32, slots []uint8, dst []uint64) {
	p := e.plan
	seats := len(p.g.Seats)
	cols := int(p.cols)
	for i, a := range addresses {
		cell, seat := int(a)/seats, int(a)%seats
		zone := int(p.zoneRow[cell/cols] + p.zoneCol[cell%cols])
		dst[i] = e.slot(&p.places[zone*seats+seat], int(slots[i]), int32(cell*p.layout.planes))
	}
}

// Terms writes the levels of one lane.
func (e *lanes) Terms(family, lane int, dst []uint8) {
	g := e.plan.g
	words := make([]uint64, len(dst))
	e.Words(family, words)
	l := family - len(g.Families)
	for i, w := range words {
		dst[i] = uint8(w >> lane & 1)
		switch {
		case l < 0 && g.Families[family].Terms < g.Cells() && !g.TermExists(family, i),
			l >= 0 && g.Lines[l].Exists != nil && !g.Lines[l].Exists[i]:
			dst[i] = Absent
		}
	}
}

// Patterns writes the pattern of every address in one lane.
func (e *lanes) Patterns(lane int, dst []uint16) {
	p := e.plan
	seats := len(p.g.Seats)
	base := 0
	for _, zr := range p.zoneRow {
		for _, s := range p.runs {
			first := base / p.layout.planes * seats
			for seat := range seats {
				e.readPatterns(&p.places[int(zr+s.zone)*seats+seat], base, s.n, lane, dst[first+seat:])
			}
			base += s.n * p.layout.planes
		}
	}
}

// readPatterns writes the patterns of a run of seats in one place.
func (e *lanes) readPatterns(place *lanePlace, base, n, lane int, dst []uint16) {
	p := e.plan
	seats := len(p.g.Seats)
	var w [gathered]uint64
	for first := 0; first < n; first += gathered {
		some := w[:min(n-first, gathered)]
		for b := range place.slots {
			e.gather(p.wordsOf(p.slots[int(place.first)+b]), base+first*p.layout.planes, some)
			at := first * seats
			for _, v := range some {
				if b == 0 {
					dst[at] = 0
				}
				dst[at] |= uint16(v>>lane&1) << b
				at += seats
			}
		}
		if place.slots == 0 {
			for i := range some {
				dst[(first+i)*seats] = 0
			}
		}
	}
}
