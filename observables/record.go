package observables

import (
	"context"
	"fmt"
	"math"
	"math/bits"

	"sojourn/kinetic"
)

// Label says which unit of a point is recorded and where it comes from.
type Label struct {
	Unit   int    // its number, from 0
	Start  string // the state in which its lanes began
	Engine string // name of the engine
}

// Record drives a fresh engine (at time 0) through one unit and returns its
// sums. obs come from [Bind] on the same generator; pairs are indices into obs
// with f <= g: an observable with itself, or two scalars.
//
// progress, which may be nil, is called with the number of jumps so far after
// every piece of work of at most about 2^18 attempted jumps; it should only
// note the number. When ctx is cancelled Record returns ctx.Err() after at most
// one such piece, and the unit is lost. Rows depend on the trajectory alone.
// Record panics if the engine is not at time 0.
func Record(ctx context.Context, e kinetic.Engine, g *kinetic.Generator, obs []Observable,
	pairs [][2]int, plan Plan, label Label, progress func(jumps uint64)) (Unit, error) {
	if e.Time() != 0 {
		panic("observables: Record needs an engine at time 0")
	}
	if err := plan.Check(g); err != nil {
		return Unit{}, err
	}
	if err := checkPairs(obs, pairs); err != nil {
		return Unit{}, err
	}
	r, err := newRecorder(e, g, obs, pairs, plan)
	if err != nil {
		return Unit{}, err
	}
	r.done, r.progress = ctx.Done(), progress
	if !r.run() {
		return Unit{}, ctx.Err()
	}
	return r.unit(label), nil
}

func checkPairs(obs []Observable, pairs [][2]int) error {
	for _, p := range pairs {
		if p[0] < 0 || p[0] > p[1] || p[1] >= len(obs) {
			panic(fmt.Sprintf("observables: pair %v of %d observables", p, len(obs)))
		}
		f, g := obs[p[0]], obs[p[1]]
		if p[0] != p[1] && !(f.Scalar() && g.Scalar()) {
			return fmt.Errorf("a covariance of %q and %q has no meaning: only energy, magnetization and terms are single numbers", f.Name, g.Name)
		}
	}
	return nil
}

// recorder is the state of one unit.
type recorder struct {
	e        kinetic.Engine
	g        *kinetic.Generator
	plan     Plan
	pairs    [][2]int // of observables
	channels []int    // by pair: first of its channel pairs in the correlator, -1 for tracks
	piece    float64  // longest time advanced at once
	done     <-chan struct{}
	progress func(uint64)

	*reading
	tl         *timeline
	correlator *correlator
	moments    *moments
	dirichlet  *dirichlet
	stride     int64 // samples between Dirichlet forms
	transients *transients
	flips      *flips
	spatial    *spatial // nil if not asked for
	every      int64    // samples between snapshots
}

// pieceAttempts bounds the attempted jumps between two looks at the context: at
// the 300 ns that a jump takes on the largest lattices, a twelfth of a second.
const pieceAttempts = 1 << 18

func newRecorder(e kinetic.Engine, g *kinetic.Generator, obs []Observable, pairs [][2]int, plan Plan) (*recorder, error) {
	r := &recorder{e: e, g: g, plan: plan, pairs: pairs, reading: newReading(e, g, obs)}
	moves := 0
	for _, s := range g.Seats {
		moves += len(s.Moves)
	}
	r.piece = pieceAttempts / (g.MaxRate() * float64(moves) * float64(g.Cells()) * float64(e.Lanes()))
	r.tl = newTimeline(plan.Samples())
	channelPairs := r.channelPairs()
	r.correlator = newCorrelator(r.tl, r.reading, channelPairs)
	r.moments = newMoments(r.reading.channels, len(r.tracks), g.Levels)
	r.dirichlet = newDirichlet(e, g, r.reading, pairs)
	r.transients = newTransients(TransientTimes(plan.Settle, plan.Span, plan.Step), r.lanes, len(obs))
	r.flips = newFlips(r.reading)
	if plan.Covariance != "" {
		families, err := FamiliesOf(g, plan.Covariance)
		if err != nil {
			return nil, err
		}
		r.spatial = newSpatial(e, g, families, plan.Limit)
		r.every = max(1, int64(math.Round(plan.Every/plan.Step)))
	}
	return r, nil
}

