package observables

import (
	"context"
	"fmt"
	"math"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/kinetictest"
)

// tape is the components of all observables at all samples and lanes of a
// trajectory.
type tape struct {
	values [][][][]float64 // sample, lane, observable, component
	norm   []float64
}

func newTape(g *kinetic.Generator, e kinetic.Engine, obs []Observable, plan Plan) *tape {
	tp := &tape{norm: make([]float64, len(obs))}
	plain := plainAll(g, obs, levelsOf(g, e, 0))
	for k := range plan.Samples() {
		e.Advance(plan.Settle + float64(k)*plan.Step)
		sample := make([][][]float64, e.Lanes())
		for lane := range sample {
			levels := levelsOf(g, e, lane)
			for o := range obs {
				sample[lane] = append(sample[lane], plain[o].values(levels))
				tp.norm[o] = plain[o].norm
			}
		}
		tp.values = append(tp.values, sample)
	}
	return tp
}

func plainAll(g *kinetic.Generator, obs []Observable, levels [][]uint8) (out []plainly) {
	for _, o := range obs {
		out = append(out, plain(g, o, levels))
	}
	return out
}

func sum(v []float64, power int) float64 {
	s := 0.0
	for _, x := range v {
		y := x
		for range power - 1 {
			y *= x
		}
		s += y
	}
	return s
}

func product2(v, w []float64) float64 {
	s := 0.0
	for i := range v {
		s += v[i] * w[i]
	}
	return s
}

// Every row of moments and pairs equals the sum taken directly over the
// samples, in one and several lanes.
func TestRecordAgainstDirectSums(t *testing.T) {
	for name, g := range cases(t) {
		for _, lanes := range []int{1, 3, 64} {
			plan := Plan{Settle: 1.5, Span: 80, Step: 0.5}
			switch {
			case lanes == 64:
				plan.Span = 10
			case g.Cells() < 10:
				plan.Span = 320 // so that time origins are thinned twice
			}
			if lanes == 64 && g.Couplings != nil {
				continue
			}
			t.Run(fmt.Sprintf("%s/%d", name, lanes), func(t *testing.T) {
				obs := everything(t, g)
				u := record(t, newBundle(t, g, lanes, 1), g, obs, plan)
				tp := newTape(g, newBundle(t, g, lanes, 1), obs, plan)
				checkMoments(t, tp, obs, u.Moments)
				checkPairRows(t, tp, obs, u.Autocorrelation, lanes)
			})
		}
	}
}

func checkMoments(t *testing.T, tp *tape, obs []Observable, rows []MomentRow) {
	t.Helper()
	n := len(tp.values)
	i := 0
	for s := range MomentSegments {
		for o := range obs {
			var want [5]float64
			for k := range n {
				if k*MomentSegments/n != s {
					continue
				}
				for _, lane := range tp.values[k] {
					want[0]++
					for p := 1; p <= 4; p++ {
						want[p] += sum(lane[o], p) / tp.norm[o]
					}
				}
			}
			r := rows[i]
			i++
			if r.Observable != obs[o].Name || int(r.Segment) != s {
				t.Fatalf("row %d is %s, segment %d", i, r.Observable, r.Segment)
			}
			for p, got := range [5]float64{float64(r.Count), r.Sum1, r.Sum2, r.Sum3, r.Sum4} {
				if !near(got, want[p], math.Pow(want[2], float64(p)/2)) {
					t.Errorf("%s, segment %d: sum of power %d is %v, want %v", r.Observable, s, p, got, want[p])
				}
			}
		}
	}
	if i != len(rows) {
		t.Errorf("%d rows of moments, want %d", len(rows), i)
	}
}

func checkPairRows(t *testing.T, tp *tape, obs []Observable, rows []AutocorrelationRow, lanes int) {
	t.Helper()
	n := len(tp.values)
	i := 0
	for s := range PairSegments {
		for _, pair := range allPairs(obs) {
			f, g := pair[0], pair[1]
			for _, lag := range Lags(int64(n)) {
				stride := 1 // origins: every lag/32 to lag/16
				for int64(32*stride) < lag {
					stride *= 2
				}
				var want AutocorrelationRow
				for k := 0; k+int(lag) < n; k += stride {
					if k*PairSegments/n != s {
						continue
					}
					for lane := range lanes {
						a, b := tp.values[k][lane], tp.values[k+int(lag)][lane]
						want.Pairs++
						want.SumF += sum(a[f], 1) / tp.norm[f]
						want.SumG += sum(b[g], 1) / tp.norm[f]
						want.SumFG += product2(a[f], b[g]) / tp.norm[f]
						if f != g {
							want.Pairs++
							want.SumF += sum(b[f], 1)
							want.SumG += sum(a[g], 1)
							want.SumFG += product2(b[f], a[g])
						}
					}
				}
				if want.Pairs == 0 {
					continue
				}
				r := rows[i]
				i++
				if int(r.Segment) != s || r.F != obs[f].Name || r.G != obs[g].Name || r.Lag != lag || r.Pairs != want.Pairs {
					t.Fatalf("row %d is %+v, want segment %d, %s, %s, lag %d, %d pairs", i, r, s, obs[f].Name, obs[g].Name, lag, want.Pairs)
				}
				scale := math.Abs(want.SumFG) + float64(want.Pairs)
				if !near(r.SumF, want.SumF, scale) || !near(r.SumG, want.SumG, scale) || !near(r.SumFG, want.SumFG, scale) {
					t.Errorf("%s, %s, lag %d: %+v, want %+v", r.F, r.G, lag, r, want)
				}
			}
		}
	}
	if i != len(rows) {
		t.Errorf("%d rows of pairs, want %d", len(rows), i)
	}
}

