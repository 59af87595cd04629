package kinetic

import (
	"fmt"
	"math"
	"math/bits"
	"slices"
)

// LaneLimit says why the lane engine cannot run a generator.
type LaneLimit struct {
	What      string
	Has, Most int
}

func (e *LaneLimit) Error() string {
	return fmt.Sprintf("the lane engine runs at most %d %s, not %d", e.Most, e.What, e.Has)
}

// maxLaneSlots is the largest number of energy terms that a move may change.
const maxLaneSlots = 12

// lanePlan is what lane engines read of a generator: the moves with the
// probabilities of their attempts, and by zone the words that they read and
// change. A zone is a place without its seat.
type lanePlan struct {
	g      *Generator
	layout *laneLayout

	moves  []planMove // of the cell: every move of every seat
	first  []int      // by seat: its first move
	choice aliases    // of a move, by clock
	clock  float64    // attempts per unit time on the lattice
	sets   []chanceSet
	hits   int // lines that an attempt changes at most

	columns int     // words of acceptance of an attempt, at most
	rest    float64 // largest rest of a chance
	extra   poisson // number of points strewn over the attempts drawn together

	rows, cols       uint64
	zoneRow, zoneCol []uint32
	runs             []stretch
	still            []int64 // by family and line: the sum if every word were 0

	lineHits []lineHit

	zoned  []zonedMove // zone, move
	places []lanePlace // zone, seat
	slots  []wordList  // of places
	terms  []laneTerm  // of zoned moves
	words  []int32     // of slots, terms and moves: differences from the base
	known  map[string]wordList
	leaves []uint8 // of zoned moves
	kernel laneKernel
}

// planMove is a move of the cell.
type planMove struct {
	seat, move int
	set        int // of its chances
}

// wordList is a range of lanePlan.words.
type wordList struct{ first, last uint32 }

// lanePlace is a seat in a zone.
type lanePlace struct {
	shape uint16
	own   uint16 // slots that stand for their term, so that each counts once
	first uint32 // slot, in lanePlan.slots
	slots int
}

// laneTerm is an energy term that a move changes. It costs energy where its
// level differs from sign.
type laneTerm struct {
	wordList
	sign uint64
}

// zonedMove is a move in a zone. The rate depends on how many terms of each
// group (equal coupling up to sign) cost energy: combinations of these numbers
// are counted with the last group fastest, and leaves has for each the column of
// the acceptance word.
type zonedMove struct {
	changes             wordList // words changed; from tracked on, tracked terms only
	tracked             uint32
	firstTerm, lastTerm uint32
	groups              []uint8 // terms in each group
	leaf                uint32  // first of its leaves
	combos              uint32
	small               uint32   // first of its leaves laid out for small groups, or 0
	firstHit, lastHit   uint32   // in Generator.Hits
	near                wordList // a word of every cache line that it reads
	fast                fastMove
}

// newLanePlan compiles the plan, in the layout that moves fewer words.
func newLanePlan(g *Generator) (*lanePlan, error) {
	levels, err := newLanePlanIn(g, false)
	if err != nil {
		return nil, err
	}
	flips, err := newLanePlanIn(g, true)
	if err != nil || flips == nil || flips.moving() >= levels.moving() {
		return levels, err
	}
	return flips, nil
}

// newLanePlanIn compiles the plan in one layout; nil if it does not exist.
func newLanePlanIn(g *Generator, flips bool) (*lanePlan, error) {
	if g.Levels != 2 {
		return nil, &LaneLimit{"levels of a site", g.Levels, 2}
	}
	if g.Couplings != nil {
		return nil, errVaryingCouplings
	}
	layout, ok, err := newLaneLayout(g, flips)
	if !ok || err != nil {
		return nil, err
	}
	p := &lanePlan{
		g: g, layout: layout,
		rows: uint64(len(g.Row)), cols: uint64(g.Lattice.Size[0]),
		known: map[string]wordList{},
	}
	seats := len(g.Seats)
	for _, first := range g.Row {
		p.zoneRow = append(p.zoneRow, first/uint32(seats))
	}
	for x := range g.Lattice.Size[0] {
		p.zoneCol = append(p.zoneCol, uint32(g.Col[x*seats])/uint32(seats))
	}
	p.runs = p.stretches()
	p.setHits()
	p.still = p.stillSums()
	for seat := range g.Seats {
		p.first = append(p.first, len(p.moves))
		for m := range g.Seats[seat].Moves {
			p.moves = append(p.moves, planMove{seat: seat, move: m})
		}
	}
	if err := p.setChances(); err != nil {
		return nil, err
	}
	for zone := 0; zone < len(g.Places); zone += seats {
		for seat := range seats {
			if err := p.addPlace(zone+seat, seat); err != nil {
				return nil, err
			}
		}
	}
	p.known = nil
	p.chooseKernel()
	return p, nil
}

// addPlace compiles one seat of one zone.
func (p *lanePlan) addPlace(place, seat int) error {
	g := p.g
	pl := &g.Places[place]
	shape := &g.Shapes[pl.Shape]
	c := g.Lattice.Coord(int(pl.Cell))
	out := lanePlace{shape: pl.Shape, first: uint32(len(p.slots)), slots: len(g.Seats[seat].Slots)}
	terms := make([][]int32, out.slots)
	for b, slot := range g.Seats[seat].Slots {
		if shape.Present>>b&1 == 1 {
			t, _ := g.Lattice.Wrap(c, slot.Offset)
			terms[b] = p.layout.term(slot.Family, t, int(pl.Cell))
			if g.showsFirst(slot.Family, t, int(pl.Cell)*len(g.Seats)+seat, b) {
				out.own |= 1 << b
			}
		}
		p.slots = append(p.slots, p.list(terms[b]))
	}
	p.places = append(p.places, out)
	for m := range g.Seats[seat].Moves {
		if err := p.addMove(pl, seat, m, terms); err != nil {
			return err
		}
	}
	return nil
}

