package kinetic

import (
	"encoding/binary"
	"fmt"
	"math"
	"sort"

	"sojourn/kinetic/lattice"
)

// shapeOf returns the shape of a seat in cell c, compiling it when it is new.
func (k *compiler) shapeOf(c lattice.Offset, seat int) (int, error) {
	n := k.look(c, seat)
	lines := k.lineChanges(c, seat)
	key := shapeKey(seat, n, lines)
	if id, ok := k.shapes[key]; ok {
		return id, nil
	}
	g := k.g
	s := Shape{Seat: seat, LineChanges: lines, acts: actingMoves(n, lines)}
	for b, ok := range n.exists {
		if ok {
			s.Present |= 1 << b
		}
	}
	moves := len(g.Seats[seat].Moves)
	s.turned = make([]uint16, moves)
	s.Change = make([][]uint8, moves)
	s.LineHits = make([][]int, moves)
	for m, change := range n.change {
		s.Change[m] = make([]uint8, len(change))
		for b, d := range change {
			if n.exists[b] && d != 0 {
				s.turned[m] |= 1 << b
				s.Change[m][b] = uint8(d)
			}
		}
		for _, l := range lines[m] {
			s.LineHits[m] = append(s.LineHits[m], len(l))
		}
	}
	id := len(g.Shapes)
	if id > math.MaxUint16 {
		return 0, fmt.Errorf("the lattice has more than %d different surroundings of a site", math.MaxUint16)
	}
	k.shapes[key] = id
	if k.wide {
		g.Shapes = append(g.Shapes, s)
		return id, k.addWideShape(&g.Shapes[id])
	}
	patterns := 1 << g.Bits
	s.Rate = make([][]float64, moves)
	for m := range s.Rate {
		s.Rate[m] = make([]float64, patterns)
	}
	s.Delta = make([]int8, moves*patterns*len(g.Families)*g.SumWidth())
	before := make([]int, len(g.Seats[seat].Slots))
	for p := range patterns {
		if !k.levels(before, p, n) {
			continue
		}
		for m := range moves {
			if err := k.compileMove(&s, n, m, p, before); err != nil {
				return 0, err
			}
		}
	}
	g.Shapes = append(g.Shapes, s)
	return id, nil
}

func shapeKey(seat int, n *neighbourhood, lines [][][]uint8) string {
	key := binary.AppendUvarint(nil, uint64(seat))
	for m := range n.change {
		for b, d := range n.change[m] {
			if n.exists[b] {
				d++ // 0 marks a slot that does not exist
			}
			key = binary.AppendUvarint(key, uint64(d))
		}
		for _, l := range lines[m] {
			key = binary.AppendUvarint(key, uint64(len(l)))
			key = append(key, l...)
		}
	}
	return string(key)
}

// levels unpacks a pattern into dst, by slot; it returns false if a slot holds no
// level, or one that does not exist is not 0.
func (k *compiler) levels(dst []int, p int, n *neighbourhood) bool {
	w := k.g.SlotBits
	if p>>(w*len(dst)) != 0 {
		return false
	}
	for b := range dst {
		dst[b] = p >> (w * b) & (1<<w - 1)
		if dst[b] >= k.g.Levels || (!n.exists[b] && dst[b] != 0) {
			return false
		}
	}
	return true
}

// compileMove fills in the rate of move m at pattern p, and what it does to the
// sums.
func (k *compiler) compileMove(s *Shape, n *neighbourhood, m, p int, before []int) error {
	g := k.g
	family, from, to := k.family[:0], k.from[:0], k.to[:0]
	delta := s.Delta[(m<<g.Bits|p)*len(g.Families)*g.SumWidth():]
	for b, slot := range g.Seats[s.Seat].Slots {
		d := n.change[m][b]
		if d == 0 || !n.exists[b] {
			continue
		}
		after := (before[b] + d) % g.Levels
		family = append(family, slot.Family)
		from = append(from, before[b])
		to = append(to, after)
		if g.Levels == 2 {
			delta[slot.Family] += int8(2*before[b] - 2*after)
		} else {
			delta[slot.Family*g.Levels+before[b]]--
			delta[slot.Family*g.Levels+after]++
		}
	}
	k.family, k.from, k.to = family, from, to
	if !s.acts[m] {
		return nil // a jump that changes nothing is no jump
	}
	if g.Couplings != nil {
		return nil
	}
	move := g.Seats[s.Seat].Moves[m]
	r, err := k.energies.rate(move.Bath, family, from, to)
	if err != nil {
		return fmt.Errorf("bath operator %s: %w", g.Spec.Bath[move.Bath].Name, err)
	}
	s.Rate[m][p] = r
	return nil
}

