package observables

// moments accumulates powers of each channel, and the bits set in each track,
// by segment. Lanes are pooled.
//
// Totals can be large beside their fluctuations (an energy of 1e7 with a
// relative variance of 1e-8). Powers are therefore taken of the difference
// from the first sample and expanded once (see powerSums.unshift). What is left
// is the rounding of the sums about zero in a row: a variance formed from
// Sum2/Count - (Sum1/Count)^2 is wrong by about 2^-53 of the mean squared, and
// a fourth central moment by about 2^-50 of the fourth power of the mean.
type moments struct {
	channels []powerSums // segment, channel
	ones     []int64     // segment, track
	count    [MomentSegments]int64
	shift    []float64
	started  bool
}

func newMoments(channels, tracks int) *moments {
	return &moments{
		channels: make([]powerSums, MomentSegments*channels),
		ones:     make([]int64, MomentSegments*tracks),
		shift:    make([]float64, channels),
	}
}

func (m *moments) add(segment, lanes int, r *reading) {
	channels, tracks := len(m.shift), len(r.bits)
	if !m.started {
		copy(m.shift, r.values)
		m.started = true
	}
	m.count[segment] += int64(lanes)
	for i, v := range r.values {
		c := i % channels
		m.channels[segment*channels+c].add(v - m.shift[c])
	}
	for i := range tracks {
		for _, ones := range r.ones[i] {
			m.ones[segment*tracks+i] += ones
		}
	}
}

// channel returns the sums of powers of a channel in a segment.
func (m *moments) channel(segment, c int) powerSums {
	return m.channels[segment*len(m.shift)+c].unshift(m.count[segment], m.shift[c])
}

// track returns the sums of powers of a track's eigenvalues in a segment, as
// means over its components: odd powers of 1 - 2 bit are itself, even ones 1.
func (m *moments) track(segment, i, components int) powerSums {
	tracks := len(m.ones) / MomentSegments
	n := m.count[segment]
	odd := float64(n*int64(components)-2*m.ones[segment*tracks+i]) / float64(components)
	return powerSums{odd, float64(n), odd, float64(n)}
}
