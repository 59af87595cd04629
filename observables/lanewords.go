package observables

import (
	"sojourn/kinetic"
)

// wordColumns reads the terms of all lanes of an engine that keeps one word per
// term, and turns them into bit vectors and planes of the lanes: blocks of 64
// words are transposed.
type wordColumns struct {
	buffer    []uint64 // words of the terms of a track, or of a plane in the order of its bits
	cells     []uint64 // words of a family by cell, or of a line by position
	addresses [][]int32
	slots     [][]uint8
	planes    map[int][]uint64 // family: lane, word of the plane
	stride    int              // words of a plane
}

func newWordColumns(g *kinetic.Generator, r *reading) wordColumns {
	c := wordColumns{planes: make(map[int][]uint64)}
	need, cells := 0, 0
	for i := range r.tracks {
		t := &r.tracks[i]
		var addresses []int32
		var slots []uint8
		for _, s := range t.spots {
			addresses = append(addresses, max(s.address, 0))
			slots = append(slots, s.shift)
			if s.address == still {
				slots[len(slots)-1] = 0 // read, but not used
			}
		}
		c.addresses = append(c.addresses, addresses)
		c.slots = append(c.slots, slots)
		need = max(need, 64*t.words)
		if t.line >= 0 {
			cells = max(cells, g.Lines[t.line].Positions)
		}
	}
	for f, p := range r.planes {
		c.stride = len(p.words)
		c.planes[f] = make([]uint64, r.lanes*c.stride)
		need = max(need, 64*c.stride)
		cells = max(cells, g.Cells())
	}
	c.buffer = make([]uint64, need)
	c.cells = make([]uint64, cells)
	return c
}

// take reads all tracks and planes.
func (c *wordColumns) take(r *reading) {
	for i := range r.tracks {
		t := &r.tracks[i]
		words := c.buffer[:64*t.words]
		if t.line >= 0 {
			c.takeLine(r, words, t.line)
		} else {
			c.takeTerms(r, words, i)
		}
		transpose(r.bits[i], t.words, words, r.lanes)
	}
	for _, f := range r.order {
		p := r.planes[f]
		r.words.Words(f, c.cells[:r.g.Cells()])
		words := c.buffer[:64*c.stride]
		clear(words)
		for row := range p.rows {
			copy(words[64*row*p.stride:], c.cells[row*p.length:][:p.length])
		}
		transpose(c.planes[f], c.stride, words, r.lanes)
	}
}

func (c *wordColumns) takeTerms(r *reading, words []uint64, i int) {
	spots := r.tracks[i].spots
	r.words.SlotWords(c.addresses[i], c.slots[i], words[:len(spots)])
	clear(words[len(spots):])
	for k, s := range spots {
		if s.address == still {
			words[k] = -uint64(s.shift)
		}
	}
}

func (c *wordColumns) takeLine(r *reading, words []uint64, line int) {
	l := &r.g.Lines[line]
	levels := c.cells[:l.Positions]
	r.words.Words(len(r.g.Families)+line, levels)
	clear(words)
	k := 0
	for p, w := range levels {
		if l.Exists == nil || l.Exists[p] {
			words[k] = w
			k++
		}
	}
}

// plane points a plane to the bits of one lane.
func (c *wordColumns) plane(p *termPlane, f, lane int) {
	p.words = c.planes[f][lane*c.stride:][:c.stride]
}

// transpose turns 64*width words, a bit for each lane in each, into one vector of
// width words for each lane.
func transpose(dst []uint64, width int, words []uint64, lanes int) {
	for w := range width {
		block := (*[64]uint64)(words[64*w:])
		transpose64(block)
		for lane := range lanes {
			dst[lane*width+w] = block[lane]
		}
	}
}

// transpose64 transposes a matrix of 64 x 64 bits by exchanging ever smaller
// blocks.
func transpose64(m *[64]uint64) {
	mask := ^uint64(0) >> 32
	for d := 32; d > 0; {
		for i := 0; i < 64; i = (i + d + 1) &^ d {
			x := (m[i]>>d ^ m[i+d]) & mask
			m[i] ^= x << d
			m[i+d] ^= x
		}
		d /= 2
		mask ^= mask << d
	}
}
