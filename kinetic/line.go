package kinetic

import (
	"math"
	"slices"
	"sort"

	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// line is a tracked operator with an extent during compilation.
type line struct {
	name    string
	factors []pauli.Factor
	absent  []Absence
	extent  [lattice.MaxAxes]bool
	stride  [lattice.MaxAxes]int // of the position, 0 along the extent
}

// missing is beyond any position, and its double still fits.
const missing = 1 << 30

func (k *compiler) addLine(t TrackedSpec) {
	l := line{name: t.Name, factors: t.Operator.Factors(), absent: k.spec.Absent, extent: t.Operator.Extent}
	positions := 1
	for a, n := range k.g.Lattice.Size {
		if !l.extent[a] {
			l.stride[a] = positions
			positions *= n
		}
	}
	out := Line{Name: t.Name, Positions: positions}
	for p := range positions {
		if !l.exists(k.g.Lattice, k.spec.PositionCell(t.Operator, p)) {
			if out.Exists == nil {
				out.Exists = make([]bool, positions)
				for i := range p {
					out.Exists[i] = true
				}
			}
		} else if out.Exists != nil {
			out.Exists[p] = true
		}
	}
	k.lines = append(k.lines, l)
	k.g.Lines = append(k.g.Lines, out)
}

// exists reports whether all factors of the instance through the cell lie on
// sites of the lattice. (Along an open axis of its extent the operator is
// complete only if its cross-section has no offsets there, and meets no edge
// at which a site is absent.)
func (l *line) exists(lat lattice.Lattice, cell int) bool {
	c := lat.Coord(cell)
	for a := range c {
		if _, ok := l.coordinate(lat, a, c[a]); !ok {
			return false
		}
	}
	return true
}

// coordinate checks that an instance at coordinate x of axis a keeps all its
// factors inside.
func (l *line) coordinate(lat lattice.Lattice, a, x int) (int, bool) {
	if !lat.Open[a] {
		return x, true
	}
	for _, f := range l.factors {
		lo, hi := siteRange(lat, l.absent, f.Site, a)
		if l.extent[a] {
			// Any offset would leave one end bare.
			if f.Exp[a] != 0 || lo > 0 || hi < lat.Size[a]-1 {
				return x, false
			}
			continue
		}
		if y := x + f.Exp[a]; y < lo || y > hi {
			return x, false
		}
	}
	return x, true
}

// along returns what the coordinate x of axis a, at a site that a factor with
// offset e meets, adds to the position of the instance.
func (l *line) along(lat lattice.Lattice, a, x, e int) uint32 {
	t := x - e
	n := lat.Size[a]
	if l.extent[a] {
		t = 0
	} else if t < 0 || t >= n {
		if lat.Open[a] {
			return missing
		}
		t = ((t % n) + n) % n
	}
	if _, ok := l.coordinate(lat, a, t); !ok {
		return missing
	}
	return uint32(t * l.stride[a])
}

type hitKey struct {
	line   int
	site   int
	offset lattice.Offset
}

// cross is one factor of a line on a site, and by how much a move changes the
// line there.
type cross struct {
	line   int
	offset lattice.Offset // 0 along the extent
	change int
}

// crossings lists the factors of lines that move m of a seat changes. Factors
// that differ along the extent only are merged.
func (k *compiler) crossings(seat, m int) []cross {
	s := k.g.Seats[seat]
	var out []cross
	for i, l := range k.lines {
		first := len(out)
		for _, f := range l.factors {
			if f.Site != s.Site {
				continue
			}
			c := cross{i, f.Exp, turn(s.Moves[m].X, s.Moves[m].Z, f.X, f.Z, k.g.Levels)}
			for a := range c.offset {
				if l.extent[a] {
					c.offset[a] = 0
				}
			}
			merged := false
			for j := range out[first:] {
				if o := &out[first+j]; o.offset == c.offset {
					o.change = (o.change + c.change) % k.g.Levels
					merged = true
				}
			}
			if !merged {
				out = append(out, c)
			}
		}
	}
	kept := out[:0]
	for _, c := range out {
		if c.change != 0 {
			kept = append(kept, c)
		}
	}
	return kept
}

// position returns the instance that a crossing at cell c belongs to; ok is
// false if it does not exist.
func (k *compiler) position(x cross, c lattice.Offset) (p int, ok bool) {
	sum := uint64(0)
	for a := range c {
		v := k.lines[x.line].along(k.g.Lattice, a, c[a], x.offset[a])
		if v >= missing {
			return 0, false
		}
		sum += uint64(v)
	}
	return int(sum), true
}

// lineChanges lists, by move and line, what is added to the levels of the
// positions that change, in increasing order.
func (k *compiler) lineChanges(c lattice.Offset, seat int) [][][]uint8 {
	out := make([][][]uint8, len(k.g.Seats[seat].Moves))
	for m := range out {
		out[m] = make([][]uint8, len(k.lines))
		type instance struct{ line, position int }
		change := map[instance]int{}
		for _, x := range k.crossings(seat, m) {
			if p, ok := k.position(x, c); ok {
				change[instance{x.line, p}] += x.change
			}
		}
		for at, d := range change {
			if d %= k.g.Levels; d != 0 {
				out[m][at.line] = append(out[m][at.line], uint8(d))
			}
		}
		for _, l := range out[m] {
			slices.Sort(l)
		}
	}
	return out
}

// appendHits appends the hits of a move at cell c that fall on existing
// instances. The tables behind a hit are shared by all places.
func (k *compiler) appendHits(c lattice.Offset, seat, m int) {
	cs := k.crossings(seat, m)
	sort.SliceStable(cs, func(i, j int) bool { return cs[i].line < cs[j].line })
	for _, x := range cs {
		if _, ok := k.position(x, c); !ok {
			continue
		}
		key := hitKey{x.line, k.g.Seats[seat].Site, x.offset}
		tables, ok := k.hits[key]
		if !ok {
			tables = k.hitTables(x)
			k.hits[key] = tables
		}
		h := k.hitList[tables]
		h.Change = uint8(x.change)
		k.g.Hits = append(k.g.Hits, h)
	}
}

// hitTables makes the position tables of a crossing and returns their index.
func (k *compiler) hitTables(x cross) int {
	lat := k.g.Lattice
	l := &k.lines[x.line]
	h := Hit{Line: x.line}
	for c := range lat.Size[0] {
		v := l.along(lat, 0, c, x.offset[0])
		for range k.g.Seats {
			h.Col = append(h.Col, v)
		}
	}
	for w := range lat.Size[3] {
		for z := range lat.Size[2] {
			for y := range lat.Size[1] {
				sum := uint64(l.along(lat, 1, y, x.offset[1])) +
					uint64(l.along(lat, 2, z, x.offset[2])) + uint64(l.along(lat, 3, w, x.offset[3]))
				h.Row = append(h.Row, uint32(min(sum, math.MaxUint32/4)))
			}
		}
	}
	k.hitList = append(k.hitList, h)
	return len(k.hitList) - 1
}
