package kinetic

import "math/bits"

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
		if mv.field {
			with := pick4(one, two, four, columns, i, (*[5]uint8)(mv.fieldLeaf[:]))
			accepted ^= (v ^ mv.fieldSign) & (accepted ^ with)
		}
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
		if mv.field {
			with := pick8(one, two, four, eight, columns, i, &mv.fieldLeaf)
			accepted ^= (v ^ mv.fieldSign) & (accepted ^ with)
		}
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
