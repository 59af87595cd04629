package observables

import (
	"math/bits"

	"sojourn/kinetic/lattice"
)

// pointPairs counts pairs of terms at given displacements. Rows of bits are
// shifted against each other and compared 64 terms at a time, so the sums are
// exact integers, and no length is a bad one. (A Fourier transform of the
// lattice would pay from some ten thousand displacements on.)
type pointPairs struct {
	l      lattice.Lattice
	d      []lattice.Offset
	plane  *termPlane
	whole  bool       // no edges and no absent terms
	groups [][]int    // displacements with the same component along the rows
	totals []pairSumI // by displacement, over snapshots

	rows, present *longRows // of terms and of their presence
	moved, here   *bitPlane // shifted
}

// pairSumI are counts over pairs: how many, and in how many the first, the
// second, or exactly one of both is -1.
type pairSumI struct{ pairs, first, second, differ int64 }

func newPointPairs(l lattice.Lattice, plane *termPlane, d []lattice.Offset) *pointPairs {
	blank := func() *bitPlane {
		p := *plane.bitPlane
		p.words = make([]uint64, len(plane.words))
		return &p
	}
	p := &pointPairs{
		l: l, d: d, plane: plane, groups: byFirst(d),
		whole:  l.Periodic() && plane.terms == int64(l.Cells()),
		totals: make([]pairSumI, len(d)),
		rows:   newLongRows(plane.bitPlane, l.Open[0]),
		moved:  blank(),
	}
	if !p.whole {
		p.present, p.here = newLongRows(plane.bitPlane, l.Open[0]), blank()
		p.present.fill(plane.present)
	}
	return p
}

// add takes in the plane as it was last read.
func (p *pointPairs) add() {
	ones := p.plane.count()
	// The planes are shifted once for all displacements with one component
	// along the rows.
	p.rows.fill(p.plane.bitPlane)
	for _, group := range p.groups {
		dx := p.d[group[0]][0]
		p.moved.shift(p.rows, dx)
		if !p.whole {
			p.here.shift(p.present, dx)
		}
		for _, i := range group {
			t := &p.totals[i]
			if p.whole {
				t.pairs += p.plane.terms
				t.first += ones
				t.second += ones
			}
			p.compare(p.d[i], t)
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

// compare counts the pairs of each term with that at displacement d, whose
// component along the rows is in the shifted planes already. Rows that follow
// each other on both sides are compared in one sweep.
func (p *pointPairs) compare(d lattice.Offset, t *pairSumI) {
	size := p.l.Size
	for w := range size[3] {
		for z := range size[2] {
			for y := 0; y < size[1]; {
				from := lattice.Offset{0, y, z, w}
				to, ok := p.l.Wrap(from, lattice.Offset{0, d[1], d[2], d[3]})
				if !ok {
					y++
					continue
				}
				n := size[1] - max(y, to[1])
				p.sweep(p.l.Index(from)/size[0], p.l.Index(to)/size[0], n, t)
				y += n
			}
		}
	}
}

// sweep compares n rows from a with the shifted rows from b.
func (p *pointPairs) sweep(a, b, n int, t *pairSumI) {
	stride := p.plane.stride
	first := p.plane.words[a*stride : (a+n)*stride]
	second := p.moved.words[b*stride : (b+n)*stride]
	if p.whole {
		t.differ += differ(first, second)
		return
	}
	have := p.plane.present.words[a*stride : (a+n)*stride]
	also := p.here.words[b*stride : (b+n)*stride]
	var pairs, one, two, xor int
	for i, m := range have {
		m &= also[i]
		pairs += bits.OnesCount64(m)
		one += bits.OnesCount64(first[i] & m)
		two += bits.OnesCount64(second[i] & m)
		xor += bits.OnesCount64((first[i] ^ second[i]) & m)
	}
	t.pairs += int64(pairs)
	t.first += int64(one)
	t.second += int64(two)
	t.differ += int64(xor)
}
