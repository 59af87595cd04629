package observables

import (
	"sojourn/kinetic"
)

// track is a vector of single levels: of the chosen terms of a Local observable,
// or of the positions of a line.
type track struct {
	chosen     []chosenTerm // Local
	spots      []spot       // Local, two levels: where they are read
	line       int          // Operator; -1 for Local
	value      []complex128 // by level
	components int          // terms or positions
	words      int          // two levels: of its bit vector
}

func newLocalTrack(g *kinetic.Generator, chosen []chosenTerm) track {
	t := track{line: -1, chosen: chosen, spots: make([]spot, len(chosen)), components: len(chosen)}
	t.value = roots(g.Levels)
	for i := range chosen {
		t.spots[i] = chosen[i].spot
		t.value = valuesOf(g, chosen[i].loc.family) // the same for all
	}
	t.words = (t.components + 63) / 64
	return t
}

func newLineTrack(g *kinetic.Generator, line int) track {
	t := track{line: line, value: roots(g.Levels), components: positions(g.Lines[line])}
	t.words = (t.components + 63) / 64
	return t
}

// weigh returns the sum of a power of the values over numbers of terms by level,
// real and imaginary parts taken together.
func (t *track) weigh(counts []int64, power int) float64 {
	sum := 0.0
	for s, n := range counts {
		re, im := float64(n), float64(n)
		for range power {
			re *= real(t.value[s])
			im *= imag(t.value[s])
		}
		sum += re + im
	}
	return sum
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

// takeTrack reads a track in one lane, and counts its levels.
func (r *reading) takeTrack(i, lane int) {
	t := &r.tracks[i]
	counts := r.counts[i][lane*r.g.Levels:][:r.g.Levels]
	if r.g.Levels > 2 {
		levels := r.levels[i][lane*t.components:][:t.components]
		r.gatherLevels(levels, t, lane)
		clear(counts)
		for _, s := range levels {
			counts[s]++
		}
		return
	}
	vector := r.bits[i][lane*t.words:][:t.words]
	switch {
	case r.words != nil: // read for all lanes already
	case t.line >= 0:
		r.gatherLine(vector, t.line, lane)
	default:
		gatherBits(vector, t.spots, r.patterns)
	}
	ones := count(vector)
	counts[0], counts[1] = int64(t.components)-ones, ones
}

// gatherBits writes the levels of terms into dst, 64 to a word.
func gatherBits(dst []uint64, terms []spot, patterns []uint16) {
	for w := range dst {
		n := min(64, len(terms))
		var word uint64
		for i, s := range terms[:n] {
			word |= s.level(patterns) << (i & 63)
		}
		dst[w] = word
		terms = terms[n:]
	}
}

// gatherLine writes the levels of a line's existing positions into dst, 64 to a
// word.
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

// gatherLevels writes the levels of a track's components into dst.
func (r *reading) gatherLevels(dst []uint8, t *track, lane int) {
	if t.line < 0 {
		for i, c := range t.chosen {
			dst[i] = r.cells[c.loc.family][c.cell]
		}
		return
	}
	levels := r.scratch[:r.g.Lines[t.line].Positions]
	r.e.Terms(len(r.g.Families)+t.line, lane, levels)
	i := 0
	for _, s := range levels {
		if s != kinetic.Absent {
			dst[i] = s
			i++
		}
	}
}
