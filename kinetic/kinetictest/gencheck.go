package kinetictest

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/exact"
)

// CheckGenerator holds every table of a compiled generator against an
// enumeration of the same Spec by commutation, and returns all disagreements
// joined (at most a few of each kind). It looks at every address and every
// pattern that can occur: which terms a seat shows, rates, changes of the sums,
// classes, and for every move which seats and lines it changes and how.
func CheckGenerator(g *kinetic.Generator, s *exact.System) error {
	c := &generatorCheck{g: g, s: s, seen: map[string]bool{}}
	c.index()
	c.checkFamilies()
	c.checkReference()
	for a := range g.Addresses() {
		if len(c.faults) > 5 {
			break
		}
		c.checkAddress(a)
	}
	if g.Couplings == nil {
		c.checkClasses()
	}
	return errors.Join(c.faults...)
}

type generatorCheck struct {
	g      *kinetic.Generator
	s      *exact.System
	faults []error

	kind   []exact.Kind    // by family, then line
	at     []map[int]int   // by family, then line: position -> instance
	moves  map[[2]int]int  // (site, bath) -> move of the system
	slots  [][]int         // by address and slot: instance, or -1
	seen   map[string]bool // what has been compared already
	totals []seatTotal
}

// seatTotal is a possible pattern of a shape with its sorted rates.
type seatTotal struct {
	class uint8
	rates []float64
}

func (c *generatorCheck) fault(format string, args ...any) {
	c.faults = append(c.faults, fmt.Errorf(format, args...))
}

// index maps families and lines to kinds, sites to moves, and finds which
// instance each slot of each address shows.
func (c *generatorCheck) index() {
	g, s := c.g, c.s
	for _, line := range []bool{false, true} {
		for _, k := range s.Kinds {
			if k.Line != line {
				continue
			}
			at := map[int]int{}
			for i := k.First; i < k.First+k.Count; i++ {
				at[s.Instances[i].Position] = i
			}
			c.kind = append(c.kind, k)
			c.at = append(c.at, at)
		}
	}
	c.moves = map[[2]int]int{}
	for m, mv := range s.Moves {
		c.moves[[2]int{mv.Site, mv.Bath}] = m
	}
	c.slots = make([][]int, g.Addresses())
	for a := range c.slots {
		c.slots[a] = c.slotsOf(a)
	}
}

func (c *generatorCheck) slotsOf(a int) []int {
	g := c.g
	place := g.Places[g.PlaceOf(a)]
	out := make([]int, len(g.Seats[place.Seat].Slots))
	for b, slot := range g.Seats[place.Seat].Slots {
		out[b] = -1
		if g.Shapes[place.Shape].Present>>b&1 == 0 {
			continue
		}
		cell, ok := g.Lattice.Wrap(g.Lattice.Coord(a/len(g.Seats)), slot.Offset)
		i, exists := 0, false
		if ok && slot.Family < len(c.at) {
			i, exists = c.at[slot.Family][g.Lattice.Index(cell)]
		}
		if !exists {
			c.fault("address %d: slot %d shows a term of family %d that does not exist", a, b, slot.Family)
			continue
		}
		out[b] = i
	}
	return out
}

func (c *generatorCheck) checkFamilies() {
	g, s := c.g, c.s
	if n := len(g.Families) + len(g.Lines); n != len(c.kind) {
		c.fault("%d families and lines, want %d", n, len(c.kind))
		return
	}
	for f, fam := range g.Families {
		k := c.kind[f]
		if fam.Name != k.Name || fam.Group != k.Group || fam.Order != k.Order || fam.Terms != k.Count || !slices.Equal(fam.Energy, k.Energy) {
			c.fault("family %d: %q, group %q, order %v, %d terms, energies %v; want %+v", f, fam.Name, fam.Group, fam.Order, fam.Terms, fam.Energy, k)
		}
		for cell := range g.Cells() {
			if _, want := c.at[f][cell]; g.TermExists(f, cell) != want {
				c.fault("family %q: term at cell %d exists: %v", fam.Name, cell, !want)
			}
		}
	}
	for l, line := range g.Lines {
		k := c.kind[len(g.Families)+l]
		if line.Name != k.Name || line.Positions != k.Positions {
			c.fault("line %d: %q with %d positions, want %q with %d", l, line.Name, line.Positions, k.Name, k.Positions)
			continue
		}
		for p := range line.Positions {
			_, want := c.at[len(g.Families)+l][p]
			if got := line.Exists == nil || line.Exists[p]; got != want {
				c.fault("line %q: position %d exists: %v", line.Name, p, got)
			}
		}
	}
	if g.Levels != s.Levels() || g.Addresses() != len(g.Seats)*g.Cells() || len(g.Seats) != s.Spec.Sites {
		c.fault("%d levels, %d addresses, %d seats", g.Levels, g.Addresses(), len(g.Seats))
	}
}

