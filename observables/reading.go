package observables

import (
	"sojourn/kinetic"
)

// reading is the values of all observables in the present state of an engine.
// Observables are read as channels (numbers) and tracks (bit vectors): a scalar
// is one channel, a Fourier amplitude two, real and imaginary part; Local and
// Operator observables are tracks.
type reading struct {
	values []float64  // lane, channel
	bits   [][]uint64 // by track: lane, word
	ones   [][]int64  // by track and lane: bits set

	layout []slot // by observable
	e      kinetic.Engine
	g      *kinetic.Generator

	lanes    int
	channels int
	tracks   []track

	sums     []int64
	patterns []uint16 // of one lane; nil if no observable needs them
	planes   map[int]*termPlane
	order    []int // families with planes, increasing
	scratch  []uint8
}

// slot says where an observable stands in a reading.
type slot struct {
	Observable
	channel int // of its value or real part, -1 for tracks
	track   int // -1 for channels
	sources []amplitudeOf
}

// components returns the number of terms or positions behind a track, and 1 for
// a scalar; Fourier amplitudes have norm 1.
func (r *reading) components(o int) int {
	if t := r.layout[o].track; t >= 0 {
		return r.tracks[t].components
	}
	return 1
}

// amplitudeOf is the part that one family has in a Fourier amplitude.
type amplitudeOf struct {
	family int
	*amplitude
}

// track is a bit vector that is read from patterns (local) or from a line.
type track struct {
	local      localTrack
	chosen     []chosenTerm
	line       int // -1 for local
	components int
	words      int
}

func newReading(e kinetic.Engine, g *kinetic.Generator, obs []Observable) *reading {
	r := &reading{e: e, g: g, lanes: e.Lanes(), planes: make(map[int]*termPlane)}
	for _, o := range obs {
		s := slot{Observable: o, channel: -1, track: -1}
		switch o.Kind {
		case Local:
			t := track{line: -1, chosen: sublattice(g, o.Families)}
			t.local = newLocalTrack(t.chosen)
			t.components = len(t.chosen)
			s.track = r.addTrack(t)
			r.needPatterns()
		case Operator:
			t := track{line: o.Line, components: positions(g.Lines[o.Line])}
			s.track = r.addTrack(t)
			r.scratch = make([]uint8, max(len(r.scratch), g.Lines[o.Line].Positions))
		case Fourier:
			s.channel = r.channels
			r.channels += 2
			for _, f := range o.Families {
				s.sources = append(s.sources, amplitudeOf{f, newAmplitude(g, f, r.plane(f), o.Wavevector)})
			}
		default:
			s.channel = r.channels
			r.channels++
		}
		r.layout = append(r.layout, s)
	}
	r.values = make([]float64, r.lanes*r.channels)
	return r
}

// positions returns how many instances of a line exist.
func positions(l kinetic.Line) int {
	if l.Exists == nil {
		return l.Positions
	}
	n := 0
	for _, ok := range l.Exists {
		if ok {
			n++
		}
	}
	return n
}

func (r *reading) addTrack(t track) int {
	t.words = (t.components + 63) / 64
	r.tracks = append(r.tracks, t)
	r.bits = append(r.bits, make([]uint64, r.lanes*t.words))
	r.ones = append(r.ones, make([]int64, r.lanes))
	return len(r.tracks) - 1
}

func (r *reading) needPatterns() {
	if r.patterns == nil {
		r.patterns = make([]uint16, r.g.Addresses())
	}
}

// plane returns the plane of a family, which is read with every sample from
// then on.
func (r *reading) plane(f int) *termPlane {
	if r.planes[f] == nil {
		r.needPatterns()
		r.planes[f] = newTermPlane(r.g, f)
		r.order = append(r.order, f)
	}
	return r.planes[f]
}

// words returns the widths of the tracks.
func (r *reading) words() []int {
	out := make([]int, len(r.tracks))
	for i := range r.tracks {
		out[i] = r.tracks[i].words
	}
	return out
}

// take reads all observables in all lanes.
func (r *reading) take() {
	r.sums = r.e.Sums(r.sums[:0])
	width := len(r.sums) / r.lanes
	for lane := range r.lanes {
		if r.patterns != nil {
			r.e.Patterns(lane, r.patterns)
		}
		for _, f := range r.order {
			r.planes[f].read(r.patterns)
		}
		sums := r.sums[lane*width:][:width]
		values := r.values[lane*r.channels:][:r.channels]
		for i := range r.layout {
			r.takeOne(&r.layout[i], lane, sums, values)
		}
	}
}

func (r *reading) takeOne(s *slot, lane int, sums []int64, values []float64) {
	switch s.Kind {
	case Energy:
		values[s.channel] = r.e.Energy(lane)
	case Fourier:
		var f complex128
		for _, a := range s.sources {
			f += a.of(r.planes[a.family])
		}
		values[s.channel], values[s.channel+1] = real(f), imag(f)
	case Local, Operator:
		t := &r.tracks[s.track]
		vector := r.bits[s.track][lane*t.words:][:t.words]
		if s.Kind == Local {
			t.local.gather(vector, r.patterns)
		} else {
			r.gatherLine(vector, t.line, lane)
		}
		r.ones[s.track][lane] = count(vector)
	default:
		var total int64
		for _, f := range s.Families {
			total += sums[f]
		}
		values[s.channel] = float64(total)
	}
}

// gatherLine writes the levels of a line's existing positions into dst.
func (r *reading) gatherLine(dst []uint64, line, lane int) {
	levels := r.scratch[:r.g.Lines[line].Positions]
	r.e.Terms(len(r.g.Families)+line, lane, levels)
	clear(dst)
	i := 0
	for _, s := range levels {
		if s == kinetic.Absent {
			continue
		}
		dst[i/64] |= uint64(s&1) << (i & 63)
		i++
	}
}

// mean returns the mean over components of an observable in a lane; for a
// Fourier amplitude the sum of real and imaginary part.
func (r *reading) mean(o, lane int) float64 {
	s := &r.layout[o]
	if s.track >= 0 {
		k := r.tracks[s.track].components
		return float64(int64(k)-2*r.ones[s.track][lane]) / float64(k)
	}
	v := r.values[lane*r.channels+s.channel]
	if s.Kind == Fourier {
		v += r.values[lane*r.channels+s.channel+1]
	}
	return v
}
