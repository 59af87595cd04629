package main

import (
	"fmt"

	"sojourn/analysis"
	"sojourn/observables"
	"sojourn/observables/archive"
)

// gathering turns the rows of a point's units into the arrays that analysis
// works on. Units must be added in increasing order.
type gathering struct {
	facts   *archive.Facts
	point   analysis.Point
	byName  map[string]int // observable
	byPair  map[[2]string]int
	lagAt   map[int64]int
	spatial map[spatialKey][]analysis.Lagged // rows seen, by unit

	planes       []spatialKey // in order of first appearance
	points       []spatialKey
	displacement map[spatialKey][]int

	timeAt []map[float64]int // by observable: index of a time of its transient

	units, trajectories int
	jumps               float64
}

// spatialKey names one displacement of a covariance in space.
type spatialKey struct {
	of   string
	axis int32
	d    [4]int32
}

// newGathering prepares for the units of one point.
func newGathering(p *archive.Point, group string) *gathering {
	f := &p.Facts
	g := &gathering{
		facts: f, byName: map[string]int{}, byPair: map[[2]string]int{}, lagAt: map[int64]int{},
		spatial: map[spatialKey][]analysis.Lagged{}, displacement: map[spatialKey][]int{},
		point: analysis.Point{
			Beta: f.Beta, Group: group, Step: f.Step, Span: f.Span, Lanes: f.Lanes, Rate: f.MaxRate,
			Size: f.Size, Open: f.Open, Sites: f.Sites, EnergyRange: f.EnergyHigh - f.EnergyLow,
		},
	}
	if f.LnStates != nil {
		g.point.LnStates = *f.LnStates
	}
	for i, o := range f.Observables {
		g.byName[o.Name] = i
		g.point.Observables = append(g.point.Observables, analysis.Observable{Name: o.Name, Kind: o.Kind, Scalar: o.Scalar, Single: o.Single})
		g.point.Transients = append(g.point.Transients, analysis.Transient{Observable: i})
		g.timeAt = append(g.timeAt, map[float64]int{})
	}
	for i, lag := range f.Lags {
		g.lagAt[lag] = i
	}
	for i, pair := range f.Pairs {
		g.byPair[[2]string{f.Observables[pair[0]].Name, f.Observables[pair[1]].Name}] = i
		g.point.Pairs = append(g.point.Pairs, analysis.Pair{F: pair[0], G: pair[1], Lags: f.Lags})
	}
	return g
}

// add takes one unit.
func (g *gathering) add(u *observables.Unit) error {
	p := &g.point
	if len(u.Trajectories) == 0 {
		return fmt.Errorf("unit %d has no trajectory", u.Unit)
	}
	index := g.units
	g.units++
	p.Starts = append(p.Starts, u.Trajectories[0].Start)
	for i := range u.Trajectories {
		g.trajectories++
		g.jumps += float64(u.Trajectories[i].Jumps)
	}
	for i := range p.Observables {
		o := &p.Observables[i]
		o.Moments = append(o.Moments, make([]analysis.Moment, observables.MomentSegments))
	}
	for i := range p.Pairs {
		sums := make([][]analysis.Lagged, observables.PairSegments)
		block := make([]analysis.Lagged, observables.PairSegments*len(g.facts.Lags))
		for s := range sums {
			sums[s] = block[s*len(g.facts.Lags) : (s+1)*len(g.facts.Lags)]
		}
		p.Pairs[i].Sums = append(p.Pairs[i].Sums, sums)
	}
	if err := g.addMoments(u); err != nil {
		return err
	}
	if err := g.addPairs(u); err != nil {
		return err
	}
	if err := g.addTransients(u); err != nil {
		return err
	}
	if err := g.addFlips(u); err != nil {
		return err
	}
	g.addSpatial(u, index)
	return nil
}

func (g *gathering) addMoments(u *observables.Unit) error {
	for i := range u.Moments {
		r := &u.Moments[i]
		o, ok := g.byName[r.Observable]
		if !ok || r.Segment < 0 || r.Segment >= observables.MomentSegments {
			return fmt.Errorf("unit %d: moments of %q in segment %d do not belong to this point", u.Unit, r.Observable, r.Segment)
		}
		unit := g.point.Observables[o].Moments
		m := &unit[len(unit)-1][r.Segment]
		m.N += r.Count
		m.S1 += r.Sum1
		m.S2 += r.Sum2
		m.S3 += r.Sum3
		m.S4 += r.Sum4
	}
	return nil
}

func (g *gathering) addPairs(u *observables.Unit) error {
	for i := range u.Autocorrelation {
		r := &u.Autocorrelation[i]
		k, ok := g.byPair[[2]string{r.F, r.G}]
		lag, known := g.lagAt[r.Lag]
		if !ok || !known || r.Segment < 0 || r.Segment >= observables.PairSegments {
			return fmt.Errorf("unit %d: the pair %q, %q at lag %d in segment %d does not belong to this point", u.Unit, r.F, r.G, r.Lag, r.Segment)
		}
		sums := g.point.Pairs[k].Sums
		x := &sums[len(sums)-1][r.Segment][lag]
		x.N += r.Pairs
		x.SF += r.SumF
		x.SG += r.SumG
		x.SFG += r.SumFG
	}
	for i := range u.Dirichlet {
		r := &u.Dirichlet[i]
		k, ok := g.byPair[[2]string{r.F, r.G}]
		if !ok || r.Segment < 0 || r.Segment >= observables.PairSegments {
			return fmt.Errorf("unit %d: the Dirichlet form of %q, %q in segment %d does not belong to this point", u.Unit, r.F, r.G, r.Segment)
		}
		pair := &g.point.Pairs[k]
		for len(pair.Dirichlet) < g.units {
			pair.Dirichlet = append(pair.Dirichlet, make([]analysis.Sum, observables.PairSegments))
		}
		x := &pair.Dirichlet[g.units-1][r.Segment]
		x.N += r.Count
		x.S += r.Sum
	}
	return nil
}