func (c *generatorCheck) checkReference() {
	levels := func(all [][]uint8, n, p int) uint8 {
		if all == nil || all[n] == nil {
			return 0
		}
		return all[n][p]
	}
	for f, at := range c.at {
		for p, i := range at {
			got := uint8(0)
			if l := f - len(c.g.Families); l >= 0 {
				got = levels(c.g.ReferenceLines, l, p)
			} else {
				got = levels(c.g.Reference, f, p)
			}
			if got != c.s.Reference[i] {
				c.fault("%q at %d has level %d in the reference state, want %d", c.kind[f].Name, p, got, c.s.Reference[i])
			}
		}
	}
}

// checkAddress compares one seat with the moves of its site.
func (c *generatorCheck) checkAddress(a int) {
	g, s := c.g, c.s
	place := g.Places[g.PlaceOf(a)]
	seat := &g.Seats[place.Seat]
	site := a/len(g.Seats)*s.Spec.Sites + seat.Site
	c.checkSlots(a, site)
	listed := map[int]bool{}
	for m, mv := range seat.Moves {
		op := s.Spec.Bath[mv.Bath]
		if mv.X != op.X || mv.Z != op.Z || listed[mv.Bath] {
			c.fault("address %d: move %d is not bath operator %s, or there twice", a, m, op.Name)
		}
		listed[mv.Bath] = true
		change := map[int]uint8{} // instance -> added
		i, ok := c.moves[[2]int{site, mv.Bath}]
		if ok {
			for _, ch := range s.Moves[i].Changes {
				change[ch.Instance] = ch.Add
			}
		}
		c.checkTouches(a, m, change)
		c.checkHits(a, m, change)
		c.checkRates(a, m, i, ok, change)
	}
	for b := range s.Spec.Bath {
		if _, ok := c.moves[[2]int{site, b}]; ok && !listed[b] {
			c.fault("address %d: bath operator %s is missing", a, s.Spec.Bath[b].Name)
		}
	}
}

// checkSlots verifies that a seat shows exactly the terms that its moves
// change, each once.
func (c *generatorCheck) checkSlots(a, site int) {
	want := map[int]bool{}
	for b := range c.s.Spec.Bath {
		if m, ok := c.moves[[2]int{site, b}]; ok {
			for _, ch := range c.s.Moves[m].Changes {
				if !c.line(ch.Instance) {
					want[ch.Instance] = true
				}
			}
		}
	}
	for b, i := range c.slots[a] {
		if i < 0 {
			continue
		}
		if !want[i] {
			c.fault("address %d: slot %d shows a term that no move changes, or shows it twice", a, b)
		}
		delete(want, i)
	}
	if len(want) > 0 {
		c.fault("address %d: %d terms that its moves change are not shown", a, len(want))
	}
}

func (c *generatorCheck) line(instance int) bool {
	return c.s.Kinds[c.s.Instances[instance].Kind].Line
}

// expected returns what a change of instances adds to the slots of an address;
// any tells whether anything, energy whether a term with energy.
func (c *generatorCheck) expected(a int, change map[int]uint8) (add []int, any, energy bool) {
	add = make([]int, len(c.slots[a]))
	for b, i := range c.slots[a] {
		if i < 0 || change[i] == 0 {
			continue
		}
		add[b] = int(change[i])
		any = true
		energy = energy || c.s.Kinds[c.s.Instances[i].Kind].Energy != nil
	}
	return add, any, energy
}

