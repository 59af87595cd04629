package kinetic

import (
	"fmt"
	"slices"
)

// tally keeps the sums of families and lines while a trajectory runs: of
// eigenvalues (-1)^s for q = 2, else the number of terms at each level. Changes
// of the families' sums are added in packed words.
type tally struct {
	g        *Generator
	sums     []int64 // by family (and level)
	packed   []int64 // changes of the sums since they were last unpacked
	since    int     // jumps since then
	lines    [][]uint8
	lineSums []int64
}

// fields is how many sums are packed in a word, and unpackEvery how many jumps
// may pass before a field could overflow: a jump changes a sum by at most
// 2*MaxBits.
const (
	fields      = 4
	unpackEvery = 1<<15/(2*MaxBits) - 1
)

func newTally[T tag](g *Generator, tags []T, lines [][]uint8, words uint32) tally {
	return tally{
		g: g, sums: familySums(g, tags), packed: make([]int64, words),
		lines: lines, lineSums: g.lineSums(lines),
	}
}

// pack adds small numbers into words of 16-bit fields; sums of such words are
// the words of the sums.
func pack(delta []int8) []int64 {
	words := make([]int64, (len(delta)+fields-1)/fields)
	for f, d := range delta {
		words[f/fields] += int64(d) << (16 * (f % fields))
	}
	return words
}

// unpack moves the packed changes to the sums.
func (e *tally) unpack() {
	for w, word := range e.packed {
		for f := w * fields; f < min((w+1)*fields, len(e.sums)); f++ {
			d := int64(int16(word))
			e.sums[f] += d
			word = (word - d) >> 16
		}
		e.packed[w] = 0
	}
	e.since = 0
}

// hitLines changes the lines that a move meets, and their sums.
func (e *tally) hitLines(mv *hotMove, row, col uint32) {
	for i := mv.firstHit; i < mv.lastHit; i++ {
		hit := &e.g.Hits[i]
		at := hit.Col[col] + hit.Row[row]
		line := e.lines[hit.Line]
		if int(at) >= len(line) {
			continue
		}
		if e.g.Levels == 2 {
			line[at] ^= hit.Change
			e.lineSums[hit.Line] += 2 - 4*int64(line[at])
			continue
		}
		counts := e.lineSums[hit.Line*e.g.Levels:]
		counts[line[at]]--
		line[at] = (line[at] + hit.Change) % uint8(e.g.Levels)
		counts[line[at]]++
	}
}

// SumWidth is how many sums Engine.Sums gives for each family and line: 1 for
// q = 2, the sum of eigenvalues; else q, the number of terms at each level.
func (g *Generator) SumWidth() int {
	if g.Levels == 2 {
		return 1
	}
	return g.Levels
}

// familySums adds up every family over the lattice.
func familySums[T tag](g *Generator, tags []T) []int64 {
	var sums []int64
	var levels []uint8
	for f := range g.Families {
		if n, ok := countSlot(g, f, tags); ok {
			sums = append(sums, int64(g.Cells())-2*n)
			continue
		}
		if levels == nil {
			levels = make([]uint8, g.Cells())
		}
		readTerms(g, f, tags, levels)
		sums = g.appendSum(sums, levels)
	}
	return sums
}

// countSlot counts the unsatisfied terms of a family in place, where one slot
// shows them all.
func countSlot[T tag](g *Generator, f int, tags []T) (n int64, ok bool) {
	fam := &g.Families[f]
	if g.Levels != 2 || len(fam.Slots) == 0 || fam.Terms != g.Cells() || g.everywhere>>fam.Slots[0].Slot&1 == 0 {
		return 0, false
	}
	ref := fam.Slots[0]
	for a := ref.Seat; a < len(tags); a += len(g.Seats) {
		n += int64(tags[a] >> ref.Slot & 1)
	}
	return n, true
}

func (g *Generator) lineSums(lines [][]uint8) []int64 {
	var sums []int64
	for l, levels := range lines {
		existing := levels
		if g.Lines[l].Exists != nil {
			existing = nil
			for p, s := range levels {
				if g.Lines[l].Exists[p] {
					existing = append(existing, s)
				}
			}
		}
		sums = g.appendSum(sums, existing)
	}
	return sums
}

// appendSum appends the sum of (-1)^s, or the counts by level, of the levels
// that are not Absent.
func (g *Generator) appendSum(sums []int64, levels []uint8) []int64 {
	var count [256]int64
	for _, s := range levels {
		count[s]++
	}
	if g.Levels == 2 {
		return append(sums, count[0]-count[1])
	}
	return append(sums, count[:g.Levels]...)
}

// appendSums appends the sums of families, then of lines.
func (e *tally) appendSums(dst []int64) []int64 {
	e.unpack()
	return append(append(dst, e.sums...), e.lineSums...)
}

// energy is the energy of families whose couplings do not vary.
func (e *tally) energy() float64 {
	e.unpack()
	sum := 0.0
	for f, fam := range e.g.Families {
		if fam.Energy == nil {
			continue
		}
		if e.g.Levels == 2 {
			sum += fam.energyOf(e.sums[f])
			continue
		}
		for s, energy := range fam.Energy {
			sum += energy * float64(e.sums[f*e.g.Levels+s])
		}
	}
	return sum
}

// energyOf returns the energy of a family (q = 2) whose eigenvalues have the
// given sum.
func (f *Family) energyOf(sum int64) float64 {
	if f.Energy[1] == -f.Energy[0] {
		return f.Energy[0] * float64(sum)
	}
	down := (int64(f.Terms) - sum) / 2
	return f.Energy[0]*float64(int64(f.Terms)-down) + f.Energy[1]*float64(down)
}

// readLine writes the levels of a line by position.
func (e *tally) readLine(l int, dst []uint8) {
	copy(dst, e.lines[l])
	for p, ok := range e.g.Lines[l].Exists {
		if !ok {
			dst[p] = Absent
		}
	}
}

// auditTally checks the sums against the levels.
func auditTally[T tag](e *tally, tags []T) error {
	e.unpack()
	if want := familySums(e.g, tags); !slices.Equal(want, e.sums) {
		return fmt.Errorf("the sums of the families are %v, the levels add up to %v", e.sums, want)
	}
	if want := e.g.lineSums(e.lines); !slices.Equal(want, e.lineSums) {
		return fmt.Errorf("the sums of the lines are %v, the levels add up to %v", e.lineSums, want)
	}
	return nil
}
