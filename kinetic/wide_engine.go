package kinetic

import (
	"encoding/binary"
	"fmt"
	"math/bits"
)

// wideEngine draws trajectories of a Wide generator by composition and rejection,
// as composition does: seats are listed by the octave of their rate, which is
// computed from the pattern whenever it changes.
type wideEngine struct {
	listing
	tally
	hot      hot
	octave   octaves
	patterns []uint64
	at       []uint32 // position in the arena
	class    []uint8
}

func newWideEngine(g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	src := newSource(seed, unit, "start "+string(start))
	s, err := newStateOf[uint64](g, start, &src)
	if err != nil {
		return nil, err
	}
	e := &wideEngine{
		hot: newHot(g), patterns: s.patterns,
		at: make([]uint32, len(s.patterns)), class: make([]uint8, len(s.patterns)),
	}
	most := g.Rates[len(g.Rates)-1]
	e.octave = newOctaves(most, min(g.Wide.least, most))
	e.listing = listing{
		rates: e.octave.tops(), seats: len(e.patterns), touches: e.hot.touches,
		src: newSource(seed, unit, "jumps"),
	}
	e.tally = newTally(g, e.patterns, s.lines, 1)
	e.fill()
	e.refresh()
	e.next = e.src.exponential() * e.scale
	return e, nil
}

// wideBytes estimates the memory of one wide engine.
func wideBytes(g *Generator) int64 {
	return 13*int64(g.Addresses()) + 4*int64(arenaSize(g.Addresses(), octaveCount+1)) + g.tableBytes()
}

// classify returns the octave of a seat.
func (e *wideEngine) classify(a int) uint8 {
	return uint8(e.octave.of(e.g.Wide.total(e.g.Places[e.g.PlaceOf(a)].Shape, e.patterns[a])))
}

func (e *wideEngine) fill() {
	var counts [256]int
	for a := range e.patterns {
		e.class[a] = e.classify(a)
		counts[e.class[a]]++
	}
	e.layOut(&counts)
	for a, k := range e.class {
		e.at[a] = e.end[k]
		e.arena[e.end[k]] = uint32(a)
		e.end[k]++
	}
}

func (e *wideEngine) refresh() {
	for !e.setBounds() {
		moved := e.widen()
		for a, k := range e.class {
			e.at[a] += moved[k] // mod 2^32
		}
	}
	e.newStretch()
}

// Advance runs the trajectory to time t.
func (e *wideEngine) Advance(t float64) {
	if t < e.now {
		panic("kinetic: Advance to an earlier time")
	}
	for e.next <= t {
		over := e.attempt(e.redraw())
		e.left--
		at := e.next
		if over || e.left == 0 {
			e.refresh()
		}
		e.next = at + e.src.exponential()*e.scale
	}
	e.now = t
}

// attempt executes the jump of a token, unless it is a null event; it returns
// true if a class has passed its bound.
func (e *wideEngine) attempt(tk token) (over bool) {
	if tk.at >= e.end[tk.class&255] {
		e.nulls++
		return false
	}
	j := e.arena[tk.at]
	h, w := &e.hot, e.g.Wide
	hi, _ := bits.Mul64(uint64(j), h.magic)
	row := uint32(hi) + j&h.single
	col := j - row*h.rowLen
	place := &h.places[e.g.Row[row]+uint32(e.g.Col[col])]
	move := e.choose(place.shape, e.patterns[j], uniform(tk.rest)*e.rates[tk.class])
	if move < 0 {
		e.nulls++
		return false
	}
	e.count(place.shape, move, e.patterns[j])
	mv := &h.moves[place.first+uint32(move)]
	for i := mv.first; i < mv.last; i++ {
		touch := &e.g.Touch[i]
		a := uint32(int32(j) + touch.Delta)
		e.patterns[a] = w.after(e.patterns[a], touch.Table)
		if i < mv.energy {
			to := e.octave.of(w.total(w.adds[touch.Table].shape, e.patterns[a]))
			over = e.shift(a, uint8(to)) || over
		}
	}
	if mv.firstHit < mv.lastHit {
		e.hitLines(mv, row, col)
	}
	e.jumps++
	return over
}