// checkTouches verifies that move m of the seat at a changes the patterns of
// exactly the seats around the terms that it changes, and how.
func (c *generatorCheck) checkTouches(a, m int, change map[int]uint8) {
	g := c.g
	mv := g.Moves[int(g.Places[g.PlaceOf(a)].First)+m]
	touched := map[int]bool{}
	for t := mv.First; t < mv.Last; t++ {
		to := a + int(g.Touch[t].Delta)
		if to < 0 || to >= g.Addresses() || touched[to] {
			c.fault("address %d, move %d: touches address %d outside the lattice or twice", a, m, to)
			return
		}
		touched[to] = true
		add, any, energy := c.expected(to, change)
		if !any {
			c.fault("address %d, move %d: touches address %d, whose terms it does not change", a, m, to)
			continue
		}
		if energy != (t < mv.Energy) {
			c.fault("address %d, move %d: address %d stands among the wrong touches", a, m, to)
		}
		c.checkTable(int(g.Touch[t].Table), int(g.Places[g.PlaceOf(to)].Shape), add)
	}
	for to := range c.slots {
		if _, any, _ := c.expected(to, change); any && !touched[to] {
			c.fault("address %d, move %d: does not touch address %d", a, m, to)
		}
	}
}

// checkTable verifies a transition table of a shape at every pattern.
func (c *generatorCheck) checkTable(table, shape int, add []int) {
	key := fmt.Sprint("table ", table, shape, add)
	if c.seen[key] {
		return
	}
	c.seen[key] = true
	g := c.g
	sh := &g.Shapes[shape]
	for p := range 1 << g.Bits {
		levels, ok := c.unpack(sh, p)
		if !ok {
			continue
		}
		to := 0
		for b, l := range levels {
			to |= (l + add[b]) % g.Levels << (b * g.SlotBits)
		}
		want := uint32(to) | uint32(sh.Class[p])<<16 | uint32(sh.Class[to])<<24
		if got := g.Tables[table+p]; got != want {
			c.fault("shape %d: the change %v takes pattern %b to %#x, want %#x", shape, add, p, got, want)
			return
		}
	}
}

// unpack returns the levels in the slots of a pattern; ok is false if it cannot
// occur.
func (c *generatorCheck) unpack(sh *kinetic.Shape, p int) (levels []int, ok bool) {
	g := c.g
	levels = make([]int, len(g.Seats[sh.Seat].Slots))
	for b := range levels {
		levels[b] = p >> (b * g.SlotBits) & (1<<g.SlotBits - 1)
		if levels[b] >= g.Levels || levels[b] > 0 && sh.Present>>b&1 == 0 {
			return nil, false
		}
	}
	return levels, p>>(len(levels)*g.SlotBits) == 0
}

// checkHits verifies which lines a move changes, where and by how much.
func (c *generatorCheck) checkHits(a, m int, change map[int]uint8) {
	g := c.g
	mv := g.Moves[int(g.Places[g.PlaceOf(a)].First)+m]
	got := map[int]int{}
	for h := mv.FirstHit; h < mv.LastHit; h++ {
		hit := &g.Hits[h]
		p := int(hit.Row[a/len(g.Col)]) + int(hit.Col[a%len(g.Col)])
		if p < g.Lines[hit.Line].Positions {
			i, ok := c.at[len(g.Families)+hit.Line][p]
			if !ok {
				c.fault("address %d, move %d: changes line %q at position %d, which does not exist", a, m, g.Lines[hit.Line].Name, p)
				continue
			}
			got[i] += int(hit.Change)
		}
	}
	for i := range c.s.Instances {
		if c.line(i) && got[i]%g.Levels != int(change[i]) {
			c.fault("address %d, move %d: adds %d to %q at position %d, want %d", a, m, got[i]%g.Levels,
				c.s.Kinds[c.s.Instances[i].Kind].Name, c.s.Instances[i].Position, change[i])
		}
	}
	sh := &g.Shapes[g.Places[g.PlaceOf(a)].Shape]
	for l := range g.Lines {
		var added []uint8
		for _, i := range c.at[len(g.Families)+l] {
			if change[i] != 0 {
				added = append(added, change[i])
			}
		}
		slices.Sort(added)
		if sh.LineHits[m][l] != len(added) || !slices.Equal(sh.LineChanges[m][l], added) {
			c.fault("address %d, move %d: adds %v to %d positions of line %q, want %v", a, m, sh.LineChanges[m][l], sh.LineHits[m][l], g.Lines[l].Name, added)
		}
	}
}

