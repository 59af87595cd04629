package kinetic

import (
	"fmt"
	"math"

	"sojourn/kinetic/lattice"
)

// lanesPerWord is the number of lanes of a word.
const lanesPerWord = 64

// laneLayout says what the words of a lane engine are. The words of a cell stand
// together, cell by cell; those of the lines follow, and a spare one that
// nobody reads.
//
// In the layout by levels there is a word for each term that a move changes: its
// level. In the layout by flips there is a word for each kind of flip on a site:
// whether an odd number of moves with X (or with Z) have acted on it; the level
// of a term is the exclusive or of those on its sites.
type laneLayout struct {
	g      *Generator
	flips  bool
	planes int // words of a cell

	level []int            // by family: its word in the cell, -1 if no move changes it
	words [][1]int32       // the same, as a list of one
	shift []lattice.Offset // by family: from the cell of the word to the term's

	flipX, flipZ []int // by site of the cell: its word, -1 if it has none
	operators    []FamilySpec

	lines []uint32 // first word of each line
	spare uint32
	size  int
}

// newLaneLayout lays out words by levels or by flips. ok is false if the layout
// by flips cannot hold the reference state.
func newLaneLayout(g *Generator, flips bool) (l *laneLayout, ok bool, err error) {
	l = &laneLayout{g: g, flips: flips}
	if flips {
		for _, levels := range g.Reference {
			if levels != nil {
				return nil, false, nil
			}
		}
		l.layFlips()
	} else {
		l.layLevels()
	}
	l.planes = max(l.planes, 1)
	l.size = g.Cells() * l.planes
	for _, line := range g.Lines {
		l.lines = append(l.lines, uint32(l.size))
		l.size += line.Positions
	}
	l.spare = uint32(l.size)
	l.size++
	if l.size > math.MaxInt32 {
		return nil, false, &LaneLimit{"words of lanes", l.size, math.MaxInt32}
	}
	return l, true, nil
}

func (l *laneLayout) layLevels() {
	g := l.g
	for _, f := range g.Families {
		word, shift := -1, lattice.Offset{}
		if len(f.Slots) > 0 {
			word = l.planes
			l.planes++
			// The word stands in the cell of the first seat that shows the term,
			// so that every seat finds it within the reach of its zone; at open
			// edges that cell may not exist, but there the reach is longer.
			for a := range shift {
				if !g.Lattice.Open[a] {
					shift[a] = -f.Slots[0].Offset[a]
				}
			}
		}
		l.level = append(l.level, word)
		l.words = append(l.words, [1]int32{int32(word)})
		l.shift = append(l.shift, shift)
	}
}

func (l *laneLayout) layFlips() {
	g := l.g
	l.operators = g.familyOperators()
	for site := range g.Seats {
		var x, z bool
		for _, m := range g.Seats[site].Moves {
			x = x || m.X&1 == 1
			z = z || m.Z&1 == 1
		}
		var turnedByX, turnedByZ bool
		for _, f := range l.operators {
			for _, factor := range f.Operator.Factors() {
				if factor.Site == site {
					turnedByX = turnedByX || factor.Z&1 == 1
					turnedByZ = turnedByZ || factor.X&1 == 1
				}
			}
		}
		word := func(has bool) int {
			if !has {
				return -1
			}
			l.planes++
			return l.planes - 1
		}
		l.flipX = append(l.flipX, word(x && turnedByX))
		l.flipZ = append(l.flipZ, word(z && turnedByZ))
	}
}

// familyOperators returns operator and cut of every family.
func (g *Generator) familyOperators() []FamilySpec {
	out := append([]FamilySpec(nil), g.Spec.Families...)
	for _, t := range g.Spec.Tracked {
		if !t.Operator.Extended() {
			out = append(out, FamilySpec{Name: t.Name, Operator: t.Operator, Cut: Drop})
		}
	}
	if len(out) != len(g.Families) {
		panic(fmt.Sprintf("kinetic: %d operators for %d families", len(out), len(g.Families)))
	}
	return out
}

// term returns the words whose exclusive or is the level of the term of family f
// at a cell, which some move changes, as differences from the first word of
// cell home.
func (l *laneLayout) term(f int, t lattice.Offset, home int) []int32 {
	g := l.g
	base := home * l.planes
	if !l.flips {
		at, ok := g.Lattice.Wrap(t, l.shift[f].Neg())
		if !ok {
			panic("kinetic: a term's word beyond an open edge")
		}
		return []int32{int32(g.Lattice.Index(at)*l.planes + l.level[f] - base)}
	}
	op := l.operators[f]
	factors, _ := g.Spec.Term(op.Operator, op.Cut, g.Lattice.Index(t))
	var out []int32
	for _, s := range factors {
		first := s.Site/g.Spec.Sites*l.planes - base
		site := s.Site % g.Spec.Sites
		if w := l.flipX[site]; w >= 0 && s.Z&1 == 1 {
			out = append(out, int32(first+w))
		}
		if w := l.flipZ[site]; w >= 0 && s.X&1 == 1 {
			out = append(out, int32(first+w))
		}
	}
	return out
}

// moved returns the words that a move of the seat in cell home changes, given
// the slots it changes: first those of energy terms.
func (l *laneLayout) moved(seat, move int, changed []int, terms [][]int32) (words []int32, energy int) {
	g := l.g
	if l.flips {
		m := g.Seats[seat].Moves[move]
		if w := l.flipX[seat]; w >= 0 && m.X&1 == 1 {
			words = append(words, int32(w))
		}
		if w := l.flipZ[seat]; w >= 0 && m.Z&1 == 1 {
			words = append(words, int32(w))
		}
		return words, len(words)
	}
	for _, withEnergy := range []bool{true, false} {
		for _, b := range changed {
			if (g.Families[g.Seats[seat].Slots[b].Family].Energy != nil) == withEnergy {
				words = append(words, terms[b]...)
			}
		}
		if withEnergy {
			energy = len(words)
		}
	}
	return words, energy
}
