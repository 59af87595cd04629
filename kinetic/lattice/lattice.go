// Package lattice holds the geometry that everything else agrees on: cells on
// one to four axes, each axis periodic or open.
//
// Cells are numbered with axis 0 fastest: the cell at (x, y, z, w) on a lattice
// of lengths (A, B, C, D) has the number ((w*C + z)*B + y)*A + x. Unused axes
// have length 1 and are periodic.
package lattice

import "fmt"

// MaxAxes is the largest number of axes.
const MaxAxes = 4

// Offset is a displacement, or a position, in cells along each axis.
type Offset [MaxAxes]int

// Add returns o + p.
func (o Offset) Add(p Offset) Offset {
	for a := range o {
		o[a] += p[a]
	}
	return o
}

// Neg returns -o.
func (o Offset) Neg() Offset {
	for a := range o {
		o[a] = -o[a]
	}
	return o
}

// Less orders offsets by their last axis first, as cell numbers do.
func (o Offset) Less(p Offset) bool {
	for a := MaxAxes - 1; a >= 0; a-- {
		if o[a] != p[a] {
			return o[a] < p[a]
		}
	}
	return false
}

// Lattice is a box of cells. It is comparable and immutable by convention.
type Lattice struct {
	Size [MaxAxes]int  // cells along each axis; 1 on unused axes
	Open [MaxAxes]bool // whether the axis has edges
	Axes int           // number of axes in use
}

// New returns the lattice of the given lengths. open may be nil (all periodic)
// or give one entry per axis.
func New(size []int, open []bool) (Lattice, error) {
	l := Lattice{Size: [MaxAxes]int{1, 1, 1, 1}, Axes: len(size)}
	if len(size) < 1 || len(size) > MaxAxes {
		return l, fmt.Errorf("a lattice has 1 to %d axes, not %d", MaxAxes, len(size))
	}
	if open != nil && len(open) != len(size) {
		return l, fmt.Errorf("%d boundaries for %d axes", len(open), len(size))
	}
	cells := 1
	for a, n := range size {
		if n < 1 {
			return l, fmt.Errorf("axis %d has %d cells; at least 1 is needed", a, n)
		}
		if n > (1<<40)/cells {
			return l, fmt.Errorf("a lattice of sizes %v has more than 2^40 cells", size)
		}
		cells *= n
		l.Size[a] = n
		l.Open[a] = open != nil && open[a]
	}
	return l, nil
}

// Cells returns the number of cells.
func (l Lattice) Cells() int { return l.Size[0] * l.Size[1] * l.Size[2] * l.Size[3] }

// Index returns the number of the cell at c, which must lie inside.
func (l Lattice) Index(c Offset) int {
	return ((c[3]*l.Size[2]+c[2])*l.Size[1]+c[1])*l.Size[0] + c[0]
}

// Coord returns the position of the cell with number i.
func (l Lattice) Coord(i int) Offset {
	var c Offset
	for a := range c {
		c[a] = i % l.Size[a]
		i /= l.Size[a]
	}
	return c
}

// Wrap returns the cell at c + o, folded back along periodic axes; ok is false
// if the result lies beyond an open edge.
func (l Lattice) Wrap(c, o Offset) (d Offset, ok bool) {
	for a := range c {
		x := c[a] + o[a]
		n := l.Size[a]
		if x < 0 || x >= n {
			if l.Open[a] {
				return d, false
			}
			x = ((x % n) + n) % n
		}
		d[a] = x
	}
	return d, true
}

// Periodic reports whether no axis has edges.
func (l Lattice) Periodic() bool {
	for _, o := range l.Open {
		if o {
			return false
		}
	}
	return true
}

// Lengths returns the lengths of the axes in use.
func (l Lattice) Lengths() []int { return append([]int(nil), l.Size[:l.Axes]...) }
