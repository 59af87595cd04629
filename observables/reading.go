package observables

import (
	"sojourn/kinetic"
)

// reading is the values of all observables in the present state of an engine.
// Observables are read as channels (numbers) and tracks (vectors of single
// levels): a scalar is one channel, a Fourier amplitude or complex sum two, real
// and imaginary part; Local and Operator observables are tracks. With two levels a track is a
// bit vector, else a byte vector.
type reading struct {
	values []float64  // lane, channel
	bits   [][]uint64 // two levels: by track: lane, word
	levels [][]uint8  // more levels: by track: lane, component
	counts [][]int64  // by track: lane, level: how many components are at it

	layout []slot         // by observable
	value  [][]complex128 // by family and level
	e      kinetic.Engine
	g      *kinetic.Generator
	words  kinetic.LaneWords // e, if its lanes are the bits of words

	lanes    int
	channels int
	tracks   []track

	sums     []int64
	patterns []uint16 // two levels: of one lane; nil if no observable needs them
	planes   map[int]*termPlane
	cells    map[int][]uint8 // more levels: of one lane by family and cell
	order    []int           // families in planes or cells, as first asked for
	scratch  []uint8
	columns  wordColumns
}

// slot says where an observable stands in a reading.
type slot struct {
	Observable
	channel int // of its value or real part, -1 for tracks
	track   int // -1 for channels
	parts   []amplitude
}

// amplitude is the part that one family has in a Fourier amplitude.
type amplitude interface{ of() complex128 }

// components returns the number of terms or positions behind a track, and 1 for
// a scalar; Fourier amplitudes have norm 1.
func (r *reading) components(o int) int {
	if t := r.layout[o].track; t >= 0 {
		return r.tracks[t].components
	}
	return 1
}

func newReading(e kinetic.Engine, g *kinetic.Generator, obs []Observable) *reading {
	r := &reading{
		e: e, g: g, lanes: e.Lanes(),
		planes: make(map[int]*termPlane), cells: make(map[int][]uint8),
	}
	for f := range g.Families {
		r.value = append(r.value, valuesOf(g, f))
	}
	r.words, _ = e.(kinetic.LaneWords)
	for _, o := range obs {
		s := slot{Observable: o, channel: -1, track: -1}
		switch o.Kind {
		case Local:
			s.track = r.addTrack(newLocalTrack(g, sublattice(g, o.Families, localLimit(g, r.lanes))))
			r.needTerms(o.Families)
		case Operator:
			s.track = r.addTrack(newLineTrack(g, o.Line))
			r.scratch = make([]uint8, max(len(r.scratch), g.Lines[o.Line].Positions))
		case Fourier:
			s.channel = r.channels
			r.channels += 2
			for _, f := range o.Families {
				s.parts = append(s.parts, r.amplitude(f, o))
			}
		default:
			s.channel = r.channels
			r.channels++
			if o.amplitude() {
				r.channels++
			}
		}
		r.layout = append(r.layout, s)
	}
	r.values = make([]float64, r.lanes*r.channels)
	if r.words != nil {
		r.columns = newWordColumns(g, r)
	}
	return r
}

func (r *reading) addTrack(t track) int {
	r.tracks = append(r.tracks, t)
	if r.g.Levels == 2 {
		r.bits = append(r.bits, make([]uint64, r.lanes*t.words))
	} else {
		r.levels = append(r.levels, make([]uint8, r.lanes*t.components))
	}
	r.counts = append(r.counts, make([]int64, r.lanes*r.g.Levels))
	return len(r.tracks) - 1
}

// needTerms has what single terms of families are read from read with every
// sample.
func (r *reading) needTerms(families []int) {
	if r.g.Levels == 2 {
		if r.patterns == nil && r.words == nil {
			r.patterns = make([]uint16, r.g.Addresses())
		}
		return
	}
	for _, f := range families {
		if r.cells[f] == nil {
			r.cells[f] = make([]uint8, r.g.Cells())
			r.order = append(r.order, f)
		}
	}
}

// amplitude prepares the part of family f in a Fourier amplitude.
func (r *reading) amplitude(f int, o Observable) amplitude {
	r.needTerms([]int{f})
	if r.g.Levels > 2 {
		return newLevelAmplitude(r.g, f, r.cells[f], r.value[f], o.Wavevector)
	}
	if r.planes[f] == nil {
		r.planes[f] = newTermPlane(r.g, f)
		r.order = append(r.order, f)
	}
	return newBitAmplitude(r.g, f, r.planes[f], o.Wavevector)
}

// take reads all observables in all lanes.
func (r *reading) take() {
	r.sums = r.e.Sums(r.sums[:0])
	width := len(r.sums) / r.lanes
	if r.words != nil {
		r.columns.take(r)
	}
	for lane := range r.lanes {
		r.takeTerms(lane)
		sums := r.sums[lane*width:][:width]
		values := r.values[lane*r.channels:][:r.channels]
		for i := range r.layout {
			r.takeOne(&r.layout[i], lane, sums, values)
		}
	}
}

// takeTerms reads the terms of one lane.
func (r *reading) takeTerms(lane int) {
	switch {
	case r.words != nil:
		for _, f := range r.order {
			r.columns.plane(r.planes[f], f, lane)
		}
	case r.g.Levels > 2:
		for _, f := range r.order {
			r.e.Terms(f, lane, r.cells[f])
		}
	case r.patterns != nil:
		r.e.Patterns(lane, r.patterns)
		for _, f := range r.order {
			r.planes[f].read(r.patterns)
		}
	}
}

func (r *reading) takeOne(s *slot, lane int, sums []int64, values []float64) {
	switch s.Kind {
	case Energy:
		values[s.channel] = r.e.Energy(lane)
	case Fourier:
		var f complex128
		for _, a := range s.parts {
			f += a.of()
		}
		values[s.channel], values[s.channel+1] = real(f), imag(f)
	case Local, Operator:
		r.takeTrack(s.track, lane)
	default:
		if r.g.Levels > 2 {
			total := r.weighed(s.Families, sums)
			values[s.channel] = real(total)
			if s.amplitude() {
				values[s.channel+1] = imag(total)
			}
			return
		}
		var total int64
		for _, f := range s.Families {
			total += sums[f]
		}
		values[s.channel] = float64(total)
	}
}

// weighed adds up the values of families from the numbers of their terms by
// level in a lane.
func (r *reading) weighed(families []int, sums []int64) complex128 {
	q := r.g.Levels
	var re, im float64
	for _, f := range families {
		for s, n := range sums[f*q : (f+1)*q] {
			re += float64(n) * real(r.value[f][s])
			im += float64(n) * imag(r.value[f][s])
		}
	}
	return complex(re, im)
}

// origins returns, by channel, a value near the data: that of a scalar in lane 0,
// and 0 for amplitudes, which vary about it.
func (r *reading) origins() []float64 {
	out := make([]float64, r.channels)
	copy(out, r.values)
	for i := range r.layout {
		if l := &r.layout[i]; l.amplitude() {
			out[l.channel], out[l.channel+1] = 0, 0
		}
	}
	return out
}

// mean returns the mean over terms or positions of an observable in a lane; of
// complex values the sum of real and imaginary part.
func (r *reading) mean(o, lane int) float64 {
	s := &r.layout[o]
	if s.track >= 0 {
		return r.tracks[s.track].weigh(r.counts[s.track][lane*r.g.Levels:][:r.g.Levels], 1) / float64(r.components(o))
	}
	v := r.values[lane*r.channels+s.channel]
	if s.amplitude() {
		v += r.values[lane*r.channels+s.channel+1]
	}
	return v
}