// cacheLines lists one of the words that a move reads from each cache line, as
// far as differences tell.
func (p *lanePlan) cacheLines(changes []int32, terms []laneTerm) wordList {
	all := slices.Clone(changes)
	for _, t := range terms {
		all = append(all, p.wordsOf(t.wordList)...)
	}
	slices.Sort(all)
	var some []int32
	for _, w := range all {
		if k := len(some); k == 0 || w-some[k-1] >= 8 {
			some = append(some, w)
		}
	}
	return p.list(some)
}

// list keeps words; equal lists are kept once.
func (p *lanePlan) list(words []int32) wordList {
	key := fmt.Sprint(words)
	if l, ok := p.known[key]; ok {
		return l
	}
	first := uint32(len(p.words))
	p.words = append(p.words, words...)
	l := wordList{first, uint32(len(p.words))}
	p.known[key] = l
	return l
}

// showsFirst reports whether the given slot is the first in Family.Slots that
// shows the term at cell t.
func (g *Generator) showsFirst(f int, t [4]int, address, slot int) bool {
	for _, ref := range g.Families[f].Slots {
		c, ok := g.Lattice.Wrap(t, ref.Offset)
		if !ok {
			continue
		}
		a := g.Lattice.Index(c)*len(g.Seats) + ref.Seat
		if g.Shapes[g.Places[g.PlaceOf(a)].Shape].Present>>ref.Slot&1 == 1 {
			return a == address && ref.Slot == slot
		}
	}
	return false
}

// slotsOf lists the slots of a set.
func slotsOf(set uint16) (slots []int) {
	for ; set != 0; set &= set - 1 {
		slots = append(slots, bits.TrailingZeros16(set))
	}
	return slots
}

// addMove compiles one move of one seat of one zone.
func (p *lanePlan) addMove(pl *Place, seat, m int, terms [][]int32) error {
	g := p.g
	shape := &g.Shapes[pl.Shape]
	mv := &g.Moves[int(pl.First)+m]
	changed := slotsOf(shape.turned[m])
	words, energy := p.layout.moved(seat, m, changed, terms)
	out := zonedMove{changes: p.list(words), firstTerm: uint32(len(p.terms)), firstHit: mv.FirstHit, lastHit: mv.LastHit}
	out.tracked = out.changes.first + uint32(energy)
	p.hits = max(p.hits, int(mv.LastHit-mv.FirstHit))
	groups, n := g.energyGroups(seat, changed)
	if n > maxLaneSlots {
		return &LaneLimit{"terms with energy around a site", n, maxLaneSlots}
	}
	var order []int // slots, group by group
	out.combos = 1
	for _, group := range groups {
		out.groups = append(out.groups, uint8(len(group)))
		out.combos *= uint32(len(group) + 1)
		for _, b := range group {
			order = append(order, b)
			t := laneTerm{wordList: p.list(terms[b])}
			if e := g.Families[g.Seats[seat].Slots[b].Family].Energy; e[0] > e[1] {
				t.sign = math.MaxUint64
			}
			p.terms = append(p.terms, t)
		}
	}
	out.lastTerm = uint32(len(p.terms))
	out.near = p.cacheLines(words, p.terms[out.firstTerm:])
	out.leaf = uint32(len(p.leaves))
	chances := &p.sets[p.moves[p.first[seat]+m].set]
	leaves, seen := make([]uint8, out.combos), make([]bool, out.combos)
	for costly := range 1 << n {
		pattern, combo, at := 0, 0, 0
		for _, size := range out.groups {
			own := costly >> at & (1<<size - 1)
			combo = combo*int(size+1) + bits.OnesCount(uint(own))
			at += int(size)
		}
		for i, b := range order {
			level := costly >> i & 1
			if p.terms[int(out.firstTerm)+i].sign != 0 {
				level ^= 1
			}
			pattern |= level << b
		}
		leaf := chances.column(shape.Rate[m][pattern])
		if seen[combo] && leaves[combo] != leaf {
			panic("kinetic: equal numbers of costly terms, but different rates")
		}
		leaves[combo], seen[combo] = leaf, true
	}
	p.leaves = append(p.leaves, leaves...)
	out.small = p.smallLeaves(out.groups, leaves)
	p.zoned = append(p.zoned, out)
	return nil
}

// energyGroups sorts the energy terms among slots of a seat into groups of equal
// difference of energies up to sign, and counts them.
func (g *Generator) energyGroups(seat int, slots []int) (groups [][]int, n int) {
	var sizes []float64
	for _, b := range slots {
		energy := g.Families[g.Seats[seat].Slots[b].Family].Energy
		if energy == nil {
			continue
		}
		n++
		size := math.Abs(energy[0] - energy[1])
		at := -1
		for i, s := range sizes {
			if s == size {
				at = i
			}
		}
		if at < 0 {
			at = len(sizes)
			sizes = append(sizes, size)
			groups = append(groups, nil)
		}
		groups[at] = append(groups[at], b)
	}
	return groups, n
}
