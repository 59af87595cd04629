package kinetic

// lineHit is a Generator.Hit in words.
type lineHit struct {
	col, row         []uint32
	first, positions uint32
}

// setHits prepares the hits.
func (p *lanePlan) setHits() {
	columns := map[*uint32][]uint32{}
	for _, h := range p.g.Hits {
		col := columns[&h.Col[0]]
		if col == nil {
			for x := range int(p.cols) {
				col = append(col, h.Col[x*len(p.g.Seats)])
			}
			columns[&h.Col[0]] = col
		}
		p.lineHits = append(p.lineHits, lineHit{
			col, h.Row, p.layout.lines[h.Line], uint32(p.g.Lines[h.Line].Positions),
		})
	}
}

// hitWord returns the word of a line that hit h changes at a row and column.
func (p *lanePlan) hitWord(h uint32, row, col int) uint32 {
	hit := &p.lineHits[h]
	at := hit.col[col] + hit.row[row]
	if at >= hit.positions {
		return p.layout.spare
	}
	return hit.first + at
}

// stillSums returns the sums of families and lines that their words leave as
// they are: those of terms at level 0, or at the level of the reference where no
// move changes the family.
func (p *lanePlan) stillSums() []int64 {
	g := p.g
	var sums []int64
	for f := range g.Families {
		n := int64(g.Families[f].Terms)
		if g.Reference != nil && !p.layout.flips && p.layout.level[f] < 0 {
			for c, s := range g.Reference[f] {
				if s == 1 && g.TermExists(f, c) {
					n -= 2
				}
			}
		}
		sums = append(sums, n)
	}
	for _, l := range g.Lines {
		n := int64(l.Positions)
		for _, exists := range l.Exists {
			if !exists {
				n--
			}
		}
		sums = append(sums, n)
	}
	return sums
}