// choose returns the move in whose share of the octave's top x lies, or -1.
func (e *wideEngine) choose(shape uint16, pattern uint64, x float64) int {
	mask := uint64(1)<<e.g.SlotBits - 1
	moves := e.g.Wide.moves[shape]
	for m := range moves {
		r, _ := moves[m].rate(pattern, mask)
		if x -= r; x < 0 {
			return m
		}
	}
	return -1
}

// count moves the terms that a move changes from level to level in the sums.
func (e *wideEngine) count(shape uint16, move int, pattern uint64) {
	g := e.g
	s := &g.Shapes[shape]
	mask := uint64(1)<<g.SlotBits - 1
	for b, d := range s.Change[move] {
		if d == 0 {
			continue
		}
		level := int(pattern >> (b * g.SlotBits) & mask)
		sums := e.sums[g.Seats[s.Seat].Slots[b].Family*g.Levels:][:g.Levels]
		sums[level]--
		sums[(level+int(d))%g.Levels]++
	}
}

// shift gives a seat a new octave; it returns true if that passes its bound.
func (e *wideEngine) shift(a uint32, to uint8) bool {
	from := e.class[a]
	last := e.end[from] - 1
	e.end[from] = last
	moved := e.arena[last]
	e.arena[e.at[a]] = moved
	e.at[moved] = e.at[a]
	end := e.end[to]
	e.arena[end] = a
	e.end[to] = end + 1
	e.at[a], e.class[a] = end, to
	return end >= e.bound[to]
}

func (e *wideEngine) Sums(dst []int64) []int64 { return e.appendSums(dst) }
func (e *wideEngine) Energy(int) float64       { return e.energy() }

// Census counts seats by shape and pattern, where patterns fit tables.
func (e *wideEngine) Census(dst []int64) {
	for a, p := range e.patterns {
		dst[int(e.g.Places[e.g.PlaceOf(a)].Shape)<<e.g.Bits|int(p)]++
	}
}

func (e *wideEngine) Terms(family, _ int, dst []uint8) {
	if l := family - len(e.g.Families); l >= 0 {
		e.readLine(l, dst)
		return
	}
	readTerms(e.g, family, e.patterns, dst)
}

// Patterns panics if a pattern does not fit 16 bits.
func (e *wideEngine) Patterns(_ int, dst []uint16) {
	if e.g.Bits > MaxBits {
		panic("kinetic: Patterns of a generator whose patterns are wide")
	}
	for a, p := range e.patterns {
		dst[a] = uint16(p)
	}
}

// WidePatterns implements WidePatterns.
func (e *wideEngine) WidePatterns(_ int, dst []uint64) { copy(dst, e.patterns) }

// Audit checks lists, octaves, levels and sums.
func (e *wideEngine) Audit() error {
	for a := range e.patterns {
		k := e.class[a]
		if i := e.at[a]; i < e.first[k] || i >= e.end[k] || e.arena[i] != uint32(a) {
			return fmt.Errorf("seat %d is not at %d of octave %d", a, i, k)
		}
		if want := e.classify(a); want != k {
			return fmt.Errorf("seat %d is in octave %d, its terms put it in %d", a, k, want)
		}
	}
	if err := agree(e.g, e.patterns); err != nil {
		return err
	}
	return auditTally(&e.tally, e.patterns)
}

const savedWide = "wide 1\n"

// Save appends all that the trajectory depends on.
func (e *wideEngine) Save(dst []byte) []byte {
	return seal(dst, savedWide, e.g, func(b []byte) []byte {
		b = e.listing.save(b)
		for _, l := range e.lines {
			b = append(b, l...)
		}
		for a, p := range e.patterns {
			b = binary.LittleEndian.AppendUint64(b, p)
			b = binary.LittleEndian.AppendUint32(b, e.at[a])
		}
		return b
	})
}

// Restore continues from a state that Save wrote, bit for bit. On error the
// engine is as it was.
func (e *wideEngine) Restore(src []byte) error {
	r, err := unseal(src, savedWide, e.g, len(e.Save(nil)))
	if err != nil {
		return err
	}
	if err := e.listing.restore(r); err != nil {
		return err
	}
	for _, l := range e.lines {
		copy(l, r.take(len(l)))
	}
	for a := range e.patterns {
		e.patterns[a], e.at[a] = r.u64(), r.u32()
		e.class[a] = e.classify(a)
		e.arena[e.at[a]] = uint32(a)
	}
	e.tally = newTally(e.g, e.patterns, e.lines, 1)
	return nil
}
