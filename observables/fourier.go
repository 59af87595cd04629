package observables

import (
	"math"
	"math/bits"
	"math/cmplx"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// bitAmplitude computes the Fourier amplitude of the terms on a plane,
//
//	f = sum_r s_r exp(i k.(r - c)),   k_a = 2 pi n_a/L_a,
//
// n the wavevector. c is 0 along periodic axes, where the choice does not
// matter, and the middle of the terms along open ones, so that on a lattice
// with a mirror the mean of f is real.
//
// With b_r the bit of a term, f = sum exp - 2 sum_{b_r=1} exp: the first is
// fixed, the second is summed row by row, eight cells at a time from a table of
// the 256 partial sums.
type bitAmplitude struct {
	plane  *termPlane
	along  bool // whether k has a component along the rows
	all    complex128
	rows   []complex128 // phase of a row, with -2 and the centre in it
	octets []complex128 // phase of the cell 8j of a row
	table  [256]complex128
	column []complex128 // scratch, by octet
	flat   bool         // whether all rows have the same phase
}

func newBitAmplitude(g *kinetic.Generator, family int, t *termPlane, k lattice.Offset) *bitAmplitude {
	size := g.Lattice.Size
	center := middlePhase(g, family, k)
	f := &bitAmplitude{plane: t, along: k[0]%size[0] != 0, flat: true}
	inRow := make([]complex128, t.length)
	for x := range inRow {
		inRow[x] = turn(k[0]*x, size[0])
	}
	for r := range t.rows {
		phase := center * cellPhase(g.Lattice, k, g.Lattice.Coord(r*t.length))
		f.rows = append(f.rows, -2*phase)
		f.flat = f.flat && phase == f.rows[0]/-2
		present := t.present.row(r)
		for x, p := range inRow {
			if present[x/64]>>(x%64)&1 == 1 {
				f.all += phase * p
			}
		}
	}
	if cmplx.Abs(f.all) < 1e-9*float64(t.terms) {
		f.all = 0 // the exact value of the sum over whole periods
	}
	for j := range (t.length + 7) / 8 {
		f.octets = append(f.octets, turn(k[0]*8*j, size[0]))
	}
	f.column = make([]complex128, len(f.octets))
	for b := range f.table {
		for i := range 8 {
			if b>>i&1 == 1 {
				f.table[b] += turn(k[0]*i, size[0])
			}
		}
	}
	return f
}

// middlePhase returns exp(-i k.c).
func middlePhase(g *kinetic.Generator, family int, k lattice.Offset) complex128 {
	lo, hi := extent(g, family)
	phase := complex128(1)
	for a := range k {
		if g.Lattice.Open[a] {
			phase *= cmplx.Conj(turn(k[a]*(lo[a]+hi[a]), 2*g.Lattice.Size[a]))
		}
	}
	return phase
}

// cellPhase returns exp(i k.r).
func cellPhase(l lattice.Lattice, k, r lattice.Offset) complex128 {
	phase := complex128(1)
	for a := range k {
		phase *= turn(k[a]*r[a], l.Size[a])
	}
	return phase
}

// turn returns exp(2 pi i n/length), exact at multiples of a quarter turn.
func turn(n, length int) complex128 {
	n = (n%length + length) % length
	switch 4 * n {
	case 0:
		return 1
	case length:
		return 1i
	case 2 * length:
		return -1
	case 3 * length:
		return -1i
	}
	s, c := math.Sincos(2 * math.Pi * float64(n) / float64(length))
	return complex(c, s)
}

// of returns the amplitude of the plane as it was last read.
func (f *bitAmplitude) of() complex128 {
	switch {
	case !f.along:
		return f.all + f.byRows(f.plane)
	case f.flat:
		return f.all + f.byColumns(f.plane)
	}
	return f.all + f.general(f.plane)
}

func (f *bitAmplitude) byRows(t *termPlane) complex128 {
	var sum complex128
	for r, phase := range f.rows {
		n := 0
		for _, w := range t.row(r) {
			n += bits.OnesCount64(w)
		}
		sum += complex(float64(n)*real(phase), float64(n)*imag(phase))
	}
	return sum
}

func (f *bitAmplitude) byColumns(t *termPlane) complex128 {
	clear(f.column)
	for r := range f.rows {
		f.octetsOf(t.row(r))
	}
	var sum complex128
	for j, c := range f.column {
		sum += c * f.octets[j]
	}
	return sum * f.rows[0]
}

// octetsOf adds the table's sum for each octet of a row to its column.
func (f *bitAmplitude) octetsOf(row []uint64) {
	column := f.column
	for _, w := range row {
		if len(column) < 8 {
			for j := range column {
				column[j] += f.table[uint8(w)]
				w >>= 8
			}
			return
		}
		c := (*[8]complex128)(column)
		for j := range c {
			c[j] += f.table[uint8(w)]
			w >>= 8
		}
		column = column[8:]
	}
}

func (f *bitAmplitude) general(t *termPlane) complex128 {
	var sum complex128
	for r, phase := range f.rows {
		var re, im float64
		octets := f.octets
		for _, w := range t.row(r) {
			for j := range octets[:min(8, len(octets))] {
				s, o := f.table[uint8(w)], octets[j]
				re += real(s)*real(o) - imag(s)*imag(o)
				im += real(s)*imag(o) + imag(s)*real(o)
				w >>= 8
			}
			octets = octets[min(8, len(octets)):]
		}
		sum += complex(re, im) * phase
	}
	return sum
}

// levelAmplitude computes the Fourier amplitude of terms with more than two
// levels.
type levelAmplitude struct {
	levels  []uint8 // by cell
	length  int
	rows    []complex128    // phase of a row
	columns []complex128    // phase within a row
	value   [256]complex128 // by level; 0 for a term that is absent
}

func newLevelAmplitude(g *kinetic.Generator, family int, levels []uint8, value []complex128, k lattice.Offset) *levelAmplitude {
	f := &levelAmplitude{levels: levels, length: g.Lattice.Size[0]}
	copy(f.value[:], value)
	center := middlePhase(g, family, k)
	for c := 0; c < g.Cells(); c += f.length {
		f.rows = append(f.rows, center*cellPhase(g.Lattice, k, g.Lattice.Coord(c)))
	}
	for x := range f.length {
		f.columns = append(f.columns, turn(k[0]*x, f.length))
	}
	return f
}

func (f *levelAmplitude) of() complex128 {
	var sum complex128
	for r, phase := range f.rows {
		var re, im float64
		for x, s := range f.levels[r*f.length:][:f.length] {
			v, c := f.value[s], f.columns[x]
			re += real(v)*real(c) - imag(v)*imag(c)
			im += real(v)*imag(c) + imag(v)*real(c)
		}
		sum += phase * complex(re, im)
	}
	return sum
}