// The Dirichlet form from the census equals 1/2 sum_a r_a (Delta_a f)(Delta_a g)
// over the jumps that an independent enumeration of the operators lists.
func TestDirichletAgainstJumps(t *testing.T) {
	plan := Plan{Settle: 2, Span: 4, Step: 0.5}
	for name, g := range cases(t) {
		t.Run(name, func(t *testing.T) {
			sys, err := exact.NewSystem(g.Spec)
			if err != nil {
				t.Fatal(err)
			}
			obs := everything(t, g)
			lanes := 2
			u := record(t, newBundle(t, g, lanes, 2), g, obs, plan)
			e := newBundle(t, g, lanes, 2)
			pairs := allPairs(obs)
			want := make([]float64, PairSegments*len(pairs))
			for k := range int(plan.Samples()) {
				e.Advance(plan.Settle + float64(k)*plan.Step)
				for lane := range lanes {
					for p, form := range forms(g, sys, obs, pairs, levelsOf(g, e, lane)) {
						if !g.Lattice.Periodic() && obs[pairs[p][0]].Kind == Local {
							// Taken in one lane in rotation.
							if lane != k%lanes {
								continue
							}
							form *= float64(lanes)
						}
						want[k*PairSegments/int(plan.Samples())*len(pairs)+p] += form
					}
				}
			}
			if len(u.Dirichlet) != len(want) {
				t.Fatalf("%d rows, want %d", len(u.Dirichlet), len(want))
			}
			for i, r := range u.Dirichlet {
				pair := pairs[i%len(pairs)]
				if r.Count != int64(lanes)*plan.Samples()/PairSegments || r.F != obs[pair[0]].Name {
					t.Fatalf("row %d: %+v", i, r)
				}
				if !near(r.Sum, want[i], math.Abs(want[i])) {
					t.Errorf("E(%s, %s) sums to %v, want %v", r.F, r.G, r.Sum, want[i])
				}
			}
		})
	}
}

// forms computes the Dirichlet forms of one state by making every jump.
func forms(g *kinetic.Generator, sys *exact.System, obs []Observable, pairs [][2]int, levels [][]uint8) []float64 {
	row := func(k exact.Kind) int {
		if k.Line {
			return len(g.Families) + k.Index
		}
		return k.Index
	}
	state := make([]uint8, len(sys.Instances))
	for i, inst := range sys.Instances {
		state[i] = levels[row(sys.Kinds[inst.Kind])][inst.Position]
	}
	plain := plainAll(g, obs, levels)
	values := func() (out [][]float64) {
		for _, p := range plain {
			out = append(out, p.values(levels))
		}
		return out
	}
	jump := func(m exact.Move, times int) {
		for _, c := range m.Changes {
			inst := sys.Instances[c.Instance]
			at := &levels[row(sys.Kinds[inst.Kind])][inst.Position]
			*at = uint8((int(*at) + times*int(c.Add)) % g.Levels)
		}
	}
	before := values()
	out := make([]float64, len(pairs))
	for m := range sys.Moves {
		jump(sys.Moves[m], 1)
		after := values()
		jump(sys.Moves[m], g.Levels-1)
		rate := sys.Rate(m, state)
		if g.Couplings != nil { // which the enumeration does not know; the law is heat-bath
			rate = 1 / (1 + math.Exp(-g.Spec.Beta*(before[0][0]-after[0][0])))
		}
		for p, pair := range pairs {
			f, h := pair[0], pair[1]
			for c := range before[f] {
				out[p] += rate / 2 * (after[f][c] - before[f][c]) * (after[h][c] - before[h][c]) / plain[f].norm
			}
		}
	}
	return out
}

// A cancelled context stops a unit within the settling time, and progress is
// told of jumps meanwhile.
func TestRecordStops(t *testing.T) {
	g := compile(t, kinetictest.Ising(kinetictest.Lattice(32, 32), 0.3, kinetictest.HeatBath))
	obs := everything(t, g)
	ctx, cancel := context.WithCancel(context.Background())
	calls := 0
	var last uint64
	plan := Plan{Settle: 1e9, Span: 1, Step: 1}
	_, err := Record(ctx, newBundle(t, g, 1, 1), g, obs, nil, plan, Label{}, func(jumps uint64) {
		if jumps < last || jumps-last > pieceAttempts {
			t.Errorf("jumps went from %d to %d", last, jumps)
		}
		last = jumps
		if calls++; calls == 3 {
			cancel()
		}
	})
	if err != context.Canceled || calls != 3 || last == 0 {
		t.Errorf("error %v after %d calls, %d jumps", err, calls, last)
	}
}

// Rows do not depend on the pieces in which the engine is advanced.
func TestRecordIsDeterministic(t *testing.T) {
	g := compile(t, kinetictest.Ising(opened(kinetictest.Lattice(12, 10), 1), 0.4, kinetictest.HeatBath))
	obs := everything(t, g)
	plan := Plan{Settle: 7.3, Span: 30, Step: 0.1, Covariance: "bond", Every: 1, Limit: 2}
	var units []string
	for _, piece := range []float64{1, 1e-4} {
		r, err := newRecorder(newBundle(t, g, 2, 9), g, obs, allPairs(obs), plan)
		if err != nil {
			t.Fatal(err)
		}
		r.piece *= piece
		if !r.run() {
			t.Fatal("stopped")
		}
		units = append(units, fmt.Sprintf("%+v", r.unit(Label{})))
	}
	if units[0] != units[1] {
		t.Error("units differ")
	}
}
