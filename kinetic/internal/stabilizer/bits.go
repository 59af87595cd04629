package stabilizer

import (
	"math/bits"
	"sort"
)

// element is a product of rows that has eigenvalue 1 in the state sought, over
// Z_2: bits from word lo on, the lowest set bit being its pivot.
type element struct {
	lo    int32
	phase uint8 // units of i, over the X^x Z^z of the bits
	bits  []uint64
}

// even selects the X bits of a word of a mixed problem.
const even = 0x5555555555555555

// storage is what a word that is kept costs, in words that are touched: it
// bounds the memory that a budget can take.
const storage = 16

// eliminateBits returns the rank of the rows alive by Gaussian elimination over
// Z_2. Rows are taken in the order of their first column, which keeps products
// as short as the rows reach in the numbering of sites.
func (p *problem) eliminateBits() (rank float64, ok bool) {
	pivots := make([]*element, p.columns())
	work := make([]uint64, p.columns()/64+1)
	n := 0
	for _, i := range p.eliminationOrder() {
		row := p.rows[i]
		lo, hi := int32(len(work)), int32(0) // words in use: lo <= word < hi
		p.each(row, func(col int32, _ uint8) {
			work[col>>6] |= 1 << (col & 63)
			lo, hi = min(lo, col>>6), max(hi, col>>6+1)
		})
		phase := p.phase(row) + 2*int(p.levels[row])
		for lo < hi {
			if work[lo] == 0 {
				lo++
				continue
			}
			col := lo<<6 + int32(bits.TrailingZeros64(work[lo]))
			e := pivots[col]
			if e == nil {
				if *p.budget -= storage * int(hi-lo); *p.budget < 0 {
					return 0, false
				}
				e = &element{lo: lo, phase: uint8(phase & 3), bits: append([]uint64(nil), work[lo:hi]...)}
				pivots[col] = e
				n++
				break
			}
			if *p.budget -= len(e.bits) + 4; *p.budget < 0 {
				return 0, false
			}
			end := e.lo + int32(len(e.bits))
			hi = max(hi, end)
			into := work[e.lo:end]
			if p.mixed {
				odd := 0
				for k, w := range e.bits {
					odd += bits.OnesCount64(into[k] >> 1 & w & even)
				}
				phase += int(e.phase) + 2*odd
			} else {
				phase += int(e.phase)
			}
			for k, w := range e.bits {
				into[k] ^= w
			}
		}
		if lo == hi {
			p.settle(row, phase)
		}
		clear(work[min(lo, hi):hi])
	}
	return float64(n), true
}

// eliminationOrder returns the indices of the rows alive, stage by stage, by
// first column.
func (p *problem) eliminationOrder() []int32 {
	var order []int32
	lead := make([]int32, len(p.rows))
	stage := make([]int32, len(p.rows))
	for i, row := range p.rows {
		if !p.alive[i] {
			continue
		}
		order = append(order, int32(i))
		lead[i] = int32(p.columns())
		p.each(row, func(col int32, _ uint8) { lead[i] = min(lead[i], col) })
		stage[i] = int32(sort.Search(len(p.stage), func(k int) bool { return p.stage[k] > row }))
	}
	sort.Slice(order, func(a, b int) bool {
		i, j := order[a], order[b]
		if stage[i] != stage[j] {
			return stage[i] < stage[j]
		}
		if lead[i] != lead[j] {
			return lead[i] < lead[j]
		}
		return i < j
	})
	return order
}