// actingMoves tells which moves change any term or line.
func actingMoves(n *neighbourhood, lines [][][]uint8) []bool {
	acts := make([]bool, len(lines))
	for m := range acts {
		for b, d := range n.change[m] {
			acts[m] = acts[m] || d != 0 && n.exists[b]
		}
		for _, l := range lines[m] {
			acts[m] = acts[m] || len(l) > 0
		}
	}
	return acts
}

// classify numbers the distinct total rates in increasing order, 0 first, and
// gives each pattern of each shape its class and the shares of its moves.
func (k *compiler) classify() error {
	if k.wide {
		return k.finishWide()
	}
	g := k.g
	distinct := map[float64]bool{0: true}
	totals := make([][]float64, len(g.Shapes))
	var rates []float64
	g.everywhere = 1<<MaxBits - 1
	for i := range g.Shapes {
		s := &g.Shapes[i]
		g.everywhere &= s.Present
		totals[i] = make([]float64, 1<<g.Bits)
		for p := range totals[i] {
			rates = rates[:0]
			for m := range s.Rate {
				rates = append(rates, s.Rate[m][p])
			}
			totals[i][p] = total(rates)
			distinct[totals[i][p]] = true
		}
	}
	for r := range distinct {
		g.Rates = append(g.Rates, r)
	}
	sort.Float64s(g.Rates)
	if len(g.Rates) > 256 {
		return &TooManyRates{Rates: len(g.Rates) - 1}
	}
	for i := range g.Shapes {
		s := &g.Shapes[i]
		s.Class = make([]uint8, 1<<g.Bits)
		s.Split = make([]uint64, len(s.Rate)<<g.Bits)
		for p, r := range totals[i] {
			s.Class[p] = uint8(sort.SearchFloat64s(g.Rates, r))
			sum := 0.0
			for m := range s.Rate {
				sum += s.Rate[m][p]
				s.Split[p*len(s.Rate)+m] = share(sum, r)
			}
			if len(s.Rate) > 0 {
				s.lastSplit(p)
			}
		}
	}
	return nil
}

// share returns part/whole scaled to 2^64-1.
func share(part, whole float64) uint64 {
	if whole == 0 || part >= whole {
		return math.MaxUint64
	}
	return uint64(part / whole * 0x1p64)
}

// lastSplit makes the last move with a positive rate take the whole remainder,
// so that no frozen move is ever chosen by rounding.
func (s *Shape) lastSplit(p int) {
	moves := len(s.Rate)
	for m := moves - 1; m >= 0; m-- {
		s.Split[p*moves+m] = math.MaxUint64
		if s.Rate[m][p] > 0 {
			return
		}
	}
}

// table returns the first entry of the transition table that adds change to the
// slots of a shape.
func (k *compiler) table(shape int, change []int) (uint32, error) {
	g := k.g
	key := tableKey(shape, change)
	if t, ok := k.tables[key]; ok {
		return t, nil
	}
	if len(g.Tables)>>g.Bits >= 1<<(31-g.Bits) {
		return 0, fmt.Errorf("the transition tables would have more than 2^31 entries")
	}
	t := uint32(len(g.Tables))
	class := g.Shapes[shape].Class
	for p := range 1 << g.Bits {
		to := addLevels(p, change, g.SlotBits, g.Levels)
		g.Tables = append(g.Tables, uint32(to)|uint32(class[p])<<16|uint32(class[to])<<24)
	}
	k.tables[key] = t
	g.tableShape = append(g.tableShape, uint16(shape))
	return t, nil
}

// wideTable returns what table returns, for patterns without tables.
func (k *compiler) wideTable(shape int, change []int) uint32 {
	key := tableKey(shape, change)
	t, ok := k.tables[key]
	if !ok {
		t = k.g.Wide.add(shape, change)
		k.tables[key] = t
	}
	return t
}

func tableKey(shape int, change []int) string {
	key := binary.AppendUvarint(nil, uint64(shape))
	for _, d := range change {
		key = binary.AppendUvarint(key, uint64(d))
	}
	return string(key)
}

// addLevels adds change to the slots of a pattern, mod q.
func addLevels(p int, change []int, width, q int) int {
	for b, d := range change {
		s := p >> (width * b) & (1<<width - 1)
		p += ((s+d)%q - s) << (width * b)
	}
	return p
}
