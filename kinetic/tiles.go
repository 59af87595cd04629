package kinetic

import (
	"fmt"
	"math"
	"math/bits"
)

// TileEngine is the name of the tile engine.
const TileEngine = "tiles"

// tileSeats is how many seats, at consecutive addresses, make a tile: one line
// of the cache, with a byte per seat.
const (
	tileShift = 6
	tileSeats = 1 << tileShift
)

// tiles draws trajectories on very large lattices with 1.4 bytes per seat. A
// seat keeps its pattern only. Seats are drawn in two steps, by composition and
// rejection over tiles (A. Slepoy, A. P. Thompson, S. J. Plimpton, J. Chem. Phys.
// 128, 205101 (2008)), then by a scan of the tile. A tile's weight is the sum
// over its seats of their rates as integers, rounded up; what rounding adds is
// taken away by a last rejection, so that rates are exact, and sums of integers
// do not drift.
type tiles[P uint8 | uint16] struct {
	listing
	tally
	hot      hot
	patterns []P
	tile     []tile

	seen    uint64   // of what was read ahead
	weight  []uint64 // by class: its rate, scaled and rounded up
	keep    []uint64 // by class: the probability that makes it exact, scaled to 2^64-1
	byShape []shapeWeights
	shape   []uint16 // by place
}

// tile is the weight of a tile, its octave and its position in the arena.
type tile struct {
	weight uint64
	at     uint32
	octave uint32
}

// shapeWeights gives the weight of a seat by its pattern.
type shapeWeights []uint64

// weightBits is the length of the largest weight of a seat. A tile's is then
// below 2^(weightBits+tileShift) and its octave below 64.
const weightBits = 48

// NewTiles returns the tile engine, for lattices that outgrow the cache.
func NewTiles(g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	if g.Levels != 2 {
		return nil, fmt.Errorf("the tile engine runs 2 levels, not %d", g.Levels)
	}
	if g.Couplings != nil {
		return nil, errVaryingCouplings
	}
	if g.Addresses() > math.MaxInt32 {
		return nil, fmt.Errorf("the lattice has %d sites; the tile engine runs at most %d", g.Addresses(), math.MaxInt32)
	}
	if g.Bits <= 8 {
		return newTiles[uint8](g, seed, unit, start)
	}
	return newTiles[uint16](g, seed, unit, start)
}

// TileBytes estimates the memory of one tile engine.
func TileBytes(g *Generator) int64 {
	n := int64(g.Addresses())
	width := int64(1)
	if g.Bits > 8 {
		width = 2
	}
	return n*width + (n>>tileShift+1)*(16+5) + g.tableBytes()
}

func newTiles[P uint8 | uint16](g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	src := newSource(seed, unit, "start "+string(start))
	s, err := newStateOf[P](g, start, &src)
	if err != nil {
		return nil, err
	}
	e := &tiles[P]{hot: newHot(g), patterns: s.patterns}
	e.tally = newTally(g, e.patterns, s.lines, e.hot.words)
	e.tile = make([]tile, (len(s.patterns)+tileSeats-1)/tileSeats)
	e.weigh()
	tops := make([]float64, weightBits+tileShift+2)
	for k := 1; k < len(tops); k++ {
		tops[k] = math.Ldexp(1, k) // class k holds weights in [2^(k-1), 2^k)
	}
	e.listing = listing{
		rates: tops, seats: len(e.tile), touches: e.hot.touches,
		src: newSource(seed, unit, "jumps"),
	}
	e.fill()
	e.refresh()
	e.next = e.wait(0)
	return e, nil
}

// weigh sets the weights of classes, shapes and tiles.
func (e *tiles[P]) weigh() {
	g := e.g
	e.weight = make([]uint64, len(g.Rates))
	e.keep = make([]uint64, len(g.Rates))
	for k, r := range g.Rates {
		if r > 0 {
			exact := math.Ldexp(r/e.top(), weightBits)
			e.weight[k] = max(1, uint64(math.Ceil(exact)))
			e.keep[k] = share(exact, float64(e.weight[k]))
		}
	}
	for i := range g.Shapes {
		w := make(shapeWeights, 1<<g.Bits)
		for p, k := range g.Shapes[i].Class {
			w[p] = e.weight[k]
		}
		e.byShape = append(e.byShape, w)
	}
	for _, p := range g.Places {
		e.shape = append(e.shape, p.Shape)
	}
	for i := range e.tile {
		e.tile[i].weight = e.sumTile(i)
	}
}

// top is the largest rate of a seat; weights are in units of top/2^weightBits.
func (e *tiles[P]) top() float64 {
	if r := e.g.Rates[len(e.g.Rates)-1]; r > 0 {
		return r
	}
	return 1
}

func (e *tiles[P]) sumTile(i int) uint64 {
	sum := uint64(0)
	for a := i << tileShift; a < min((i+1)<<tileShift, len(e.patterns)); a++ {
		sum += e.byShape[e.shape[e.g.PlaceOf(a)]][e.patterns[a]]
	}
	return sum
}

func (e *tiles[P]) fill() {
	var counts [256]int
	for i := range e.tile {
		e.tile[i].octave = uint32(bits.Len64(e.tile[i].weight))
		counts[e.tile[i].octave]++
	}
	e.layOut(&counts)
	for i := range e.tile {
		t := &e.tile[i]
		t.at = e.end[t.octave]
		e.arena[t.at] = uint32(i)
		e.end[t.octave]++
	}
}

func (e *tiles[P]) refresh() {
	for !e.setBounds() {
		moved := e.widen()
		for i := range e.tile {
			e.tile[i].at += moved[e.tile[i].octave]
		}
	}
	e.newStretch()
	e.setTileScale()
}

