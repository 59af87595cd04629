package stabilizer

// problem is a set of rows that is solved by itself: all rows with an X, all
// with a Z if none has both, else all together. Its columns are the sites, or
// two for each site if X and Z meet.
type problem struct {
	*System
	rows   []int32 // of the System, in order
	mixed  bool
	levels []uint8 // by row of the System: wanted levels, changed to possible ones
	budget *int
	alive  []bool // by index into rows: not known to be independent
	// consistent is cleared when a wanted level is found impossible, clash set
	// when rows are found not to commute.
	consistent, clash bool
}

// problems splits the rows. Rows without factors are multiples of the identity
// at level 0 and take no part.
func (s *System) problems(levels []uint8, budget *int) []*problem {
	var x, z, both []int32
	mixed := false
	for r := range int32(s.Rows()) {
		hasX, hasZ := false, false
		for i := s.first[r]; i < s.first[r+1]; i++ {
			hasX = hasX || s.x[i] != 0
			hasZ = hasZ || s.z[i] != 0
		}
		switch {
		case hasX || hasZ:
			both = append(both, r)
			mixed = mixed || hasX && hasZ
		default:
			levels[r] = 0
			continue
		}
		if hasX {
			x = append(x, r)
		} else {
			z = append(z, r)
		}
	}
	lists := [][]int32{x, z}
	if mixed {
		lists = [][]int32{both}
	}
	var out []*problem
	for _, rows := range lists {
		if len(rows) > 0 {
			out = append(out, &problem{System: s, rows: rows, mixed: mixed, levels: levels, budget: budget, consistent: true})
		}
	}
	return out
}

// solve returns log_q of the order of the group of the rows, and whether the
// wanted levels are possible.
func (p *problem) solve() (rank float64, consistent, ok bool) {
	independent := p.peel()
	rank = float64(independent)
	left := len(p.rows) - independent
	if left == 0 {
		return rank, true, true
	}
	var more float64
	ok = true
	switch {
	case p.q == 2 && !p.mixed && p.rowsAreEdges():
		more = p.countEdgeRows()
	case p.q == 2 && p.columnsAreEdges():
		more = p.countEdgeColumns(left)
	case p.q == 2:
		more, ok = p.eliminateBits()
	default:
		more, ok = p.eliminateModular()
	}
	return rank + more, p.consistent, ok
}

// columns returns the number of columns.
func (p *problem) columns() int {
	if p.mixed {
		return 2 * p.sites
	}
	return p.sites
}

// each calls f with the columns of a row and the entries there: X powers on
// even and Z powers on odd columns if mixed.
func (p *problem) each(row int32, f func(col int32, entry uint8)) {
	for i := p.first[row]; i < p.first[row+1]; i++ {
		if !p.mixed {
			f(p.site[i], p.x[i]+p.z[i]) // one of them is 0
			continue
		}
		if p.x[i] != 0 {
			f(2*p.site[i], p.x[i])
		}
		if p.z[i] != 0 {
			f(2*p.site[i]+1, p.z[i])
		}
	}
}

// phase returns the phase of the row's T over its X^x Z^z, in units of
// exp(i pi/q).
func (p *problem) phase(row int32) int {
	if !p.mixed {
		return 0
	}
	sum := 0
	for i := p.first[row]; i < p.first[row+1]; i++ {
		sum += int(p.x[i]) * int(p.z[i])
	}
	if p.q%2 == 1 {
		sum *= p.q + 1
	}
	return sum % (2 * p.q)
}

// settle records that the row, taken at its wanted level, equals the identity
// times exp(i pi/q)^phase in a state that has the levels of all rows before
// it, and moves its level accordingly. The product of commuting operators with
// T^q = 1 has an even phase.
func (p *problem) settle(row int32, phase int) {
	phase %= 2 * p.q
	if phase < 0 {
		phase += 2 * p.q
	}
	if phase == 0 {
		return
	}
	p.consistent = false
	p.clash = p.clash || phase%2 != 0
	p.levels[row] = uint8((int(p.levels[row]) + phase/2) % p.q)
}
