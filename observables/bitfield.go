package observables

import (
	"math/bits"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// bitField counts pairs of terms with two levels at given displacements. Rows
// of bits are shifted against each other and compared 64 terms at a time, so the
// sums are exact integers, and no length is a bad one. (A Fourier transform of
// the lattice would pay from some ten thousand displacements on.)
type bitField struct {
	family int
	l      lattice.Lattice
	d      []lattice.Offset
	plane  *termPlane
	whole  bool        // no edges and no absent terms
	groups [][]int     // displacements with the same component along the rows
	totals []bitTotals // by displacement, over snapshots

	rows, present *longRows // of terms and of their presence
	moved, here   *bitPlane // shifted
	counts        []int64
}

// bitTotals counts pairs, and those in which the first, the second, or exactly
// one of both is -1.
type bitTotals struct{ pairs, first, second, differ int64 }

func newBitField(g *kinetic.Generator, family int, d []lattice.Offset) *bitField {
	l, plane := g.Lattice, newTermPlane(g, family)
	f := &bitField{
		family: family, l: l, d: d, plane: plane, groups: byFirst(d),
		whole:  l.Periodic() && plane.terms == int64(l.Cells()),
		totals: make([]bitTotals, len(d)),
		rows:   newLongRows(plane.bitPlane, l.Open[0]),
		moved:  newBitPlane(g),
		counts: make([]int64, longestAxis(l)),
	}
	if !f.whole {
		f.present, f.here = newLongRows(plane.bitPlane, l.Open[0]), newBitPlane(g)
		f.present.fill(plane.present)
	}
	return f
}

func (f *bitField) read(s *snapshot) { f.plane.read(s.patterns) }

// add takes in the field. Planes are shifted once for all displacements with one
// component along the rows.
func (f *bitField) add() {
	ones := f.plane.count()
	f.rows.fill(f.plane.bitPlane)
	for _, group := range f.groups {
		dx := f.d[group[0]][0]
		f.moved.shift(f.rows, dx)
		if !f.whole {
			f.here.shift(f.present, dx)
		}
		for _, i := range group {
			t := &f.totals[i]
			if f.whole {
				t.pairs += f.plane.terms
				t.first += ones
				t.second += ones
			}
			eachSweep(f.l, f.d[i], func(a, b, n int) { f.sweep(a, b, n, t) })
		}
	}
}

// sweep compares n rows from a with the shifted rows from b.
func (f *bitField) sweep(a, b, n int, t *bitTotals) {
	first := f.plane.span(a, n)
	second := f.moved.span(b, n)
	if f.whole {
		t.differ += differ(first, second)
		return
	}
	have := f.plane.present.span(a, n)
	also := f.here.span(b, n)
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

func (f *bitField) pair(k int) (n int64, s pairSums) {
	t := &f.totals[k]
	return t.pairs, pairSums{float64(t.pairs - 2*t.first), float64(t.pairs - 2*t.second), float64(t.pairs - 2*t.differ)}
}

func (f *bitField) presence() *bitPlane { return f.plane.present }

func (f *bitField) parts() int { return 1 }

func (f *bitField) planeSums(dst []float64, axis, _ int) {
	counts := f.counts[:len(dst)]
	for x, n := range planeCounts(counts, f.l, f.plane.present, axis) {
		dst[x] = float64(n)
	}
	for x, n := range planeCounts(counts, f.l, f.plane.bitPlane, axis) {
		dst[x] -= 2 * float64(n)
	}
}
