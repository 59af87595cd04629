package kinetic

import "sojourn/kinetic/lattice"

// zones divides one axis: with reach r it has min(L, 2r+1) zones. Each
// coordinate within r of an end is a zone of its own, the inside is one.
type zones struct {
	length, reach int
}

func (z zones) count() int { return min(z.length, 2*z.reach+1) }

// of returns the zone of coordinate x.
func (z zones) of(x int) int {
	n := z.count()
	switch {
	case z.length == n || x <= z.reach:
		return min(x, n-1)
	case x >= z.length-z.reach:
		return n - (z.length - x)
	}
	return z.reach
}

// representative returns a coordinate in the given zone.
func (z zones) representative(zone int) int {
	if z.length == z.count() || zone <= z.reach {
		return zone
	}
	return z.length - (z.count() - zone)
}

// atlas maps addresses to places.
type atlas struct {
	axis [lattice.MaxAxes]zones
}

func newAtlas(l lattice.Lattice, reach [lattice.MaxAxes]int) atlas {
	var a atlas
	for i := range a.axis {
		a.axis[i] = zones{l.Size[i], reach[i]}
	}
	return a
}

// each calls f with a representative cell of every zone, in the order in which
// places are numbered.
func (a atlas) each(f func(cell lattice.Offset)) {
	var n, z lattice.Offset
	for i := range n {
		n[i] = a.axis[i].count()
	}
	for z[3] = 0; z[3] < n[3]; z[3]++ {
		for z[2] = 0; z[2] < n[2]; z[2]++ {
			for z[1] = 0; z[1] < n[1]; z[1]++ {
				for z[0] = 0; z[0] < n[0]; z[0]++ {
					var c lattice.Offset
					for i := range c {
						c[i] = a.axis[i].representative(z[i])
					}
					f(c)
				}
			}
		}
	}
}

// columns returns, for each address within a row of cells along axis 0, its
// place relative to the row's first.
func (a atlas) columns(seats int) []uint16 {
	col := make([]uint16, 0, a.axis[0].length*seats)
	for x := range a.axis[0].length {
		for s := range seats {
			col = append(col, uint16(a.axis[0].of(x)*seats+s))
		}
	}
	return col
}

// rows returns the first place of each row.
func (a atlas) rows(seats int) []uint32 {
	n := [lattice.MaxAxes]int{}
	for i := range n {
		n[i] = a.axis[i].count()
	}
	row := make([]uint32, 0, a.axis[1].length*a.axis[2].length*a.axis[3].length)
	for w := range a.axis[3].length {
		for z := range a.axis[2].length {
			for y := range a.axis[1].length {
				zone := (a.axis[3].of(w)*n[2]+a.axis[2].of(z))*n[1] + a.axis[1].of(y)
				row = append(row, uint32(zone*n[0]*seats))
			}
		}
	}
	return row
}