// setTileScale turns the mean waiting time from weights to rates.
func (e *tiles[P]) setTileScale() { e.scale *= math.Ldexp(1/e.top(), weightBits) }

// wait returns the time of the event that follows one at the given time.
func (e *tiles[P]) wait(at float64) float64 { return at + e.src.exponential()*e.scale }

// Advance runs the trajectory to time t.
func (e *tiles[P]) Advance(t float64) {
	if t < e.now {
		panic("kinetic: Advance to an earlier time")
	}
	for e.next <= t {
		tk, filled := e.take()
		if filled && e.hot.far != nil {
			e.lookAhead()
		}
		over := e.attempt(tk)
		e.left--
		if over || e.left == 0 {
			at := e.next
			e.refresh()
			e.next = e.wait(at)
		} else {
			e.next = e.wait(e.next)
		}
	}
	e.now = t
}

// lookAhead reads what the queue's jumps will change, so that their waits for
// memory overlap. It changes nothing.
func (e *tiles[P]) lookAhead() {
	var seats [window]uint32
	for i := range e.queue {
		seats[i] = e.arena[e.queue[i].at] << tileShift
	}
	for _, a := range seats {
		e.seen ^= uint64(e.patterns[a]) ^ e.tile[a>>tileShift].weight
		for _, d := range e.hot.far {
			if b := uint32(int32(a) + d); int(b) < len(e.patterns) {
				e.seen ^= uint64(e.patterns[b]) ^ e.tile[b>>tileShift].weight
			}
		}
	}
}

// attempt executes the jump of a token, unless it is a null event; it returns
// true if an octave has passed its bound.
func (e *tiles[P]) attempt(tk token) (over bool) {
	if tk.at >= e.end[tk.class&255] {
		e.nulls++
		return false
	}
	i := e.arena[tk.at]
	x := tk.rest >> (64 - tk.class)
	if x >= e.tile[i].weight {
		e.nulls++
		return false
	}
	h := &e.hot
	j, row, col := e.scan(i, x)
	place := &h.places[e.g.Row[row]+uint32(e.g.Col[col])]
	pattern := uint32(e.patterns[j])
	u := e.src.next()
	if keep := e.keep[e.g.Shapes[place.shape].Class[pattern]]; keep != math.MaxUint64 {
		// The seat is kept if u < keep; given that, u*2^64/keep is uniform again.
		if u >= keep {
			e.nulls++
			return false
		}
		u = uint64(float64(u) / float64(keep) * 0x1p64)
	}
	move := place.first
	if place.moves > 1 {
		split := h.splits[place.shape][pattern*uint32(place.moves):]
		for m := range uint32(place.moves) - 1 {
			if u < split[m] {
				break
			}
			move++
		}
	}
	mv := &h.moves[move]
	for w := range h.words {
		e.packed[w] += h.delta[mv.delta+pattern*h.words+w]
	}
	over = e.execute(mv, j)
	if mv.firstHit < mv.lastHit {
		e.hitLines(mv, row, col)
	}
	e.jumps++
	if e.since++; e.since == unpackEvery {
		e.unpack()
	}
	return over
}

// scan returns the seat of a tile in whose share of the weight x falls, with
// its row and its address within the row.
func (e *tiles[P]) scan(i uint32, x uint64) (j, row, col uint32) {
	h := &e.hot
	j = i << tileShift
	hi, _ := bits.Mul64(uint64(j), h.magic)
	row = uint32(hi) + j&h.single
	col = j - row*h.rowLen
	if len(e.byShape) == 1 {
		w := e.byShape[0]
		for _, p := range e.patterns[j:min(int(j)+tileSeats, len(e.patterns))] {
			v := w[p]
			if x < v {
				break
			}
			x -= v
			j++
		}
		hi, _ := bits.Mul64(uint64(j), h.magic)
		row = uint32(hi) + j&h.single
		return j, row, j - row*h.rowLen
	}
	for {
		v := e.byShape[e.shape[e.g.Row[row]+uint32(e.g.Col[col])]][e.patterns[j]]
		if x < v {
			return j, row, col
		}
		x -= v
		j++
		if col++; col == h.rowLen {
			col = 0
			row++
		}
	}
}

// execute changes the seats that a move touches, and then the octaves of their
// tiles.
func (e *tiles[P]) execute(mv *hotMove, j uint32) (over bool) {
	touches := e.g.Touch[mv.first:mv.last]
	energetic := int(mv.energy - mv.first)
	for n := range touches {
		touch := &touches[n]
		a := uint32(int32(j) + touch.Delta)
		v := e.g.Tables[touch.Table+uint32(e.patterns[a])]
		e.patterns[a] = P(v)
		if n < energetic {
			e.tile[a>>tileShift].weight += e.weight[v>>24] - e.weight[v>>16&255]
		}
	}
	for n := range touches[:energetic] {
		i := uint32(int32(j)+touches[n].Delta) >> tileShift
		t := &e.tile[i]
		if k := uint32(bits.Len64(t.weight)); k != t.octave {
			over = e.shift(i, t, k) || over
		}
	}
	return over
}

// shift moves a tile to another octave; it returns true if that passes its
// bound.
func (e *tiles[P]) shift(i uint32, t *tile, to uint32) bool {
	last := e.end[t.octave] - 1
	e.end[t.octave] = last
	moved := e.arena[last]
	e.arena[t.at] = moved
	e.tile[moved].at = t.at
	at := e.end[to]
	e.arena[at] = i
	e.end[to] = at + 1
	t.at, t.octave = at, to
	return at >= e.bound[to]
}
