package observables

import "math/bits"

// The history of a series is kept in levels. Level 0 holds the last samples and
// serves the lags up to depth; level j >= 1 holds every 2^j-th sample and
// serves the lags in (depth*2^(j-1), depth*2^j], which are multiples of 2^j.
// So every product is one of single samples at a true lag; the time origins
// are 2^j apart, between lag/32 and lag/16, which loses next to nothing while
// the lag is not many correlation times; and a history takes depth+1 samples
// for each octave of the lag.
const depth = 32

// level returns the level that serves a lag.
func level(lag int64) int {
	if lag <= depth {
		return 0
	}
	return bits.Len64(uint64(lag-1) / depth)
}

// visit is a pair of samples to be multiplied: the places in the history of its
// first and second time.
type visit struct {
	lag          int32 // index into the lags
	segment      int32 // of the first time
	first, again int32
}

// timeline is the bookkeeping of a series of samples: where each is stored, and
// which pairs of stored samples it completes. Its history has places() places.
type timeline struct {
	samples int64
	lags    []int64
	levels  []timelineLevel
	t       int64   // samples seen
	stores  []int32 // places that the latest sample goes to
	visits  []visit // pairs that it completes
	origins [PairSegments][]int64
}

// timelineLevel serves lags[first:last]; slot is the place of its latest sample.
type timelineLevel struct {
	first, last int
	slot        int32
}

func newTimeline(samples int64) *timeline {
	tl := &timeline{samples: samples, lags: Lags(samples)}
	for i, lag := range tl.lags {
		j := level(lag)
		if j == len(tl.levels) {
			tl.levels = append(tl.levels, timelineLevel{first: i})
		}
		tl.levels[j].last = i + 1
	}
	for s := range tl.origins {
		tl.origins[s] = make([]int64, len(tl.lags))
	}
	return tl
}

func (tl *timeline) places() int { return len(tl.levels) * (depth + 1) }

// next takes note of one more sample and fills in stores and visits. Samples
// beyond the announced number are a caller's mistake.
func (tl *timeline) next() {
	if tl.t == tl.samples {
		panic("observables: more samples than announced")
	}
	tl.stores, tl.visits = tl.stores[:0], tl.visits[:0]
	for j := range tl.levels {
		if tl.t&(1<<j-1) != 0 {
			break
		}
		l := &tl.levels[j]
		base := int32(j * (depth + 1))
		if l.slot++; l.slot > depth {
			l.slot = 0
		}
		tl.stores = append(tl.stores, base+l.slot)
		for i := l.first; i < l.last; i++ {
			first := tl.t - tl.lags[i]
			if first < 0 {
				break
			}
			slot := l.slot - int32(tl.lags[i]>>j)
			if slot < 0 {
				slot += depth + 1
			}
			s := tl.segment(first, PairSegments)
			tl.visits = append(tl.visits, visit{int32(i), int32(s), base + slot, base + l.slot})
			tl.origins[s][i]++
		}
	}
	tl.t++
}

// segment returns which of the given number of equal segments of the span
// holds sample t.
func (tl *timeline) segment(t int64, segments int64) int {
	hi, lo := bits.Mul64(uint64(t), uint64(segments))
	q, _ := bits.Div64(hi, lo, uint64(tl.samples))
	return int(q)
}
