package exact

import (
	"fmt"

	"sojourn/kinetic/lattice"
)

// SpatialCovariance is the covariance between terms of one observable, whose
// components are single instances at cells (System.Local), by displacement:
//
//	K(r) = mean over pairs of Cov(s_x, s_(x+r)),
//
// pairs being those that the lattice has; for complex eigenvalues the real part
// of Cov(s_x^*, s_(x+r)).
type SpatialCovariance struct {
	lattice lattice.Lattice
	sum     []float64 // by displacement, folded; open axes from -(L-1)
	pairs   []int
	size    [lattice.MaxAxes]int // displacements along each axis
	planes  [lattice.MaxAxes][]float64
}

// Covariance returns the spatial covariance of the terms of an observable made
// by System.Local from one family. Its cost grows with the number of states
// times the square of the number of terms.
func (st *States) Covariance(o Observable) (*SpatialCovariance, error) {
	s := st.System
	var cells []lattice.Offset
	var values [][][]float64 // by term: its real part, and its imaginary part if it has one
	last := -1
	for _, c := range o.Components {
		if len(c) != 1 || s.Kinds[s.Instances[c[0].Instance].Kind].Line {
			return nil, fmt.Errorf("%s is not made of single terms", o.Name)
		}
		v := make([]float64, st.Len())
		st.Values(c, v)
		st.centre(v)
		if c[0].Instance == last {
			values[len(values)-1] = append(values[len(values)-1], v)
			continue
		}
		last = c[0].Instance
		cells = append(cells, s.cell(last))
		values = append(values, [][]float64{v})
	}
	k := &SpatialCovariance{lattice: s.Spec.Lattice, size: s.Spec.Lattice.Size}
	n := 1
	for a, open := range k.lattice.Open {
		if open {
			k.size[a] = 2*k.size[a] - 1
		}
		n *= k.size[a]
	}
	k.sum, k.pairs = make([]float64, n), make([]int, n)
	planes := [lattice.MaxAxes][]float64{}
	for a := range planes {
		planes[a] = make([]float64, k.size[a])
	}
	for x := range values {
		for y := range values {
			c := 0.0
			for part := range values[x] {
				f, g := values[x][part], values[y][part]
				for i, w := range st.Weight {
					c += w * f[i] * g[i]
				}
			}
			d := k.index(cells[y].Add(cells[x].Neg()))
			k.sum[d] += c
			k.pairs[d]++
			for a := range planes {
				planes[a][k.along(a, cells[y][a]-cells[x][a])] += c
			}
		}
	}
	k.normalise(planes)
	return k, nil
}

// centre subtracts the mean.
func (st *States) centre(v []float64) {
	mean := 0.0
	for i, f := range v {
		mean += st.Weight[i] * f
	}
	for i := range v {
		v[i] -= mean
	}
}

// normalise turns sums over planes into means per pair of planes and term of a
// plane, so that planes of one site give K itself.
func (k *SpatialCovariance) normalise(planes [lattice.MaxAxes][]float64) {
	l := k.lattice
	for a := range planes {
		across := float64(l.Cells() / l.Size[a])
		for r := range l.Size[a] {
			pairs := l.Size[a]
			at := r
			if l.Open[a] {
				pairs -= r
				at += l.Size[a] - 1
			}
			k.planes[a] = append(k.planes[a], planes[a][at]/(float64(pairs)*across))
		}
	}
}

// along folds a displacement along an axis into an index.
func (k *SpatialCovariance) along(a, d int) int {
	if k.lattice.Open[a] {
		return d + k.lattice.Size[a] - 1
	}
	return mod(d, k.lattice.Size[a])
}

func (k *SpatialCovariance) index(d lattice.Offset) int {
	n := 0
	for a := lattice.MaxAxes - 1; a >= 0; a-- {
		n = n*k.size[a] + k.along(a, d[a])
	}
	return n
}

// At returns K at a displacement, 0 where the lattice has no such pair. Along
// an open axis the displacement must be shorter than the lattice.
func (k *SpatialCovariance) At(d lattice.Offset) float64 {
	i := k.index(d)
	if k.pairs[i] == 0 {
		return 0
	}
	return k.sum[i] / float64(k.pairs[i])
}

// Planes returns the covariance of the sums over planes across an axis, by
// their distance 0..L-1: averaged over pairs of planes and divided by the cells
// of a plane.
func (k *SpatialCovariance) Planes(axis int) []float64 {
	return append([]float64(nil), k.planes[axis]...)
}
