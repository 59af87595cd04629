package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math/big"
	"os"
	"runtime/debug"

	"sojourn/cmd/sojourn/internal/sharing"
	"sojourn/configs"
	"sojourn/kinetic/exact"
	"sojourn/observables"
)

// Limits of the verb exact.
const (
	// listed is the largest number of states, or of orbits of them, that are
	// listed: some minutes and 2 GB.
	listed = 1 << 20
	// diagonalised is the largest number of states whose full spectrum is
	// computed: a second.
	diagonalised = 1 << 9
	// told is the number of states from which progress is told.
	told = 1 << 14
	// solved bounds the terms of an average over positions that are solved one
	// by one, times the states.
	solved = 1 << 23
	// shownLevels is how many of the lowest distinct eigenvalues are reported.
	shownLevels = 4
	// shownClasses is how many closed classes are reported one by one.
	shownClasses = 16
)

// exact computes without sampling what run and fit estimate.
func (c *console) exact(o *options, args []string) error {
	study, err := configs.Load(args[0])
	if err != nil {
		return err
	}
	c.notes(study)
	points, err := prepareAll(study, memory())
	if err != nil {
		return err
	}
	var faults []error
	routes := make([]*route, len(points))
	for i, q := range points {
		if routes[i], err = q.route(listed); err != nil {
			faults = append(faults, fmt.Errorf("%s: %w", pointText(q.config), err))
		}
	}
	if len(faults) > 0 {
		return &failure{exitBadRequest, errors.Join(faults...)}
	}
	out := exactJSON{Points: make([]exactPointJSON, len(points))}
	err = untilSignal(func(ctx context.Context) error {
		for i, q := range points {
			say := func(format string, a ...any) {
				if !o.quiet && routes[i].long() && ctx.Err() == nil {
					fmt.Fprintf(c.stderr, "point %d of %d, %s: %s\n", i+1, len(points), pointText(q.config), fmt.Sprintf(format, a...))
				}
			}
			if out.Points[i], err = q.solve(routes[i], say); err != nil {
				return fmt.Errorf("%s: %w", pointText(q.config), err)
			}
			out.Points[i].Point = i
		}
		return nil
	})
	if err != nil {
		return err
	}
	if o.json {
		return c.writeJSON(out)
	}
	_, err = io.WriteString(c.stdout, exactText(study, points, &out))
	return err
}

// untilSignal does work that keeps nothing until a signal comes; the work is
// then left to end with the process.
func untilSignal(work func(ctx context.Context) error) error {
	ctx, stop := sharing.Interrupt(context.Background(), os.Exit)
	defer stop()
	done := make(chan error, 1)
	go func() {
		defer func() {
			if p := recover(); p != nil {
				done <- fmt.Errorf("a defect of sojourn itself, please report it: %v\n%s", p, debug.Stack())
			}
		}()
		done <- work(ctx)
	}()
	select {
	case err := <-done:
		return err
	case <-ctx.Done():
		var stopped *sharing.Interrupted
		if errors.As(context.Cause(ctx), &stopped) {
			return &failure{exitInterrupted, fmt.Errorf("stopped by a signal (%v); nothing was kept", stopped.Signal)}
		}
		return context.Cause(ctx)
	}
}

// route is how the exact values of a point are reached.
type route struct {
	system *exact.System
	total  *big.Int // states that the moves connect
	limit  int
	sector bool // by symmetry, observable by observable
}

func (r *route) long() bool { return r.total.Cmp(big.NewInt(told)) > 0 }

// route finds the way to the exact values of a point, or says why there is none
// within limit states. It does nothing that takes long.
func (q *prepared) route(limit int) (*route, error) {
	if q.sites() > enumerated {
		return nil, fmt.Errorf("%s are too many to enumerate their states; exact values need at most %d of them: use a smaller lattice", plural(q.sites(), "site"), limit)
	}
	system, err := exact.NewSystem(q.generator.Spec)
	if err != nil {
		return nil, err
	}
	r := &route{system: system, total: system.OrbitSize(), limit: limit}
	if r.total.Cmp(big.NewInt(int64(limit))) <= 0 {
		return r, nil
	}
	if system.Frozen() {
		// Frozen jumps may leave few states.
		_, err := system.Explore(limit)
		if err == nil {
			return r, nil
		}
		return nil, tooMany(err)
	}
	r.sector = true
	for _, o := range q.observables {
		x, err := exactObservable(system, o)
		if err != nil {
			return nil, err
		}
		if n, err := system.SectorSize(x); err == nil && n.Cmp(big.NewInt(int64(limit))) <= 0 {
			return r, nil
		}
	}
	return nil, tooMany(&exact.TooManyStatesError{Limit: limit, Total: r.total})
}

// tooMany says what would do instead.
func tooMany(err error) error {
	var many *exact.TooManyStatesError
	if !errors.As(err, &many) {
		return err
	}
	return fmt.Errorf("%w; use a smaller lattice, or `sojourn run` to sample", err)
}

// exactly computes the exact values of a point.
func (q *prepared) exactly() (exactPointJSON, error) {
	r, err := q.route(listed)
	if err != nil {
		return exactPointJSON{}, err
	}
	return q.solve(r, func(string, ...any) {})
}

// exactObservable is a recorded observable as a function of enumerated states.
func exactObservable(s *exact.System, o observables.Observable) (exact.Observable, error) {
	switch o.Kind {
	case observables.Energy:
		return s.Energy(), nil
	case observables.Magnetization:
		return s.Magnetization()
	case observables.Terms:
		return s.Terms(o.Families...)
	case observables.Local:
		return s.Local(o.Families...)
	case observables.Fourier:
		return s.Fourier(o.Wavevector, o.Families...)
	case observables.Operator:
		return s.Line(o.Line)
	}
	return exact.Observable{}, fmt.Errorf("no exact values for observables of kind %s", o.Kind)
}
