package observables

import (
	"math/bits"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// levelField counts pairs of terms with more than two levels, whose eigenvalues
// enter with their real part, at given displacements. It keeps a plane of bits
// for each value and counts the pairs of values.
type levelField struct {
	family int
	g      *kinetic.Generator
	d      []lattice.Offset
	groups [][]int
	value  []float64  // of a plane
	at     [256]uint8 // level -> plane; none for a term that is absent
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
	for s, v := range eigenvalues(g.Levels) {
		if mirror := g.Levels - s; mirror < s {
			f.at[s] = f.at[mirror] // the same cosine
			continue
		}
		f.at[s] = uint8(len(f.value))
		f.value = append(f.value, v)
		f.planes = append(f.planes, newBitPlane(g))
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
			s.f += float64(count) * a
			s.g += float64(count) * b
			s.fg += float64(count) * a * b
		}
	}
	return n, s
}

func (f *levelField) presence() *bitPlane { return f.here }

func (f *levelField) planeSums(dst []float64, axis int) {
	clear(dst)
	for i, p := range f.planes {
		for x, n := range planeCounts(f.counts[:len(dst)], f.g.Lattice, p, axis) {
			dst[x] += float64(n) * f.value[i]
		}
	}
}
