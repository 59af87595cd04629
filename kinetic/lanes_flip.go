package kinetic

import "math/bits"

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
	terms := p.terms[mv.firstTerm:mv.lastTerm]
	if len(mv.groups) > 1 || len(terms) > n {
		return false
	}
	f := &mv.fast
	*f = fastMove{}
	if p.layout.flips {
		if mv.changes.last-mv.changes.first != 1 {
			return false
		}
		f.own = p.words[mv.changes.first]
	} else if len(terms) == 0 && mv.changes.last == mv.changes.first {
		f.at = [8]int32{} // reads and writes back the first word of the cell
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
		words := p.words[t.first:t.last]
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
	copy(f.leaf[:], p.leaves[mv.leaf:mv.leaf+mv.combos])
	return true
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

// counts4 counts four words bit by bit.
func counts4(a, b, c, d uint64) (one, two, four uint64) {
	ab, cd := a^b, c^d
	p, q := a&b, c&d
	r := ab & cd
	return ab ^ cd, p ^ q ^ r, p & q
}

// pick4 returns the bits of the columns that each bit's count, 0 to 4, chooses.
func pick4(one, two, four uint64, columns []wordColumn, i int, leaf *[5]uint8) uint64 {
	l0, l1 := columns[leaf[0]][i], columns[leaf[1]][i]
	l2, l3 := columns[leaf[2]][i], columns[leaf[3]][i]
	l0 ^= one & (l0 ^ l1)
	l2 ^= one & (l2 ^ l3)
	l0 ^= two & (l0 ^ l2)
	return l0 ^ four&(l0^columns[leaf[4]][i])
}

func (e *lanes) runFlips4(from, to int) {
	words, zoned := e.words, e.plan.zoned
	columns := e.next.columns
	jumps := 0
	for i := from; i < to; i++ {
		a := e.next.list[i]
		mv := &zoned[a.move].fast
		base := int32(a.base)
		own := uint32(base + mv.own)
		v := words[own]
		one, two, four := counts4(
			words[uint32(base+mv.at[0])]^v^mv.sign[0], words[uint32(base+mv.at[1])]^v^mv.sign[1],
			words[uint32(base+mv.at[2])]^v^mv.sign[2], words[uint32(base+mv.at[3])]^v^mv.sign[3])
		accepted := pick4(one, two, four, columns, i, (*[5]uint8)(mv.leaf[:]))
		words[own] = v ^ accepted
		jumps += bits.OnesCount64(accepted)
		if e.plan.hits > 0 {
			e.hitLines(i, accepted)
		}
	}
	e.jumps += uint64(jumps)
}

// counts8 counts eight words bit by bit.
func counts8(w *[8]uint64) (one, two, four, eight uint64) {
	one, p := fullAdd(w[0], w[1], w[2])
	one, q := fullAdd(one, w[3], w[4])
	one, r := fullAdd(one, w[5], w[6])
	s := one & w[7]
	one ^= w[7]
	two, f := fullAdd(p, q, r)
	g := two & s
	two ^= s
	return one, two, f ^ g, f & g
}

// pick8 returns the bits of the columns that each bit's count, 0 to 8, chooses.
func pick8(one, two, four, eight uint64, columns []wordColumn, i int, leaf *[9]uint8) uint64 {
	l0, l1 := columns[leaf[0]][i], columns[leaf[1]][i]
	l2, l3 := columns[leaf[2]][i], columns[leaf[3]][i]
	l4, l5 := columns[leaf[4]][i], columns[leaf[5]][i]
	l6, l7 := columns[leaf[6]][i], columns[leaf[7]][i]
	l0 ^= one & (l0 ^ l1)
	l2 ^= one & (l2 ^ l3)
	l4 ^= one & (l4 ^ l5)
	l6 ^= one & (l6 ^ l7)
	l0 ^= two & (l0 ^ l2)
	l4 ^= two & (l4 ^ l6)
	l0 ^= four & (l0 ^ l4)
	return l0 ^ eight&(l0^columns[leaf[8]][i])
}

func (e *lanes) runFlips8(from, to int) {
	words, zoned := e.words, e.plan.zoned
	columns := e.next.columns
	jumps := 0
	for i := from; i < to; i++ {
		a := e.next.list[i]
		mv := &zoned[a.move].fast
		base := int32(a.base)
		own := uint32(base + mv.own)
		v := words[own]
		var w [8]uint64
		for k, at := range &mv.at {
			w[k] = words[uint32(base+at)] ^ v ^ mv.sign[k]
		}
		one, two, four, eight := counts8(&w)
		accepted := pick8(one, two, four, eight, columns, i, &mv.leaf)
		words[own] = v ^ accepted
		jumps += bits.OnesCount64(accepted)
		if e.plan.hits > 0 {
			e.hitLines(i, accepted)
		}
	}
	e.jumps += uint64(jumps)
}

func (e *lanes) runLevels4(from, to int) {
	words, zoned := e.words, e.plan.zoned
	columns := e.next.columns
	jumps := 0
	for i := from; i < to; i++ {
		a := e.next.list[i]
		z := &zoned[a.move]
		mv := &z.fast
		base := int32(a.base)
		p0, p1 := &words[uint32(base+mv.at[0])], &words[uint32(base+mv.at[1])]
		p2, p3 := &words[uint32(base+mv.at[2])], &words[uint32(base+mv.at[3])]
		w0, w1, w2, w3 := *p0, *p1, *p2, *p3
		one, two, four := counts4(
			w0&mv.mask[0]^mv.sign[0], w1&mv.mask[1]^mv.sign[1],
			w2&mv.mask[2]^mv.sign[2], w3&mv.mask[3]^mv.sign[3])
		accepted := pick4(one, two, four, columns, i, (*[5]uint8)(mv.leaf[:]))
		*p0 = w0 ^ accepted&mv.mask[0]
		*p1 = w1 ^ accepted&mv.mask[1]
		*p2 = w2 ^ accepted&mv.mask[2]
		*p3 = w3 ^ accepted&mv.mask[3]
		for _, w := range e.plan.words[z.tracked:z.changes.last] {
			words[uint32(base+w)] ^= accepted
		}
		jumps += bits.OnesCount64(accepted)
		if e.plan.hits > 0 {
			e.hitLines(i, accepted)
		}
	}
	e.jumps += uint64(jumps)
}

func (e *lanes) runLevels8(from, to int) {
	words, zoned := e.words, e.plan.zoned
	columns := e.next.columns
	jumps := 0
	for i := from; i < to; i++ {
		a := e.next.list[i]
		z := &zoned[a.move]
		mv := &z.fast
		base := int32(a.base)
		var v, w [8]uint64
		for k, at := range &mv.at {
			v[k] = words[uint32(base+at)]
			w[k] = v[k]&mv.mask[k] ^ mv.sign[k]
		}
		one, two, four, eight := counts8(&w)
		accepted := pick8(one, two, four, eight, columns, i, &mv.leaf)
		for k, at := range &mv.at {
			words[uint32(base+at)] = v[k] ^ accepted&mv.mask[k]
		}
		for _, w := range e.plan.words[z.tracked:z.changes.last] {
			words[uint32(base+w)] ^= accepted
		}
		jumps += bits.OnesCount64(accepted)
		if e.plan.hits > 0 {
			e.hitLines(i, accepted)
		}
	}
	e.jumps += uint64(jumps)
}

// runAny makes attempts of any move.
func (e *lanes) runAny(from, to int) {
	p, words := e.plan, e.words
	jumps := 0
	for i := from; i < to; i++ {
		a := e.next.list[i]
		mv := &p.zoned[a.move]
		base := int32(a.base)
		accepted := e.accepted(i, mv, base)
		for _, w := range p.words[mv.changes.first:mv.changes.last] {
			words[uint32(base+w)] ^= accepted
		}
		jumps += bits.OnesCount64(accepted)
		if p.hits > 0 {
			e.hitLines(i, accepted)
		}
	}
	e.jumps += uint64(jumps)
}

// accepted returns the lanes that accept attempt i.
func (e *lanes) accepted(i int, mv *zonedMove, base int32) uint64 {
	if mv.small == 0 {
		return e.acceptedAny(i, mv, base)
	}
	p := e.plan
	// Which terms cost energy: those of the first group, then of the second.
	var costs [2 * smallGroup]uint64
	terms := p.terms[mv.firstTerm:mv.lastTerm]
	at := 0
	for k := range terms {
		t := &terms[k]
		w := t.sign
		for _, d := range p.words[t.first:t.last] {
			w ^= e.words[uint32(base+d)]
		}
		if k == int(mv.groups[0]) {
			at = smallGroup
		}
		costs[at&7] = w
		at++
	}
	leaves := (*[25]uint8)(p.leaves[mv.small:])
	columns := e.next.columns
	one, two, four := counts4(costs[0], costs[1], costs[2], costs[3])
	v := pick4(one, two, four, columns, i, (*[5]uint8)(leaves[0:]))
	if len(mv.groups) == 1 {
		return v
	}
	b1, b2, b4 := counts4(costs[4], costs[5], costs[6], costs[7])
	v ^= (b1 | b2 | b4) & (v ^ pick4(one, two, four, columns, i, (*[5]uint8)(leaves[5:])))
	if n := mv.groups[1]; n > 1 {
		v ^= (b2 | b4) & (v ^ pick4(one, two, four, columns, i, (*[5]uint8)(leaves[10:])))
		if n > 2 {
			v ^= (b1&b2 | b4) & (v ^ pick4(one, two, four, columns, i, (*[5]uint8)(leaves[15:])))
			v ^= b4 & (v ^ pick4(one, two, four, columns, i, (*[5]uint8)(leaves[20:])))
		}
	}
	return v
}

// smallGroup is the largest group of terms that is counted in registers.
const smallGroup = 4

// smallLeaves lays out the leaves of at most two small groups as 5 by 5, and
// returns where; 0 if the groups are not small.
func (p *lanePlan) smallLeaves(groups []uint8, leaves []uint8) uint32 {
	if len(groups) == 0 || len(groups) > 2 {
		return 0
	}
	second := 0
	if len(groups) == 2 {
		second = int(groups[1])
	}
	if groups[0] > smallGroup || second > smallGroup {
		return 0
	}
	at := len(p.leaves)
	p.leaves = append(p.leaves, make([]uint8, 25)...)
	for c, leaf := range leaves {
		p.leaves[at+c%(second+1)*5+c/(second+1)] = leaf
	}
	return uint32(at)
}

// acceptedAny is accepted for any groups. Row j of a group has the
// lanes in which at least j of its terms cost energy.
func (e *lanes) acceptedAny(i int, mv *zonedMove, base int32) uint64 {
	p := e.plan
	term := mv.firstTerm
	for g, n := range mv.groups {
		row := &e.atLeast[g]
		*row = [maxLaneSlots + 1]uint64{^uint64(0)}
		for have := range int(n) {
			t := &p.terms[term]
			term++
			costs := t.sign
			for _, w := range p.words[t.first:t.last] {
				costs ^= e.words[uint32(base+w)]
			}
			for j := have + 1; j > 0; j-- {
				row[j] |= row[j-1] & costs
			}
		}
	}
	val := e.values[:mv.combos]
	for c, leaf := range p.leaves[mv.leaf:][:mv.combos] {
		val[c] = e.next.columns[leaf][i]
	}
	for g := len(mv.groups) - 1; g >= 0; g-- {
		n := int(mv.groups[g])
		row := &e.atLeast[g]
		out := 0
		for c := 0; c < len(val); c += n + 1 {
			v := val[c]
			for j := 1; j <= n; j++ {
				v ^= row[j] & (v ^ val[c+j])
			}
			val[out] = v
			out++
		}
		val = val[:out]
	}
	return val[0]
}
