package main

import (
	"context"
	"math"
	"time"

	"sojourn/observables"
)

// load is what the trajectories of a point would take.
type load struct {
	jumps, seconds float64
}

// calibrate runs one trajectory for a while and extrapolates. For how long
// depends on jumps alone, so that their expected number is the same every time;
// the seconds are those of this machine at this moment, and decide nothing.
func (q *prepared) calibrate() (load, error) {
	t := &q.config.Trajectory
	rate, err := q.jumpRate()
	if err != nil {
		return load{}, err
	}
	// Record a part of the span, first a short one and then as much as takes
	// long enough to be timed.
	const enough = 50 * time.Millisecond
	short := q.plan
	short.Settle = 0
	for steps := 64.0; ; steps *= 2 {
		short.Span = math.Min(q.plan.Span, steps*t.Step)
		gone, err := q.timed(short)
		if err != nil {
			return load{}, err
		}
		if gone < enough && short.Span < q.plan.Span {
			continue
		}
		// The faster of two is less disturbed by what else the machine does.
		again, err := q.timed(short)
		if err != nil {
			return load{}, err
		}
		whole := (t.Settle + t.Span) * float64(t.Count)
		return load{jumps: rate * whole, seconds: min(gone, again).Seconds() / short.Span * whole}, nil
	}
}

// timed records the first trajectory under a plan and returns how long it took.
func (q *prepared) timed(plan observables.Plan) (time.Duration, error) {
	e, err := q.begin(0)
	if err != nil {
		return 0, err
	}
	label := observables.Label{Start: string(q.start(0)), Engine: q.config.Trajectory.EngineName}
	from := time.Now()
	_, err = observables.Record(context.Background(), e, q.generator, q.observables, q.config.Pairs, plan, label, nil)
	return time.Since(from), err
}

// jumpRate is the number of jumps per unit time at the end of a stretch that is
// long enough to leave the start behind: at least 100 000 jumps, and two on
// every site unless that takes too long.
func (q *prepared) jumpRate() (float64, error) {
	e, err := q.begin(0)
	if err != nil {
		return 0, err
	}
	t := &q.config.Trajectory
	whole := t.Settle + t.Span
	target := uint64(1e5 + math.Min(2*float64(q.sites()), 1e7))
	for at, stretch := 0.0, math.Min(t.Step, whole); ; stretch *= 2 {
		before := e.Jumps()
		stretch = math.Min(stretch, whole-at)
		at += stretch
		e.Advance(at)
		if e.Jumps() >= target || at >= whole {
			return float64(e.Jumps()-before) / stretch, nil
		}
	}
}
