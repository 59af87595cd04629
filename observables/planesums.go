package observables

import (
	"math"
	"math/bits"

	"gonum.org/v1/gonum/dsp/fourier"

	"sojourn/kinetic/lattice"
)

// MaxDistance is the largest distance between planes whose covariance is taken.
const MaxDistance = 4096

// planePairs sums products of plane sums along one axis: P(x) is the sum of the
// eigenvalues of all terms with coordinate x. With two levels all sums are
// integers, and exact below 2^53.
type planePairs struct {
	axis   int
	open   bool
	whole  bool      // P is an integer
	sums   []float64 // P(x)
	exists []bool    // planes that hold a term
	pairs  []int64   // by distance, pairs of planes
	totals []pairSums
	fft    *fourier.FFT // nil where the direct sum is quicker
	seq    [2][]float64
	coeff  [2][]complex128
}

// direct is the length up to which pairs are summed directly.
const direct = 512

func newPlanePairs(l lattice.Lattice, f spatialField, axis int, whole bool) *planePairs {
	n := l.Size[axis]
	distances := min(longest(l, axis), MaxDistance) + 1
	p := &planePairs{
		axis: axis, open: l.Open[axis], whole: whole,
		sums: make([]float64, n), exists: make([]bool, n),
		pairs: make([]int64, distances), totals: make([]pairSums, distances),
	}
	for x, terms := range planeCounts(make([]int64, n), l, f.presence(), axis) {
		p.exists[x] = terms > 0
	}
	for d := range p.pairs {
		p.each(d, func(x, y int) {
			if p.exists[x] && p.exists[y] {
				p.pairs[d]++
			}
		})
	}
	if n > direct {
		// A length of at least n + distances keeps wrapped products away from
		// the distances that are read; a power of two is quick.
		size := 1 << bits.Len(uint(n+distances-1))
		p.fft = fourier.NewFFT(size)
		for i := range p.seq {
			p.seq[i] = make([]float64, size)
			p.coeff[i] = make([]complex128, size/2+1)
		}
	}
	return p
}

// each calls visit with all pairs of planes at distance d.
func (p *planePairs) each(d int, visit func(x, y int)) {
	n := len(p.sums)
	for x := range n {
		if y := x + d; y < n {
			visit(x, y)
		} else if !p.open {
			visit(x, y-n)
		}
	}
}

// add takes in the field as it was last read, one part after the other.
func (p *planePairs) add(f spatialField) {
	for part := range f.parts() {
		f.planeSums(p.sums, p.axis, part)
		p.addPart()
	}
}

func (p *planePairs) addPart() {
	var norm float64
	for _, s := range p.sums {
		norm += s * s
	}
	p.addMembers()
	// Products by Fourier transform are off by some 1e-15 of the norm; integers
	// are rounded to.
	if p.fft != nil && norm < 1e13 {
		p.addTransformed()
		return
	}
	for d := range p.totals {
		n := len(p.sums) - d
		sum := dot(p.sums[:n], p.sums[d:])
		if !p.open {
			sum += dot(p.sums[n:], p.sums[:d])
		}
		p.totals[d].fg += sum
	}
}

// addMembers adds the sums of first and second members. An absent plane has sum
// 0, and so has no share; its partners are left out.
func (p *planePairs) addMembers() {
	var all float64
	for _, s := range p.sums {
		all += s
	}
	for d := range p.totals {
		if !p.open {
			p.totals[d].f += all
			p.totals[d].g += all
			continue
		}
		n := len(p.sums) - d
		for x := range n {
			if p.exists[x] && p.exists[x+d] {
				p.totals[d].f += p.sums[x]
				p.totals[d].g += p.sums[x+d]
			}
		}
	}
}

// addTransformed adds the products of all distances by the correlation theorem.
func (p *planePairs) addTransformed() {
	n := len(p.sums)
	for i := range p.seq {
		clear(p.seq[i])
		copy(p.seq[i], p.sums)
	}
	if !p.open {
		copy(p.seq[1][n:], p.sums[:len(p.totals)])
	}
	for i := range p.seq {
		p.fft.Coefficients(p.coeff[i], p.seq[i])
	}
	for k, a := range p.coeff[0] {
		b := p.coeff[1][k]
		p.coeff[0][k] = complex(real(a)*real(b)+imag(a)*imag(b), real(a)*imag(b)-imag(a)*real(b))
	}
	p.fft.Sequence(p.seq[0], p.coeff[0])
	for d := range p.totals {
		product := p.seq[0][d] / float64(len(p.seq[0]))
		if p.whole {
			product = math.Round(product)
		}
		p.totals[d].fg += product
	}
}

// planeCounts counts the bits set in each plane perpendicular to an axis, by
// coordinate, into dst.
func planeCounts(dst []int64, l lattice.Lattice, p *bitPlane, axis int) []int64 {
	clear(dst)
	if axis == 0 {
		columnCounts(dst, p)
		return dst
	}
	block := 1 // rows with equal coordinate that follow each other
	for a := 1; a < axis; a++ {
		block *= l.Size[a]
	}
	for r := 0; r < p.rows; r += block {
		dst[r/block%l.Size[axis]] += count(p.words[r*p.stride : (r+block)*p.stride])
	}
	return dst
}

// octetBytes holds, for each octet, its bits one to a byte.
var octetBytes = func() (t [256]uint64) {
	for b := range t {
		for i := range 8 {
			t[b] |= uint64(b) >> i & 1 << (8 * i)
		}
	}
	return t
}()

// columnCounts counts the bits of all rows by column, eight columns at a time
// in the bytes of a word.
func columnCounts(dst []int64, p *bitPlane) {
	for j := 0; j < p.length; j += 8 {
		var bytes uint64
		flush := func() {
			for i := j; i < min(j+8, p.length); i++ {
				dst[i] += int64(bytes & 0xff)
				bytes >>= 8
			}
			bytes = 0
		}
		for r := range p.rows {
			bytes += octetBytes[uint8(p.words[r*p.stride+j/64]>>(j&63))]
			if r%255 == 254 {
				flush()
			}
		}
		flush()
	}
}
