package main

import (
	"errors"
	"fmt"
	"runtime"
	"strings"
	"sync"

	"sojourn/analysis"
	"sojourn/observables/archive"
)

// infer fits every current point of a results directory. Unless partial, every
// unit that the study asks for must be there. Points are read and fitted one by
// one, a few at a time; what comes out does not depend on how many.
func infer(d *archive.Dir, partial bool) (*findings, error) {
	m := d.Manifest()
	f := &findings{dir: d.Path(), title: m.Title}
	var current []*archive.Point
	for i := range m.Points {
		if m.Points[i].Current {
			current = append(current, &m.Points[i])
		}
	}
	fitted := make([]finding, len(current))
	missing := make([]int, len(current))
	faults := make([]error, len(current))
	inTurns(len(current), runtime.GOMAXPROCS(0), func(i int) {
		fitted[i], missing[i], faults[i] = inferPoint(d, current[i], partial)
	})
	if err := errors.Join(faults...); err != nil {
		return nil, err
	}
	empty := 0
	for i := range fitted {
		f.missing += missing[i]
		if fitted[i].units == 0 {
			empty++
			continue
		}
		f.points = append(f.points, fitted[i])
	}
	f.complete = f.missing == 0
	switch {
	case !f.complete && !partial:
		return nil, &failure{exitFailed, fmt.Errorf("%s: %s of the study not yet run; go on with `sojourn run`, or fit what is there with --partial", d.Path(), plural(f.missing, "unit"))}
	case len(f.points) == 0:
		return nil, &failure{exitFailed, fmt.Errorf("%s: nothing has been run yet", d.Path())}
	}
	results := make([]analysis.Result, len(f.points))
	for i := range f.points {
		results[i] = f.points[i].result
	}
	f.comparison = analysis.Compare(results)
	for i := range f.points {
		f.points[i].result = results[i]
	}
	if f.samples = overSamples(f.points); f.samples != nil {
		f.comparison.Trends = trendsOverSamples(f)
	}
	return f, nil
}

// inTurns calls do(0) .. do(n-1), at most k at a time.
func inTurns(n, k int, do func(i int)) {
	next := make(chan int)
	var wait sync.WaitGroup
	var once sync.Once
	var caught any
	for range min(n, k) {
		wait.Add(1)
		go func() {
			defer wait.Done()
			for i := range next {
				func() {
					defer func() {
						if p := recover(); p != nil {
							once.Do(func() { caught = p })
						}
					}()
					do(i)
				}()
			}
		}()
	}
	for i := range n {
		next <- i
	}
	close(next)
	wait.Wait()
	if caught != nil {
		panic(caught) // for main to report
	}
}

// inferPoint reads the units of one point and fits them. It returns how many of
// the units that the study asks for are missing.
func inferPoint(d *archive.Dir, p *archive.Point, partial bool) (finding, int, error) {
	out := finding{
		point: p.Number, key: p.Key, model: p.Facts.Model, beta: p.Facts.Beta, size: p.Facts.Size,
		start: p.Facts.Start, span: p.Facts.Span, engine: p.Facts.Engine, scan: otherScan(p.Scan),
	}
	g := newGathering(p, groupOf(p.Scan))
	receipts, err := d.Parts(p.Key)
	if err != nil {
		return out, 0, err
	}
	done := map[int]*archive.Receipt{}
	for _, r := range receipts {
		done[r.First] = r
	}
	missing := 0
	for first := 0; first < p.Count; first += p.Extent {
		wanted := min(p.Extent, p.Count-first)
		have := 0
		if r := done[first]; r != nil {
			units, err := d.ReadUnits(p.Key, first)
			if err != nil {
				return out, 0, err
			}
			for i := range units {
				if i < wanted {
					if err := g.add(&units[i]); err != nil {
						return out, 0, fmt.Errorf("%s: point %s: %w", d.Path(), p.Key, err)
					}
					have++
				}
			}
			out.seconds += r.Seconds * float64(have) / float64(max(r.Units, 1))
		}
		for unit := first + have; unit < first+wanted; unit++ {
			// Finished units of an unfinished part stand in the journal.
			u, seconds, err := d.LoadUnit(p.Key, unit)
			if !partial || errors.Is(err, archive.ErrAbsent) || errors.Is(err, archive.ErrDamaged) {
				missing++
				continue
			}
			if err == nil {
				err = g.add(&u)
			}
			if err != nil {
				return out, 0, fmt.Errorf("%s: point %s: %w", d.Path(), p.Key, err)
			}
			out.seconds += seconds
		}
	}
	out.units, out.trajectories, out.jumps = g.units, g.trajectories, g.jumps
	if g.units > 0 && (partial || missing == 0) {
		out.result = analysis.Infer(g.finish(out.seconds), analysis.Options{})
	}
	return out, missing, nil
}

// otherScan returns the scanned physical parameters that a point's heading does
// not already name. How long and how often a point was run is none.
func otherScan(scan []archive.Parameter) []setting {
	var out []setting
	for _, p := range scan {
		if furtherPhysics(p.Name) {
			out = append(out, setting{p.Name, p.Value})
		}
	}
	return out
}

// furtherPhysics reports whether a scanned parameter is a physical one other
// than beta and size.
func furtherPhysics(name string) bool {
	return name != "bath.beta" && name != "lattice.size" &&
		!strings.HasPrefix(name, "trajectory.") && !strings.HasPrefix(name, "covariance.")
}

// groupOf names what two points of a trend must share besides beta and size.
func groupOf(scan []archive.Parameter) string {
	var parts []string
	for _, p := range otherScan(scan) {
		parts = append(parts, p.name+" "+p.value)
	}
	return strings.Join(parts, ", ")
}
