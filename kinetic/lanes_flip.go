package kinetic

import "slices"

// laneKernel is the loop that makes attempts. All give the same trajectories;
// the special ones hold a move's terms in registers.
type laneKernel uint8

const (
	kernelAny     laneKernel = iota
	kernelFlips4             // layout by flips, terms of two sites, one group of at most 4
	kernelFlips8             // the same, at most 8
	kernelLevels4            // layout by levels, one group of at most 4
	kernelLevels8            // the same, at most 8
)

// fastMove is a move for the special kernels. Terms that it lacks read a word
// whose value they ignore.
type fastMove struct {
	own  int32     // word that the move changes, by flips
	at   [8]int32  // by term: its word, or the word of its other site
	mask [8]uint64 // by levels: 0 for a term that the move lacks
	sign [8]uint64
	leaf [9]uint8 // by number of terms that cost energy

	// By flips, a term on the move's site alone may make a second group: a field.
	field     bool
	fieldSign uint64
	fieldLeaf [9]uint8 // leaf where that term costs energy
}

// chooseKernel finds the first special kernel that runs every move.
func (p *lanePlan) chooseKernel() {
	kernels := [2]laneKernel{kernelLevels4, kernelLevels8}
	if p.layout.flips {
		kernels = [2]laneKernel{kernelFlips4, kernelFlips8}
	}
	for i, k := range kernels {
		fits := true
		for z := range p.zoned {
			if p.clockOf(z%len(p.moves)) > 0 {
				fits = fits && p.setFast(&p.zoned[z], 4*(i+1))
			}
		}
		if fits {
			p.kernel = k
			return
		}
	}
	p.kernel = kernelAny
}

// setFast lays out a move for the kernel of at most n terms, and reports whether
// it fits.
func (p *lanePlan) setFast(mv *zonedMove, n int) bool {
	f := &mv.fast
	*f = fastMove{}
	if p.layout.flips {
		if mv.changes.last-mv.changes.first != 1 {
			return false
		}
		f.own = p.words[mv.changes.first]
	}
	terms, ok := p.setField(mv)
	if !ok || len(terms) > n {
		return false
	}
	skip := n - len(terms)
	for i := range skip {
		switch {
		case p.layout.flips:
			f.at[i] = f.own
		case len(terms) > 0:
			// Written back unchanged before the true term is.
			f.at[i] = p.words[terms[0].first]
		}
	}
	for i, t := range terms {
		words := p.wordsOf(t.wordList)
		at := skip + i
		f.sign[at] = t.sign
		switch {
		case !p.layout.flips && len(words) == 1:
			f.at[at] = words[0]
			f.mask[at] = ^uint64(0)
		case p.layout.flips && len(words) == 2 && words[0] == f.own:
			f.at[at] = words[1]
		case p.layout.flips && len(words) == 2 && words[1] == f.own:
			f.at[at] = words[0]
		default:
			return false
		}
	}
	return true
}

// setField sets the leaves and the field of a fast move, and returns its other
// terms; ok is false if these make more than one group.
func (p *lanePlan) setField(mv *zonedMove) (terms []laneTerm, ok bool) {
	f := &mv.fast
	terms = p.terms[mv.firstTerm:mv.lastTerm]
	leaves := p.leaves[mv.leaf : mv.leaf+mv.combos]
	if len(mv.groups) <= 1 {
		copy(f.leaf[:], leaves)
		return terms, len(terms) < len(f.leaf)
	}
	if len(mv.groups) > 2 || !p.layout.flips {
		return nil, false
	}
	// Leaves count the last group fastest.
	for g, at := range []int{0, len(terms) - 1} {
		words := p.wordsOf(terms[at].wordList)
		if mv.groups[g] != 1 || len(words) != 1 || words[0] != f.own || len(terms) > len(f.leaf) {
			continue
		}
		f.field, f.fieldSign = true, terms[at].sign
		stride, field := 1, len(terms)
		if g == 1 {
			stride, field = 2, 1
		}
		for k := range len(terms) {
			f.leaf[k], f.fieldLeaf[k] = leaves[k*stride], leaves[k*stride+field]
		}
		return slices.Delete(slices.Clone(terms), at, at+1), true
	}
	return nil, false
}

// moving estimates the work of reading and writing words in a unit of time.
func (p *lanePlan) moving() float64 {
	worst := make([]float64, len(p.moves))
	for z := range p.zoned {
		mv := &p.zoned[z]
		cost := 5 * float64(mv.changes.last-mv.changes.first)
		for _, t := range p.terms[mv.firstTerm:mv.lastTerm] {
			words := float64(t.last - t.first)
			if p.kernel == kernelFlips4 || p.kernel == kernelFlips8 {
				words-- // the move's own word is read once for all
			}
			cost += 6 + 4*words
		}
		m := z % len(p.moves)
		worst[m] = max(worst[m], p.clockOf(m)*cost)
	}
	sum := 0.0
	for _, w := range worst {
		sum += w
	}
	return sum
}

// clockOf is the rate of attempts at a move of a cell.
func (p *lanePlan) clockOf(move int) float64 { return p.sets[p.moves[move].set].clock }

// run makes attempts from..to of the present ones.
func (e *lanes) run(from, to int) {
	if from == to {
		return
	}
	e.fresh = false
	if len(e.words) > touchWords {
		e.touch(from, to)
	}
	switch e.plan.kernel {
	case kernelFlips4:
		e.runFlips4(from, to)
	case kernelLevels4:
		e.runLevels4(from, to)
	case kernelFlips8:
		e.runFlips8(from, to)
	case kernelLevels8:
		e.runLevels8(from, to)
	default:
		e.runAny(from, to)
	}
}

// touchWords is the number of words that the second level of a cache holds.
const touchWords = 1 << 17

// touch reads the words that attempts will, so that they arrive from memory
// together.
func (e *lanes) touch(from, to int) {
	words, p := e.words, e.plan
	var sum uint64
	for i := from; i < to; i++ {
		a := e.next.list[i]
		mv := &p.zoned[a.move]
		for _, w := range p.words[mv.near.first:mv.near.last] {
			sum ^= words[uint32(int32(a.base)+w)]
		}
	}
	e.sink ^= sum
}

// hitLines changes the lines that an accepted attempt meets.
func (e *lanes) hitLines(i int, accepted uint64) {
	n := e.plan.hits
	for _, w := range e.next.hits[i*n : i*n+n] {
		e.words[w] ^= accepted
	}
}
