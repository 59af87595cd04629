package observables

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// spatial takes the covariance in space of one or more families from snapshots:
// of pairs of terms at [displacements], and of plane sums along each axis in use,
// at distances up to half the length of a periodic axis and length-1 of an
// open one (at most MaxDistance, or chainLimit where the planes are single terms).
// With several lanes each snapshot is of one lane, in rotation. Near an open
// edge covariances differ from those inside; all pairs that fit are counted.
type spatial struct {
	g         *kinetic.Generator
	families  []int
	points    []*pointPairs
	planes    [][]*planePairs // family, axis
	scratch   []int64
	snapshots int64
}

func newSpatial(g *kinetic.Generator, families []int, limit int) *spatial {
	s := &spatial{g: g, families: families, scratch: make([]int64, longestAxis(g.Lattice))}
	d := displacements(g.Lattice, limit)
	for _, f := range families {
		plane := newTermPlane(g, f)
		s.points = append(s.points, newPointPairs(g.Lattice, plane, d))
		var axes []*planePairs
		for a := range g.Lattice.Axes {
			if g.Lattice.Axes == 1 {
				break // its planes are the terms
			}
			axes = append(axes, newPlanePairs(g.Lattice, plane, a))
		}
		s.planes = append(s.planes, axes)
	}
	return s
}

func longestAxis(l lattice.Lattice) int { return max(l.Size[0], l.Size[1], l.Size[2], l.Size[3]) }

// add takes a snapshot from the patterns of one lane.
func (s *spatial) add(patterns []uint16) {
	for i, p := range s.points {
		p.plane.read(patterns)
		p.add()
		for _, axis := range s.planes[i] {
			axis.add(s.g.Lattice, p.plane, s.scratch)
		}
	}
	s.snapshots++
}

// rows returns the sums: for each family its displacements in increasing order,
// then its plane sums by axis and distance.
func (s *spatial) rows() []CovarianceRow {
	var out []CovarianceRow
	if s.snapshots == 0 {
		return nil
	}
	for i, f := range s.families {
		name := s.g.Families[f].Name
		for k := range s.points[i].d {
			out = s.pointRow(out, i, k, -1)
		}
		if s.g.Lattice.Axes == 1 {
			for k, d := range s.points[i].d {
				if d[0] == k { // not yet thinned out
					out = s.pointRow(out, i, k, 0)
				}
			}
		}
		for _, axis := range s.planes[i] {
			for d, t := range axis.totals {
				if axis.pairs[d] == 0 {
					continue
				}
				out = append(out, CovarianceRow{
					Of: name, Axis: int32(axis.axis), Displacement: []int32{int32(d)},
					Snapshots: s.snapshots, Pairs: axis.pairs[d] * s.snapshots,
					SumF: float64(t.first), SumG: float64(t.second), SumFG: float64(t.product),
				})
			}
		}
	}
	return out
}

// pointRow appends the sums over pairs of terms of family i at displacement k,
// if there are such pairs.
func (s *spatial) pointRow(out []CovarianceRow, i, k, axis int) []CovarianceRow {
	t := s.points[i].totals[k]
	if t.pairs == 0 {
		return out
	}
	row := CovarianceRow{
		Of: s.g.Families[s.families[i]].Name, Axis: int32(axis), Snapshots: s.snapshots, Pairs: t.pairs,
		SumF:  float64(t.pairs - 2*t.first),
		SumG:  float64(t.pairs - 2*t.second),
		SumFG: float64(t.pairs - 2*t.differ),
	}
	for a := range s.g.Lattice.Axes {
		row.Displacement = append(row.Displacement, int32(s.points[i].d[k][a]))
	}
	return append(out, row)
}
