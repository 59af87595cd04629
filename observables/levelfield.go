package observables

import (
	"math/bits"
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// levelField counts pairs of terms with more than two levels at given
// displacements. It keeps a plane of bits for each value and counts the pairs of
// values.
type levelField struct {
	family int
	g      *kinetic.Generator
	d      []lattice.Offset
	groups [][]int
	value  []complex128 // of a plane
	real   bool         // all values are
	at     [256]uint8   // level -> plane; none for a term that is absent
	planes []*bitPlane
	here   *bitPlane
	rows   *longRows
	moved  *bitPlane
	totals []int64 // displacement, value of the first, value of the second
	counts []int64
}

const none = 0xff

func newLevelField(g *kinetic.Generator, family int, d []lattice.Offset) *levelField {
	f := &levelField{
		family: family, g: g, d: d, groups: byFirst(d), here: newBitPlane(g),
		moved: newBitPlane(g), counts: make([]int64, longestAxis(g.Lattice)),
	}
	for i := range f.at {
		f.at[i] = none
	}
	f.real = true
	for s, v := range valuesOf(g, family) {
		at := slices.Index(f.value, v)
		if at < 0 {
			at = len(f.value)
			f.value = append(f.value, v)
			f.planes = append(f.planes, newBitPlane(g))
			f.real = f.real && imag(v) == 0
		}
		f.at[s] = uint8(at)
	}
	f.rows = newLongRows(f.here, g.Lattice.Open[0])
	f.totals = make([]int64, len(d)*len(f.value)*len(f.value))
	for c := range g.Cells() {
		if g.TermExists(family, c) {
			f.here.set(c)
		}
	}
	return f
}

func (f *levelField) read(s *snapshot) {
	s.e.Terms(f.family, s.lane, s.levels)
	for _, p := range f.planes {
		clear(p.words)
	}
	for c, level := range s.levels {
		if i := f.at[level]; i != none {
			f.planes[i].set(c)
		}
	}
}

func (f *levelField) add() {
	values := len(f.value)
	for j, second := range f.planes {
		f.rows.fill(second)
		for _, group := range f.groups {
			f.moved.shift(f.rows, f.d[group[0]][0])
			for _, k := range group {
				eachSweep(f.g.Lattice, f.d[k], func(a, b, n int) {
					moved := f.moved.span(b, n)
					for i, first := range f.planes {
						f.totals[(k*values+i)*values+j] += both(first.span(a, n), moved)
					}
				})
			}
		}
	}
}

// both counts the bits set in two vectors of equal length.
func both(a, b []uint64) int64 {
	n := 0
	for i, w := range a {
		n += bits.OnesCount64(w & b[i])
	}
	return int64(n)
}

func (f *levelField) pair(k int) (n int64, s pairSums) {
	values := len(f.value)
	for i, a := range f.value {
		for j, b := range f.value {
			count := f.totals[(k*values+i)*values+j]
			n += count
			s.f += float64(count) * together(a)
			s.g += float64(count) * together(b)
			s.fg += float64(count) * overlap(a, b)
		}
	}
	return n, s
}

func (f *levelField) presence() *bitPlane { return f.here }

func (f *levelField) parts() int {
	if f.real {
		return 1
	}
	return 2
}

func (f *levelField) planeSums(dst []float64, axis, part int) {
	clear(dst)
	for i, p := range f.planes {
		value := real(f.value[i])
		if part == 1 {
			value = imag(f.value[i])
		}
		for x, n := range planeCounts(f.counts[:len(dst)], f.g.Lattice, p, axis) {
			dst[x] += float64(n) * value
		}
	}
}
