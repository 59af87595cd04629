package kinetic

import "math/bits"

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
