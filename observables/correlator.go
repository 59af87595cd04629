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

	history []float64 // place, lane, channel
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
	width := c.lanes * c.channels
	for _, place := range c.tl.stores {
		at := c.history[int(place)*width:][:width]
		for i, v := range values {
			at[i] = v - c.shift[i%c.channels]
		}
	}
	for _, v := range c.tl.visits {
		first := c.history[int(v.first)*width:][:width]
		again := c.history[int(v.again)*width:][:width]
		sums := c.sums[(int(v.segment)*len(c.tl.lags)+int(v.lag))*len(c.pairs):][:len(c.pairs)]
		for ; len(first) > 0; first, again = first[c.channels:], again[c.channels:] {
			for p, pair := range c.pairs {
				s := &sums[p]
				i, j := pair[0], pair[1]
				if i == j {
					s.f += first[i]
					s.g += again[i]
					s.fg += first[i] * again[i]
					continue
				}
				s.f += first[i] + again[i]
				s.g += first[j] + again[j]
				s.fg += first[i]*again[j] + first[j]*again[i]
			}
		}
	}
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