// checkRates compares rates, changes of the sums and shares at every pattern.
// move is the system's, if it has one: a bath operator that changes nothing
// must not fire.
func (c *generatorCheck) checkRates(a, m, move int, exists bool, change map[int]uint8) {
	g, s := c.g, c.s
	id := int(g.Places[g.PlaceOf(a)].Shape)
	sh := &g.Shapes[id]
	kinds := make([]int, len(c.slots[a]))
	for b, i := range c.slots[a] {
		kinds[b] = -1
		if i >= 0 {
			kinds[b] = s.Instances[i].Kind
		}
	}
	add, _, _ := c.expected(a, change)
	key := fmt.Sprint("rates ", id, m, exists, kinds, add)
	if c.seen[key] {
		return
	}
	c.seen[key] = true
	for b, d := range add {
		if got := sh.Change[m][b]; int(got) != d {
			c.fault("shape %d, move %d: adds %d to slot %d, want %d", id, m, got, b, d)
		}
	}
	levels := slices.Clone(s.Reference)
	delta := make([]int, len(g.Families)*g.SumWidth())
	for p := range 1 << g.Bits {
		slots, ok := c.unpack(sh, p)
		if !ok {
			continue
		}
		clear(delta)
		for b, i := range c.slots[a] {
			if i < 0 {
				continue
			}
			levels[i] = uint8(slots[b])
			family := g.Seats[sh.Seat].Slots[b].Family
			switch {
			case change[i] == 0:
			case g.Levels == 2:
				delta[family] += 4*slots[b] - 2
			default:
				delta[family*g.Levels+slots[b]]--
				delta[family*g.Levels+(slots[b]+int(change[i]))%g.Levels]++
			}
		}
		want := 0.0
		if exists {
			want = s.Rate(move, levels)
		}
		// Where couplings vary, rates depend on the place, and the tables have none.
		if got := sh.Rate[m][p]; got != want && g.Couplings == nil {
			c.fault("shape %d, move %d: rate %v at pattern %b, want %v", id, m, got, p, want)
			return
		}
		for f, d := range delta {
			if got := sh.Delta[(m<<g.Bits|p)*len(delta)+f]; int(got) != d {
				c.fault("shape %d, move %d: changes sum %d of the families by %d at pattern %b, want %d", id, m, f, got, p, d)
				return
			}
		}
		if m == 0 && g.Couplings == nil {
			c.checkShares(id, p)
		}
	}
}

// checkShares verifies the class of a pattern and how its rate is divided
// among moves.
func (c *generatorCheck) checkShares(id, p int) {
	g := c.g
	sh := &g.Shapes[id]
	var rates []float64
	sum := 0.0
	for m := range sh.Rate {
		rates = append(rates, sh.Rate[m][p])
		sum += sh.Rate[m][p]
	}
	if total := g.Rates[sh.Class[p]]; math.Abs(total-sum) > 1e-15*float64(len(rates))*sum {
		c.fault("shape %d, pattern %b: class rate %v, the moves add up to %v", id, p, total, sum)
	}
	before := uint64(0)
	for m, r := range rates {
		split := sh.Split[p*len(rates)+m]
		share := float64(split-before) / 0x1p64
		if sum > 0 && (split < before || math.Abs(share-r/sum) > 1e-15*float64(len(rates)) || r == 0 && split != before && before != math.MaxUint64) {
			c.fault("shape %d, pattern %b: move %d has the share %v, want %v", id, p, m, share, r/sum)
		}
		before = split
	}
	if sum > 0 && before != math.MaxUint64 {
		c.fault("shape %d, pattern %b: the shares end at %#x", id, p, before)
	}
	slices.Sort(rates)
	c.totals = append(c.totals, seatTotal{sh.Class[p], rates})
}

// checkClasses verifies that classes are listed by increasing rate and that
// patterns with the same rates share one.
func (c *generatorCheck) checkClasses() {
	if len(c.g.Rates) == 0 || c.g.Rates[0] != 0 {
		c.fault("class 0 is not the frozen one")
	}
	for k := 1; k < len(c.g.Rates); k++ {
		if c.g.Rates[k] <= c.g.Rates[k-1] {
			c.fault("class rates do not increase: %v", c.g.Rates)
		}
	}
	class := map[string]uint8{}
	for _, t := range c.totals {
		key := fmt.Sprint(slices.DeleteFunc(t.rates, func(r float64) bool { return r == 0 }))
		if k, ok := class[key]; ok && k != t.class {
			c.fault("the rates %s stand in classes %d and %d", key, k, t.class)
		}
		class[key] = t.class
	}
}