// channelPairs lists the pairs of channels behind the pairs of observables.
func (r *recorder) channelPairs() [][2]int {
	var out [][2]int
	for _, p := range r.pairs {
		f, g := r.layout[p[0]], r.layout[p[1]]
		if f.channel < 0 {
			r.channels = append(r.channels, -1)
			continue
		}
		r.channels = append(r.channels, len(out))
		out = append(out, [2]int{f.channel, g.channel})
		if f.amplitude() {
			out = append(out, [2]int{f.channel + 1, f.channel + 1})
		}
	}
	return out
}

// run drives the engine; it returns false when the context is done.
func (r *recorder) run() bool {
	n := r.plan.Samples()
	for k := int64(0); k < n; k++ {
		t := r.plan.Settle + float64(k)*r.plan.Step
		if !r.runTransients(t) || !r.advance(t) {
			return false
		}
		if k == 0 {
			r.stride = r.dirichletStride()
		}
		r.take()
		if i := r.transients.next; i < len(r.transients.times) && r.transientTime(i) == t {
			r.transients.add(r.reading)
		}
		r.sample(k)
	}
	return r.runTransients(math.Inf(1))
}

// runTransients reads the observables at the times of the transients before t.
func (r *recorder) runTransients(t float64) bool {
	for i := r.transients.next; i < len(r.transients.times) && r.transientTime(i) < t; i++ {
		if !r.advance(r.transientTime(i)) {
			return false
		}
		r.take()
		r.transients.add(r.reading)
	}
	return true
}

func (r *recorder) transientTime(i int) float64 {
	return float64(r.transients.times[i]) * r.plan.Step
}

// advance runs the engine to time t in pieces.
func (r *recorder) advance(t float64) bool {
	for {
		now := r.e.Time()
		to := math.Min(now+r.piece, t)
		r.e.Advance(to)
		if r.progress != nil {
			r.progress(r.e.Jumps())
		}
		select {
		case <-r.done:
			return false
		default:
		}
		if to >= t || to == now {
			if to < t { // the piece is shorter than the clock can tell
				r.e.Advance(t)
			}
			return true
		}
	}
}

// sample takes in the present state as sample k.
func (r *recorder) sample(k int64) {
	r.tl.next()
	r.correlator.add(r.reading)
	r.moments.add(r.tl.segment(k, MomentSegments), r.reading)
	r.flips.add(r.reading)
	if k%r.stride == 0 {
		r.dirichlet.add(r.tl.segment(k, PairSegments))
	}
	if r.spatial != nil && k%r.every == 0 {
		r.spatial.add()
	}
}

// dirichletStride returns every how many samples the Dirichlet forms are taken: a
// power of two, so that they are at least the inverse of the largest rate of a
// bath operator apart, and cost little beside the jumps in between, at the
// activity seen while settling; but a number of times in each segment, if there
// are so many samples. It is fixed before the first sample is taken, so it does
// not select states.
func (r *recorder) dirichletStride() int64 {
	// A census takes about as long as a jump for every 25 seats: it waits for a
	// jump at every other one. A sum over seats takes longer than a census; with
	// lanes jumps are quicker, and one time gives many states.
	wait, least := 0.5, int64(64)
	switch {
	case r.g.Couplings != nil, r.g.Wide != nil:
		wait *= 8
	case r.lanes > 1:
		wait *= 16
		least = 8
	}
	apart := 1 / r.g.MaxRate()
	if jumps := float64(r.e.Jumps()) / float64(r.lanes); r.plan.Settle > 0 && jumps > 0 {
		apart = math.Max(apart, wait*float64(r.g.Addresses())*r.plan.Settle/jumps)
	}
	most := max(1, r.plan.Samples()/(least*PairSegments))
	samples := math.Min(math.Ceil(apart/r.plan.Step), float64(most))
	if !(samples >= 1) {
		return 1
	}
	return 1 << (bits.Len64(uint64(samples)) - 1)
}