// addFlips takes the counts of flips; tables from before there were any have
// none.
func (g *gathering) addFlips(u *observables.Unit) error {
	for i := range u.Flips {
		r := &u.Flips[i]
		o, ok := g.byName[r.Observable]
		if !ok {
			return fmt.Errorf("unit %d: the flips of %q do not belong to this point", u.Unit, r.Observable)
		}
		obs := &g.point.Observables[o]
		if len(obs.Flips) < g.units-1 {
			continue // an earlier unit has none
		}
		if len(obs.Flips) < g.units {
			obs.Flips = append(obs.Flips, nil)
		}
		unit := &obs.Flips[g.units-1]
		*unit = append(*unit, analysis.Flips{Level: r.Level, N: r.Flips, Time: r.Time})
	}
	return nil
}

func (g *gathering) addTransients(u *observables.Unit) error {
	for i := range g.point.Transients {
		t := &g.point.Transients[i]
		t.Sums = append(t.Sums, make([]analysis.Moment, len(t.Times)))
	}
	for i := range u.Transients {
		r := &u.Transients[i]
		o, ok := g.byName[r.Observable]
		if !ok {
			return fmt.Errorf("unit %d: the transient of %q does not belong to this point", u.Unit, r.Observable)
		}
		t := &g.point.Transients[o]
		k, seen := g.timeAt[o][r.Time]
		if !seen {
			if g.units > 1 {
				return fmt.Errorf("unit %d: the transient of %q was taken at other times than that of the first unit", u.Unit, r.Observable)
			}
			k = len(t.Times)
			g.timeAt[o][r.Time] = k
			t.Times = append(t.Times, r.Time)
			t.Sums[0] = append(t.Sums[0], analysis.Moment{})
		}
		m := &t.Sums[g.units-1][k]
		m.N += r.Count
		m.S1 += r.Sum1
		m.S2 += r.Sum2
	}
	return nil
}

func (g *gathering) addSpatial(u *observables.Unit, index int) {
	for i := range u.Covariance {
		r := &u.Covariance[i]
		k := spatialKey{of: r.Of, axis: r.Axis}
		copy(k.d[:], r.Displacement)
		sums, seen := g.spatial[k]
		if !seen {
			if r.Axis >= 0 {
				g.planes = append(g.planes, k)
			} else {
				g.points = append(g.points, k)
				d := make([]int, len(r.Displacement))
				for a := range d {
					d[a] = int(r.Displacement[a])
				}
				g.displacement[k] = d
			}
		}
		for len(sums) <= index {
			sums = append(sums, analysis.Lagged{})
		}
		x := &sums[index]
		x.N += r.Pairs
		x.SF += r.SumF
		x.SG += r.SumG
		x.SFG += r.SumFG
		g.spatial[k] = sums
	}
}

// finish returns the point. Observables without a Dirichlet form, transients
// without times and covariances in space that were not recorded are left out.
func (g *gathering) finish(seconds float64) analysis.Point {
	p := g.point
	p.Jumps, p.Seconds = g.jumps, seconds
	for i := range p.Pairs {
		pair := &p.Pairs[i]
		for pair.Dirichlet != nil && len(pair.Dirichlet) < g.units {
			pair.Dirichlet = append(pair.Dirichlet, make([]analysis.Sum, observables.PairSegments))
		}
	}
	kept := p.Transients[:0:0]
	for _, t := range p.Transients {
		if len(t.Times) > 0 {
			kept = append(kept, t)
		}
	}
	p.Transients = kept
	p.Spatial = g.finishSpatial()
	return p
}

func (g *gathering) finishSpatial() []analysis.Spatial {
	var out []analysis.Spatial
	of := func(name string) *analysis.Spatial {
		for i := range out {
			if out[i].Of == name {
				return &out[i]
			}
		}
		out = append(out, analysis.Spatial{Of: name})
		return &out[len(out)-1]
	}
	padded := func(k spatialKey) []analysis.Lagged {
		sums := g.spatial[k]
		for len(sums) < g.units {
			sums = append(sums, analysis.Lagged{})
		}
		return sums
	}
	for _, k := range g.planes { // rows come by axis, then by distance from 0
		s := of(k.of)
		if n := len(s.Planes); n == 0 || s.Planes[n-1].Axis != int(k.axis) {
			s.Planes = append(s.Planes, analysis.Plane{Axis: int(k.axis), Sums: make([][]analysis.Lagged, g.units)})
		}
		plane := &s.Planes[len(s.Planes)-1]
		for u, x := range padded(k) {
			plane.Sums[u] = append(plane.Sums[u], x)
		}
	}
	for _, k := range g.points {
		s := of(k.of)
		s.Points = append(s.Points, analysis.Displacement{D: g.displacement[k], Sums: padded(k)})
	}
	return out
}
