package observables

import "sojourn/kinetic/lattice"

// shift fills p with the plane under rows, moved along its rows: bit x of p is bit
// x + dx of it, 0 beyond an open edge.
func (p *bitPlane) shift(rows *longRows, dx int) {
	from := rows.origin + dx
	if from < 0 {
		from += p.length
	}
	word, bit := from/64, uint(from&63)
	for r := range p.rows {
		to, src := p.row(r), rows.row(r)[word:]
		src = src[:len(to)+1]
		for i := range to {
			// A shift by 64 gives 0.
			to[i] = src[i]>>bit | src[i+1]<<(64-bit)
		}
		to[len(to)-1] &= rows.last
	}
}

// longRows holds the rows of a plane so that a moved row is a stretch of it: each
// row twice on a periodic axis, between two rows of zeros on an open one.
type longRows struct {
	open   bool
	origin int // bit of a row where x = 0 stands
	stride int
	last   uint64 // mask of the last word of a plane's row
	words  []uint64
}

func newLongRows(p *bitPlane, open bool) *longRows {
	l := &longRows{open: open, last: ^uint64(0) >> (-p.length & 63)}
	length := 2 * p.length
	if open {
		l.origin = p.length
		length += p.length
	}
	l.stride = length/64 + 2
	l.words = make([]uint64, p.rows*l.stride)
	return l
}

func (l *longRows) row(r int) []uint64 { return l.words[r*l.stride:][:l.stride] }

func (l *longRows) fill(p *bitPlane) {
	clear(l.words)
	for r := range p.rows {
		copyBits(l.row(r), l.origin, p.row(r), 0, p.length)
		if !l.open {
			copyBits(l.row(r), p.length, p.row(r), 0, p.length)
		}
	}
}

// copyBits ORs n bits of src from bit i on into dst from bit j on.
func copyBits(dst []uint64, j int, src []uint64, i, n int) {
	for n > 0 {
		m := min(n, 64-j%64)
		w := src[i/64] >> (i & 63)
		if i%64+m > 64 {
			w |= src[i/64+1] << (64 - i&63)
		}
		if m < 64 {
			w &= 1<<m - 1
		}
		dst[j/64] |= w << (j & 63)
		i += m
		j += m
		n -= m
	}
}

// eachSweep calls visit for stretches of n rows from a whose partners, at
// displacement d but for its component along the rows, are the rows from b on.
func eachSweep(l lattice.Lattice, d lattice.Offset, visit func(a, b, n int)) {
	across := lattice.Offset{0, d[1], d[2], d[3]}
	for w := range l.Size[3] {
		for z := range l.Size[2] {
			for y := 0; y < l.Size[1]; {
				from := lattice.Offset{0, y, z, w}
				to, ok := l.Wrap(from, across)
				if !ok {
					y++
					continue
				}
				n := l.Size[1] - max(y, to[1])
				visit(l.Index(from)/l.Size[0], l.Index(to)/l.Size[0], n)
				y += n
			}
		}
	}
}

// byFirst groups the indices of displacements by component 0, in order of
// first appearance.
func byFirst(d []lattice.Offset) [][]int {
	var groups [][]int
	place := make(map[int]int)
	for i := range d {
		k, ok := place[d[i][0]]
		if !ok {
			k = len(groups)
			place[d[i][0]] = k
			groups = append(groups, nil)
		}
		groups[k] = append(groups[k], i)
	}
	return groups
}
