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
	d         []lattice.Offset
	families  []int
	fields    []spatialField
	planes    [][]*planePairs // family, axis
	snapshot  snapshot
	snapshots int64
}

// spatialField is the terms of one family, and the sums over their pairs.
type spatialField interface {
	// read takes the terms from a snapshot.
	read(s *snapshot)
	// add takes in the terms as last read.
	add()
	// pair returns the sums over pairs at displacement k, and their number.
	pair(k int) (int64, pairSums)
	// presence tells which cells have a term.
	presence() *bitPlane
	// parts is 2 if terms have a real and an imaginary part, else 1.
	parts() int
	// planeSums writes the sums of one part of the terms last read, by
	// coordinate.
	planeSums(dst []float64, axis, part int)
}

// snapshot is the state of one lane.
type snapshot struct {
	e        kinetic.Engine
	lane     int
	patterns []uint16 // two levels
	levels   []uint8  // more levels: scratch, by cell
}

func newSpatial(e kinetic.Engine, g *kinetic.Generator, families []int, limit int) *spatial {
	s := &spatial{g: g, families: families, d: displacements(g.Lattice, limit), snapshot: snapshot{e: e}}
	if g.Levels == 2 {
		s.snapshot.patterns = make([]uint16, g.Addresses())
	} else {
		s.snapshot.levels = make([]uint8, g.Cells())
	}
	for _, f := range families {
		var field spatialField
		if g.Levels == 2 {
			field = newBitField(g, f, s.d)
		} else {
			field = newLevelField(g, f, s.d)
		}
		s.fields = append(s.fields, field)
		var axes []*planePairs
		for a := range g.Lattice.Axes {
			if g.Lattice.Axes == 1 {
				break // its planes are the terms
			}
			axes = append(axes, newPlanePairs(g.Lattice, field, a, g.Levels == 2))
		}
		s.planes = append(s.planes, axes)
	}
	return s
}

func longestAxis(l lattice.Lattice) int { return max(l.Size[0], l.Size[1], l.Size[2], l.Size[3]) }

// add takes a snapshot of one lane.
func (s *spatial) add() {
	s.snapshot.lane = int(s.snapshots % int64(s.snapshot.e.Lanes()))
	if s.snapshot.patterns != nil {
		s.snapshot.e.Patterns(s.snapshot.lane, s.snapshot.patterns)
	}
	for i, f := range s.fields {
		f.read(&s.snapshot)
		f.add()
		for _, axis := range s.planes[i] {
			axis.add(f)
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
	for i := range s.fields {
		for k := range s.d {
			out = s.pointRow(out, i, k, -1)
		}
		if s.g.Lattice.Axes == 1 {
			for k, d := range s.d {
				if d[0] == k { // not yet thinned out
					out = s.pointRow(out, i, k, 0)
				}
			}
		}
		for _, p := range s.planes[i] {
			for d, t := range p.totals {
				if p.pairs[d] == 0 {
					continue
				}
				out = append(out, CovarianceRow{
					Of: s.name(i), Axis: int32(p.axis), Displacement: []int32{int32(d)},
					Snapshots: s.snapshots, Pairs: p.pairs[d] * s.snapshots,
					SumF: t.f, SumG: t.g, SumFG: t.fg,
				})
			}
		}
	}
	return out
}

func (s *spatial) name(i int) string { return s.g.Families[s.families[i]].Name }

// pointRow appends the sums over pairs of terms of family i at displacement k,
// if there are such pairs.
func (s *spatial) pointRow(out []CovarianceRow, i, k, axis int) []CovarianceRow {
	n, sums := s.fields[i].pair(k)
	if n == 0 {
		return out
	}
	row := CovarianceRow{
		Of: s.name(i), Axis: int32(axis), Snapshots: s.snapshots, Pairs: n,
		SumF: sums.f, SumG: sums.g, SumFG: sums.fg,
	}
	for a := range s.g.Lattice.Axes {
		row.Displacement = append(row.Displacement, int32(s.d[k][a]))
	}
	return append(out, row)
}