// unit collects the rows.
func (r *recorder) unit(label Label) Unit {
	u := Unit{Unit: label.Unit}
	for lane := range r.lanes {
		row := TrajectoryRow{Lane: int32(lane), Start: label.Start, Engine: label.Engine, Samples: r.tl.samples}
		if lane == 0 {
			row.Jumps = int64(r.e.Jumps())
		}
		u.Trajectories = append(u.Trajectories, row)
	}
	u.Moments = r.momentRows()
	u.Autocorrelation = r.pairRows()
	u.Dirichlet = r.dirichletRows()
	if r.spatial != nil {
		u.Covariance = r.spatial.rows()
	}
	u.Transients = r.transients.rows(r.reading, r.plan.Step)
	u.Flips = r.flips.rows(r.reading, r.plan.Step)
	return u
}

// momentRows lists segments, and in each the observables.
func (r *recorder) momentRows() []MomentRow {
	var out []MomentRow
	for s := range MomentSegments {
		if r.moments.count[s] == 0 {
			continue
		}
		for o := range r.layout {
			l := &r.layout[o]
			var sums powerSums
			switch {
			case l.track >= 0:
				sums = r.moments.track(s, l.track, r.reading)
			default:
				sums = r.moments.channel(s, l.channel)
				if l.amplitude() {
					for i, v := range r.moments.channel(s, l.channel+1) {
						sums[i] += v
					}
				}
			}
			out = append(out, MomentRow{
				Segment: int32(s), Observable: l.Name, Count: r.moments.count[s],
				Sum1: sums[0], Sum2: sums[1], Sum3: sums[2], Sum4: sums[3],
			})
		}
	}
	return out
}

// pairRows lists segments, in each the pairs, in each the lags that occur.
func (r *recorder) pairRows() []AutocorrelationRow {
	var out []AutocorrelationRow
	for s := range PairSegments {
		for p, pair := range r.pairs {
			for i, lag := range r.tl.lags {
				n, sums := r.pairSums(s, i, p)
				if n == 0 {
					continue
				}
				out = append(out, AutocorrelationRow{
					Segment: int32(s), F: r.layout[pair[0]].Name, G: r.layout[pair[1]].Name,
					Lag: lag, Pairs: n, SumF: sums.f, SumG: sums.g, SumFG: sums.fg,
				})
			}
		}
	}
	return out
}

func (r *recorder) pairSums(segment, lag, p int) (int64, pairSums) {
	o := r.pairs[p][0]
	l := &r.layout[o]
	if l.track >= 0 {
		return r.correlator.trackPair(segment, lag, l.track, r.components(o))
	}
	n, sums := r.correlator.channelPair(segment, lag, r.channels[p])
	if l.amplitude() {
		_, im := r.correlator.channelPair(segment, lag, r.channels[p]+1)
		sums.f += im.f
		sums.g += im.g
		sums.fg += im.fg
	}
	return n, sums
}

// dirichletRows lists segments, and in each the pairs.
func (r *recorder) dirichletRows() []DirichletRow {
	var out []DirichletRow
	for s, n := range r.dirichlet.count {
		if n == 0 {
			continue
		}
		for p, pair := range r.pairs {
			out = append(out, DirichletRow{
				Segment: int32(s), F: r.layout[pair[0]].Name, G: r.layout[pair[1]].Name,
				Count: n, Sum: r.dirichlet.sums[s*len(r.pairs)+p],
			})
		}
	}
	return out
}
