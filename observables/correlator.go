package observables

// correlator accumulates the pairs of samples of all channels and tracks of a
// reading. A channel is a series of numbers; a track is a series of vectors,
// whose products are summed over components.
//
// Each lane has a history of its own; sums are pooled over lanes.
type correlator struct {
	tl       *timeline
	lanes    int
	channels int
	pairs    [][2]int // of channels

	history []float64 // place, channel, lane
	totals  []float64 // place, channel: over lanes
	sums    []pairSums
	shift   []float64 // by channel

	tracks []trackHistory
}

// trackHistory accumulates the pairs of one track.
type trackHistory interface {
	add(tl *timeline, r *reading)
	// pair returns the sums over all pairs, and over components.
	pair(place int) pairSums
}

func newCorrelator(tl *timeline, r *reading, pairs [][2]int) *correlator {
	c := &correlator{
		tl: tl, lanes: r.lanes, channels: r.channels, pairs: pairs,
		history: make([]float64, tl.places()*r.lanes*r.channels),
		totals:  make([]float64, tl.places()*r.channels),
		sums:    make([]pairSums, PairSegments*len(tl.lags)*len(pairs)),
		shift:   make([]float64, r.channels),
	}
	for i := range r.tracks {
		if r.g.Levels == 2 {
			c.tracks = append(c.tracks, newBitHistory(tl, r, i))
		} else {
			c.tracks = append(c.tracks, newLevelHistory(tl, r, i))
		}
	}
	return c
}

// add takes in the sample that the timeline has just noted.
func (c *correlator) add(r *reading) {
	if c.channels > 0 {
		if c.tl.t == 1 {
			copy(c.shift, r.origins())
		}
		c.addChannels(r.values)
	}
	for _, t := range c.tracks {
		t.add(c.tl, r)
	}
}

func (c *correlator) addChannels(values []float64) {
	for _, place := range c.tl.stores {
		for i := range c.channels {
			total := 0.0
			at := c.of(place, i)
			for lane := range at {
				d := values[lane*c.channels+i] - c.shift[i]
				at[lane] = d
				total += d
			}
			c.totals[int(place)*c.channels+i] = total
		}
	}
	for _, v := range c.tl.visits {
		first := c.totals[int(v.first)*c.channels:][:c.channels]
		again := c.totals[int(v.again)*c.channels:][:c.channels]
		sums := c.sums[(int(v.segment)*len(c.tl.lags)+int(v.lag))*len(c.pairs):][:len(c.pairs)]
		for p, pair := range c.pairs {
			s := &sums[p]
			i, j := pair[0], pair[1]
			s.f += first[i]
			s.g += again[j]
			s.fg += dot(c.of(v.first, i), c.of(v.again, j))
			if i != j {
				s.f += again[i]
				s.g += first[j]
				s.fg += dot(c.of(v.first, j), c.of(v.again, i))
			}
		}
	}
}

// of returns the values of a channel in all lanes at a place of the history.
func (c *correlator) of(place int32, channel int) []float64 {
	return c.history[(int(place)*c.channels+channel)*c.lanes:][:c.lanes]
}

// dot returns the scalar product of vectors of equal length, in four interleaved
// partial sums.
func dot(a, b []float64) float64 {
	var s0, s1, s2, s3 float64
	for len(a) >= 4 && len(b) >= 4 {
		s0 += a[0] * b[0]
		s1 += a[1] * b[1]
		s2 += a[2] * b[2]
		s3 += a[3] * b[3]
		a, b = a[4:], b[4:]
	}
	b = b[:len(a)]
	for i, x := range a {
		s0 += x * b[i]
	}
	return s0 + s1 + s2 + s3
}

// channelPair returns the sums over pairs of channel pair p, and how many pairs
// there are.
func (c *correlator) channelPair(segment, lag, p int) (n int64, s pairSums) {
	n = c.tl.origins[segment][lag] * int64(c.lanes)
	i, j := c.pairs[p][0], c.pairs[p][1]
	if i != j {
		n *= 2
	}
	s = c.sums[(segment*len(c.tl.lags)+lag)*len(c.pairs)+p]
	return n, s.unshift(n, c.shift[i], c.shift[j])
}

// trackPair returns the sums over pairs of track i with itself, as means over
// its components.
func (c *correlator) trackPair(segment, lag, i, components int) (n int64, s pairSums) {
	n = c.tl.origins[segment][lag] * int64(c.lanes)
	s = c.tracks[i].pair(segment*len(c.tl.lags) + lag)
	k := float64(components)
	return n, pairSums{s.f / k, s.g / k, s.fg / k}
}
