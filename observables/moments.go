package observables

// moments accumulates powers of each channel, and the levels of each track, by
// segment. Lanes are pooled.
//
// Totals can be large beside their fluctuations (an energy of 1e7 with a
// relative variance of 1e-8). Powers are therefore taken of the difference
// from the first sample (of Fourier amplitudes, whose mean is small, from 0) and
// expanded once (see powerSums.unshift). What is left is the rounding of the sums
// about zero in a row: a variance formed from Sum2/Count - (Sum1/Count)^2 is wrong
// by about 2^-53 of the mean squared, and a fourth central moment by about 2^-50
// of the fourth power of the mean.
type moments struct {
	channels []powerSums // segment, channel
	levels   []int64     // segment, track, level: components at it
	tracks   int
	q        int
	count    [MomentSegments]int64
	shift    []float64
	started  bool
}

func newMoments(channels, tracks, q int) *moments {
	return &moments{
		channels: make([]powerSums, MomentSegments*channels),
		levels:   make([]int64, MomentSegments*tracks*q),
		tracks:   tracks, q: q,
		shift: make([]float64, channels),
	}
}

func (m *moments) add(segment int, r *reading) {
	channels := len(m.shift)
	if !m.started {
		copy(m.shift, r.origins())
		m.started = true
	}
	m.count[segment] += int64(r.lanes)
	sums := m.channels[segment*channels:][:channels]
	for values := r.values; len(values) > 0; values = values[channels:] {
		for c, v := range values[:channels] {
			sums[c].add(v - m.shift[c])
		}
	}
	for i, counts := range r.counts {
		at := m.levels[(segment*m.tracks+i)*m.q:][:m.q]
		for ; len(counts) > 0; counts = counts[m.q:] {
			for s, n := range counts[:m.q] {
				at[s] += n
			}
		}
	}
}

// channel returns the sums of powers of a channel in a segment.
func (m *moments) channel(segment, c int) powerSums {
	return m.channels[segment*len(m.shift)+c].unshift(m.count[segment], m.shift[c])
}

// track returns the sums of powers of a track's values in a segment, as means
// over its terms.
func (m *moments) track(segment, i int, r *reading) powerSums {
	counts := m.levels[(segment*m.tracks+i)*m.q:][:m.q]
	var p powerSums
	for k := range p {
		p[k] = r.tracks[i].weigh(counts, k+1) / float64(r.tracks[i].components)
	}
	return p
}
