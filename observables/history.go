package observables

import "math/bits"

// bitHistory is the history of a track of terms with two levels. Its sums are
// counts: products are agreeing less differing bits, 64 at a time.
type bitHistory struct {
	track, lanes int
	components   int64
	words        int
	history      []uint64 // place, lane, word
	ones         []int64  // place, lane: bits set
	sums         []bitSums
}

// bitSums counts over pairs: how many, the bits set in the first and in the second
// vector, and those in which they differ.
type bitSums struct{ pairs, first, again, differ int64 }

func newBitHistory(tl *timeline, r *reading, i int) *bitHistory {
	t := &r.tracks[i]
	return &bitHistory{
		track: i, lanes: r.lanes, components: int64(t.components), words: t.words,
		history: make([]uint64, tl.places()*r.lanes*t.words),
		ones:    make([]int64, tl.places()*r.lanes),
		sums:    make([]bitSums, PairSegments*len(tl.lags)),
	}
}

func (t *bitHistory) add(tl *timeline, r *reading) {
	width := t.lanes * t.words
	for _, place := range tl.stores {
		copy(t.history[int(place)*width:], r.bits[t.track][:width])
		for lane := range t.lanes {
			t.ones[int(place)*t.lanes+lane] = r.counts[t.track][2*lane+1]
		}
	}
	for _, v := range tl.visits {
		s := &t.sums[int(v.segment)*len(tl.lags)+int(v.lag)]
		s.pairs += int64(t.lanes)
		for lane := range t.lanes {
			s.first += t.ones[int(v.first)*t.lanes+lane]
			s.again += t.ones[int(v.again)*t.lanes+lane]
		}
		if v.first != v.again {
			s.differ += differ(t.history[int(v.first)*width:][:width], t.history[int(v.again)*width:][:width])
		}
	}
}

func (t *bitHistory) pair(place int) pairSums {
	s := t.sums[place]
	all := s.pairs * t.components
	return pairSums{float64(all - 2*s.first), float64(all - 2*s.again), float64(all - 2*s.differ)}
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

// levelHistory is the history of a track of terms with more than two levels. It
// counts pairs of levels, so its sums are exact too until they are weighed with
// values.
type levelHistory struct {
	track, lanes int
	q            int
	value        []complex128
	components   int
	history      []uint8 // place, lane, component
	sums         []int64 // segment and lag, first level, second level
}

func newLevelHistory(tl *timeline, r *reading, i int) *levelHistory {
	n, q := r.tracks[i].components, r.g.Levels
	return &levelHistory{
		track: i, lanes: r.lanes, q: q, value: r.tracks[i].value, components: n,
		history: make([]uint8, tl.places()*r.lanes*n),
		sums:    make([]int64, PairSegments*len(tl.lags)*q*q),
	}
}

func (t *levelHistory) add(tl *timeline, r *reading) {
	width := t.lanes * t.components
	for _, place := range tl.stores {
		copy(t.history[int(place)*width:], r.levels[t.track][:width])
	}
	for _, v := range tl.visits {
		at := (int(v.segment)*len(tl.lags) + int(v.lag)) * t.q * t.q
		count := t.sums[at : at+t.q*t.q]
		again := t.history[int(v.again)*width:][:width]
		for i, s := range t.history[int(v.first)*width:][:width] {
			count[int(s)*t.q+int(again[i])]++
		}
	}
}

func (t *levelHistory) pair(place int) (s pairSums) {
	for i, n := range t.sums[place*t.q*t.q:][:t.q*t.q] {
		first, again := t.value[i/t.q], t.value[i%t.q]
		s.f += float64(n) * together(first)
		s.g += float64(n) * together(again)
		s.fg += float64(n) * overlap(first, again)
	}
	return s
}
