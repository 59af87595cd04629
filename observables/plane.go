package observables

import (
	"math/bits"

	"sojourn/kinetic"
)

// bitPlane holds one bit for each cell of a lattice: rows along axis 0, each
// starting on a word, in the order of the other axes.
type bitPlane struct {
	length int // cells in a row
	stride int // words in a row
	rows   int
	words  []uint64
}

func newBitPlane(g *kinetic.Generator) *bitPlane {
	lx := g.Lattice.Size[0]
	p := &bitPlane{length: lx, stride: (lx + 63) / 64, rows: g.Cells() / lx}
	p.words = make([]uint64, p.rows*p.stride)
	return p
}

func (p *bitPlane) row(r int) []uint64 { return p.words[r*p.stride:][:p.stride] }

// span returns n rows from r on.
func (p *bitPlane) span(r, n int) []uint64 { return p.words[r*p.stride : (r+n)*p.stride] }

func (p *bitPlane) set(cell int) {
	r, x := cell/p.length, cell%p.length
	p.words[r*p.stride+x/64] |= 1 << (x % 64)
}

func (p *bitPlane) count() int64 { return count(p.words) }

func count(words []uint64) int64 {
	n := 0
	for _, w := range words {
		n += bits.OnesCount64(w)
	}
	return int64(n)
}

// run is a stretch of terms in a row that are read from the same bit of equally
// spaced addresses.
type run struct {
	word    int32 // first word of the row
	bit     int32 // first bit within the row
	n       int32
	address int32
	shift   uint8
}

// termPlane packs the levels of one family, two-level systems only, into a bit
// plane: 1 is the eigenvalue -1; a term that the lattice does not have is 0.
type termPlane struct {
	*bitPlane
	present *bitPlane // the cells that have a term
	terms   int64     // how many
	seats   int       // per cell
	runs    []run
	fixed   []uint64 // the plane of the terms that no move changes; nil if there is none
}

func newTermPlane(g *kinetic.Generator, family int) *termPlane {
	t := &termPlane{bitPlane: newBitPlane(g), present: newBitPlane(g), seats: len(g.Seats)}
	loc := newLocator(g, family)
	for r := range t.rows {
		var open *run
		for x := range t.length {
			cell := r*t.length + x
			s, ok := loc.find(cell)
			if ok {
				t.present.set(cell)
			}
			if !ok || s.address == still {
				open = nil
				if ok && s.shift == 1 {
					t.set(cell)
				}
				continue
			}
			if open != nil && open.shift == s.shift && open.address+open.n*int32(t.seats) == s.address {
				open.n++
				continue
			}
			t.runs = append(t.runs, run{int32(r * t.stride), int32(x), 1, s.address, s.shift})
			open = &t.runs[len(t.runs)-1]
		}
	}
	t.terms = t.present.count()
	if count(t.words) > 0 {
		t.fixed = append(t.fixed, t.words...)
	}
	return t
}

// read packs the levels found in the patterns of all addresses.
func (t *termPlane) read(patterns []uint16) {
	if t.fixed != nil {
		copy(t.words, t.fixed)
	} else {
		clear(t.words)
	}
	for i := range t.runs {
		r := &t.runs[i]
		t.pack(r, patterns)
	}
}

// pack ORs one run into the plane, word by word.
func (t *termPlane) pack(r *run, patterns []uint16) {
	bit, left, a := int(r.bit), int(r.n), int(r.address)
	for left > 0 {
		n := min(64-bit%64, left)
		w := &t.words[int(r.word)+bit/64]
		if n == 64 && t.seats == 1 {
			*w |= pack64((*[64]uint16)(patterns[a:]), r.shift)
		} else {
			for i := range n {
				*w |= uint64(patterns[a+i*t.seats]>>(r.shift&15)&1) << ((bit + i) & 63)
			}
		}
		bit += n
		left -= n
		a += n * t.seats
	}
}

// pack64 collects one bit from each of 64 patterns, four at a time: the product
// brings bits 0, 16, 32 and 48 together in bits 48 to 51.
func pack64(p *[64]uint16, shift uint8) uint64 {
	const gather = 1<<48 | 1<<33 | 1<<18 | 1<<3
	var word uint64
	shift &= 15
	for i := 0; i < 64; i += 4 {
		q := (*[4]uint16)(p[i : i+4])
		four := uint64(q[0]) | uint64(q[1])<<16 | uint64(q[2])<<32 | uint64(q[3])<<48
		four = four >> shift & 0x0001_0001_0001_0001
		word = word>>4 | four*gather>>48<<60
	}
	return word
}
