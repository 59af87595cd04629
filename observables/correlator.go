package observables

import "math/bits"

// correlator accumulates the pairs of samples of all channels and bit tracks of
// a reading. A channel is a series of numbers; a track is a series of bit
// vectors, whose products are counts of agreeing bits.
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

// trackHistory is the history of one bit track.
type trackHistory struct {
	words   int
	history []uint64 // place, lane, word
	ones    []int64  // place, lane: number of bits set
	sums    []bitSums
}

// bitSums counts over pairs the bits set in the first and the second vector,
// and those in which they differ.
type bitSums struct{ first, again, differ int64 }

func newCorrelator(tl *timeline, lanes, channels int, pairs [][2]int, words []int) *correlator {
	c := &correlator{
		tl: tl, lanes: lanes, channels: channels, pairs: pairs,
		history: make([]float64, tl.places()*lanes*channels),
		sums:    make([]pairSums, PairSegments*len(tl.lags)*len(pairs)),
		shift:   make([]float64, channels),
	}
	for _, w := range words {
		c.tracks = append(c.tracks, trackHistory{
			words:   w,
			history: make([]uint64, tl.places()*lanes*w),
			ones:    make([]int64, tl.places()*lanes),
			sums:    make([]bitSums, PairSegments*len(tl.lags)),
		})
	}
	return c
}

// add takes in the sample that the timeline has just noted.
func (c *correlator) add(r *reading) {
	if c.channels > 0 {
		c.addChannels(r.values)
	}
	for i := range c.tracks {
		c.tracks[i].add(c.tl, c.lanes, r.bits[i], r.ones[i])
	}
}

func (c *correlator) addChannels(values []float64) {
	if c.tl.t == 1 {
		copy(c.shift, values[:c.channels])
	}
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

func (t *trackHistory) add(tl *timeline, lanes int, vector []uint64, ones []int64) {
	width := lanes * t.words
	for _, place := range tl.stores {
		copy(t.history[int(place)*width:], vector[:width])
		copy(t.ones[int(place)*lanes:], ones[:lanes])
	}
	for _, v := range tl.visits {
		s := &t.sums[int(v.segment)*len(tl.lags)+int(v.lag)]
		for lane := range lanes {
			s.first += t.ones[int(v.first)*lanes+lane]
			s.again += t.ones[int(v.again)*lanes+lane]
		}
		if v.first != v.again {
			s.differ += differ(t.history[int(v.first)*width:][:width], t.history[int(v.again)*width:][:width])
		}
	}
}

// differ counts the bits in which two vectors of equal length differ.
func differ(a, b []uint64) int64 {
	n := 0
	b = b[:len(a)]
	for len(a) >= 4 && len(b) >= 4 {
		n += bits.OnesCount64(a[0]^b[0]) + bits.OnesCount64(a[1]^b[1]) +
			bits.OnesCount64(a[2]^b[2]) + bits.OnesCount64(a[3]^b[3])
		a, b = a[4:], b[4:]
	}
	for i, w := range a {
		n += bits.OnesCount64(w ^ b[i])
	}
	return int64(n)
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
// its components: eigenvalues 1 - 2 bit.
func (c *correlator) trackPair(segment, lag, i, components int) (n int64, s pairSums) {
	n = c.tl.origins[segment][lag] * int64(c.lanes)
	t := c.tracks[i].sums[segment*len(c.tl.lags)+lag]
	all := n * int64(components)
	mean := func(ones int64) float64 { return float64(all-2*ones) / float64(components) }
	return n, pairSums{f: mean(t.first), g: mean(t.again), fg: mean(t.differ)}
}
