package stabilizer

// peel marks rows that no relation contains: a row that alone has an entry in
// some column, that entry being invertible mod q, and then rows that are alone
// once such rows are gone. It returns their number.
func (p *problem) peel() int {
	count := make([]int32, p.columns()) // rows alive in the column
	which := make([]int32, p.columns()) // XOR of their indices
	p.alive = make([]bool, len(p.rows))
	for i, row := range p.rows {
		p.alive[i] = true
		p.each(row, func(col int32, _ uint8) {
			count[col]++
			which[col] ^= int32(i)
		})
	}
	var alone []int32
	for c, n := range count {
		if n == 1 {
			alone = append(alone, int32(c))
		}
	}
	peeled := 0
	for len(alone) > 0 {
		c := alone[len(alone)-1]
		alone = alone[:len(alone)-1]
		if count[c] != 1 {
			continue
		}
		i := which[c]
		unit := false
		p.each(p.rows[i], func(col int32, entry uint8) {
			unit = unit || col == c && gcd(int(entry), p.q) == 1
		})
		if !unit {
			continue
		}
		p.alive[i] = false
		peeled++
		p.each(p.rows[i], func(col int32, _ uint8) {
			count[col]--
			which[col] ^= i
			if count[col] == 1 {
				alone = append(alone, col)
			}
		})
	}
	return peeled
}

func gcd(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}
