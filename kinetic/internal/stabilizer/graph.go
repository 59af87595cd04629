package stabilizer

// forest is a union of sets with a parity from each element to the root of its
// set (weighted union-find).
type forest struct {
	parent []int32
	parity []uint8
}

func newForest(n int) *forest {
	f := &forest{parent: make([]int32, n), parity: make([]uint8, n)}
	for i := range f.parent {
		f.parent[i] = int32(i)
	}
	return f
}

// find returns the root of a and the parity of a against it.
func (f *forest) find(a int32) (root int32, parity uint8) {
	root = a
	for f.parent[root] != root {
		parity ^= f.parity[root]
		root = f.parent[root]
	}
	for total := parity; f.parent[a] != root && a != root; {
		next, step := f.parent[a], f.parity[a]
		f.parent[a], f.parity[a] = root, total
		total ^= step
		a = next
	}
	return root, parity
}

// join sets the parity between a and b. joined is false if they were in one
// set already; excess is then 1 if the parity contradicts.
func (f *forest) join(a, b int32, parity uint8) (joined bool, excess uint8) {
	ra, pa := f.find(a)
	rb, pb := f.find(b)
	if ra == rb {
		return false, pa ^ pb ^ parity
	}
	f.parent[ra] = rb
	f.parity[ra] = pa ^ pb ^ parity
	return true, 0
}

// rowsAreEdges reports whether every row alive has one or two entries: edges of
// a graph of the columns, or half edges.
func (p *problem) rowsAreEdges() bool {
	for i, row := range p.rows {
		if p.alive[i] && p.first[row+1]-p.first[row] > 2 {
			return false
		}
	}
	return true
}

// countEdgeRows returns the rank of rows that are edges: those of a spanning
// forest are independent. Half edges lead to one more vertex.
func (p *problem) countEdgeRows() float64 {
	outside := int32(p.columns())
	f := newForest(p.columns() + 1)
	rank := 0
	for i, row := range p.rows {
		if !p.alive[i] {
			continue
		}
		ends := [2]int32{outside, outside}
		n := 0
		p.each(row, func(col int32, _ uint8) {
			ends[n] = col
			n++
		})
		joined, excess := f.join(ends[0], ends[1], p.levels[row])
		if joined {
			rank++
		} else {
			p.settle(row, 2*int(excess))
		}
	}
	return float64(rank)
}

// columnsAreEdges reports whether every column has entries in no rows alive or
// in two: edges of a graph of the rows.
func (p *problem) columnsAreEdges() bool {
	count := make([]int32, p.columns())
	simple := true
	for i, row := range p.rows {
		if p.alive[i] {
			p.each(row, func(col int32, _ uint8) {
				count[col]++
				simple = simple && count[col] <= 2
			})
		}
	}
	return simple
}

// countEdgeColumns returns the rank of rows that are the vertices of a graph
// whose edges are the columns: the only relations are the products of all rows
// of a component. rows is how many are alive.
func (p *problem) countEdgeColumns(rows int) float64 {
	f := newForest(len(p.rows))
	seen := make([]int32, p.columns()) // 1 + index of the first row in the column
	components := rows
	for i, row := range p.rows {
		if !p.alive[i] {
			continue
		}
		p.each(row, func(col int32, _ uint8) {
			if seen[col] == 0 {
				seen[col] = int32(i) + 1
			} else if joined, _ := f.join(int32(i), seen[col]-1, 0); joined {
				components--
			}
		})
	}
	p.settleComponents(f)
	return float64(rows - components)
}

// settleComponents multiplies the rows of every component, at their wanted
// levels, and lets its last row take up the sign.
func (p *problem) settleComponents(f *forest) {
	phase := make([]int, len(p.rows)) // by root
	last := make([]int32, len(p.rows))
	// Rows of different components share no column, so one product serves all.
	product := make([]bool, p.columns())
	for i, row := range p.rows {
		if !p.alive[i] {
			continue
		}
		root, _ := f.find(int32(i))
		last[root] = row
		sum := p.phase(row) + 2*int(p.levels[row])
		p.each(row, func(col int32, _ uint8) {
			// X of this row passes Z of the product on the same site.
			if p.mixed && col%2 == 0 && product[col+1] {
				sum += 2
			}
		})
		p.each(row, func(col int32, _ uint8) { product[col] = !product[col] })
		phase[root] += sum
	}
	for i := range p.rows {
		if root, _ := f.find(int32(i)); p.alive[i] && root == int32(i) {
			p.settle(last[root], phase[root])
		}
	}
}
