package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"strings"
	"sync/atomic"

	"sojourn/cmd/sojourn/internal/sharing"
	"sojourn/configs"
	"sojourn/kinetic"
	"sojourn/observables"
	"sojourn/observables/archive"
)

type runJSON struct {
	Dir      string         `json:"dir"`
	Complete bool           `json:"complete"`
	Points   []runPointJSON `json:"points"`
	Left     []leftJSON     `json:"left,omitempty"`
	Fit      *fitJSON       `json:"fit,omitempty"`
}

type runPointJSON struct {
	Point        int     `json:"point"`
	Key          string  `json:"key"`
	Beta         float64 `json:"beta"`
	Length       int     `json:"length"`
	Engine       string  `json:"engine"`
	Units        int     `json:"units"`
	Trajectories int64   `json:"trajectories"`
	Jumps        int64   `json:"jumps"`
	Seconds      float64 `json:"seconds"`
}

// leftJSON is a part that the process leaves undone.
type leftJSON struct {
	Key   string `json:"key"`
	First int    `json:"first"`
	Units int    `json:"units"`
	Host  string `json:"host,omitempty"`
	PID   int    `json:"pid,omitempty"`
}

// run does what is missing of a study, and fits it once all is there.
func (c *console) run(o *options, args []string) error {
	share, err := c.shareOf(o)
	if err != nil {
		return err
	}
	study, err := configs.Load(args[0])
	if err != nil {
		return err
	}
	c.notes(study)
	room := memory()
	points, err := prepareAll(study, room)
	if err != nil {
		return err
	}
	workers, err := c.workersOf(o, points, room)
	if err != nil {
		return err
	}
	path := o.out
	if path == "" {
		path = study.Name
	}
	m, err := manifest(study, points)
	if err != nil {
		return err
	}
	if err := archive.Check(path, m, study.Source); err != nil {
		return directoryError(err)
	}
	d, err := archive.Prepare(path, m, study.Source)
	if err != nil {
		return directoryError(err)
	}
	outcome, err := c.work(o, d, points, share, workers)
	if err != nil {
		return err
	}
	return c.concludeRun(o, d, outcome)
}

// work runs what this process can get hold of.
func (c *console) work(o *options, d *archive.Dir, points []*prepared, share sharing.Share, workers int) (sharing.Outcome, error) {
	ctx, stop := sharing.Interrupt(context.Background(), os.Exit)
	defer stop()
	var latest atomic.Pointer[sharing.Progress]
	latest.Store(&sharing.Progress{})
	shown := startProgress(c.stderr, o.quiet, func() tally {
		p := latest.Load()
		return tally{done: p.UnitsDone, total: p.Units, share: p.Done, jumps: p.Jumps}
	})
	job := sharing.Job{
		Dir: d, Points: jobPoints(d, points), Workers: workers, Share: share, Host: host(),
		Run: func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
			return points[point].record(ctx, unit, o.audit, progress)
		},
		Notify: func(p sharing.Progress) { latest.Store(&p) },
		Warn:   func(message string) { shown.say("sojourn: warning: " + message) },
	}
	outcome, err := job.Work(ctx)
	shown.finish()
	var stopped *sharing.Interrupted
	var broken *sharing.UnitError
	switch {
	case errors.As(err, &stopped):
		return outcome, &failure{exitInterrupted, err}
	case errors.As(err, &broken) && broken.Stack != nil:
		fmt.Fprintf(c.stderr, "%s", broken.Stack)
	}
	return outcome, err
}

// host is the name under which this machine stands in receipts.
func host() string {
	name, err := os.Hostname()
	if err != nil {
		return ""
	}
	return name
}

// jobPoints are the points as the sharing of work sees them, numbered as in
// points.
func jobPoints(d *archive.Dir, points []*prepared) []sharing.Point {
	out := make([]sharing.Point, len(points))
	for i, q := range points {
		out[i] = sharing.Point{
			Number: i, Key: q.config.Key, Count: q.config.Trajectory.Count,
			Extent: d.Manifest().Point(q.config.Key).Extent, Cost: q.cost(),
			Stamp: archive.Receipt{Engine: q.config.Trajectory.EngineName, StreamRevision: kinetic.StreamRevision},
		}
	}
	return out
}

// record runs one unit.
func (q *prepared) record(ctx context.Context, unit int, audit bool, progress func(uint64)) (observables.Unit, error) {
	e, err := q.begin(unit)
	if err != nil {
		return observables.Unit{}, err
	}
	label := observables.Label{Unit: unit, Start: string(q.start(unit)), Engine: q.config.Trajectory.EngineName}
	u, err := observables.Record(ctx, e, q.generator, q.observables, q.config.Pairs, q.plan, label, progress)
	if err == nil && audit {
		if err = e.Audit(); err != nil {
			err = fmt.Errorf("audit: %w", err)
		}
	}
	return u, err
}

// concludeRun prints the results if every part is there, else what was done and
// what is left.
func (c *console) concludeRun(o *options, d *archive.Dir, outcome sharing.Outcome) error {
	out := runJSON{Dir: d.Path(), Complete: outcome.Complete()}
	var err error
	if out.Points, err = runPoints(d); err != nil {
		return err
	}
	for _, l := range outcome.Left {
		out.Left = append(out.Left, leftJSON{l.Key, l.First, l.Units, l.Holder.Host, l.Holder.PID})
	}
	if !out.Complete {
		if o.json {
			return c.writeJSON(out)
		}
		_, err := fmt.Fprint(c.stdout, unfinished(d, outcome))
		return err
	}
	f, err := infer(d, false)
	if err != nil {
		return err
	}
	c.keepFits(d, f)
	if o.json {
		fit := jsonOfFindings(f)
		out.Fit = &fit
		return c.writeJSON(out)
	}
	return writeReport(c.stdout, f)
}

// runPoints sums the receipts of every current point.
func runPoints(d *archive.Dir) ([]runPointJSON, error) {
	m := d.Manifest()
	out := []runPointJSON{}
	for i := range m.Points {
		p := &m.Points[i]
		if !p.Current {
			continue
		}
		receipts, err := d.Parts(p.Key)
		if err != nil {
			return nil, err
		}
		j := runPointJSON{Point: p.Number, Key: p.Key, Beta: p.Facts.Beta, Length: p.Facts.Size[0], Engine: p.Facts.Engine}
		for _, r := range receipts {
			j.Units += r.Units
			j.Trajectories += r.Trajectories
			j.Jumps += r.Jumps
			j.Seconds += r.Seconds
		}
		out = append(out, j)
	}
	return out, nil
}

// unfinished says what this process did and what it leaves to others.
func unfinished(d *archive.Dir, o sharing.Outcome) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s: %s and %s jumps done here, in %s of trajectories.\n",
		d.Path(), plural(o.UnitsHere, "unit"), count(float64(o.Jumps)), duration(o.Seconds))
	others, shares, free := 0, 0, 0
	holders := []string{}
	for _, l := range o.Left {
		switch {
		case l.Held:
			others++
			who := fmt.Sprintf("%s (process %d)", l.Holder.Host, l.Holder.PID)
			if len(holders) == 0 || holders[len(holders)-1] != who {
				holders = append(holders, who)
			}
		case l.Other:
			shares++
		default:
			free++
		}
	}
	fmt.Fprintf(&b, "%s left:\n", plural(len(o.Left), "part"))
	if others > 0 {
		fmt.Fprintf(&b, "  %d held by %s\n", others, strings.Join(holders, ", "))
	}
	if shares > 0 {
		fmt.Fprintf(&b, "  %d in other shares\n", shares)
	}
	if free > 0 {
		fmt.Fprintf(&b, "  %d held by nobody: run again\n", free)
	}
	b.WriteString("The run that finds every part done prints the results; `sojourn fit --partial` shows those so far.\n")
	return b.String()
}

// shareOf is the share of the work that this process is restricted to.
func (c *console) shareOf(o *options) (sharing.Share, error) {
	switch task, tasks := o.changed("task"), o.changed("tasks"); {
	case task != tasks:
		return sharing.Share{}, badRequest("run: --task and --tasks go together: --task K --tasks N is share K of N, from 0")
	case !task:
		share, _ := sharing.ShareFromEnvironment(c.getenv)
		return share, nil
	case o.tasks < 1:
		return sharing.Share{}, badRequest("run: --tasks %d: at least 1 share is needed", o.tasks)
	case o.task < 0 || o.task >= o.tasks:
		return sharing.Share{}, badRequest("run: --task %d of --tasks %d: shares are numbered from 0 to %d", o.task, o.tasks, o.tasks-1)
	}
	return sharing.Share{Task: o.task, Tasks: o.tasks}, nil
}

// workersOf is how many units run at a time: as asked for or as there are
// processors, but no more than fit the memory together.
func (c *console) workersOf(o *options, points []*prepared, room int64) (int, error) {
	workers := sharing.Workers(c.getenv)
	if o.changed("workers") {
		if o.workers < 1 {
			return 0, badRequest("run: --workers %d: at least 1 worker is needed", o.workers)
		}
		workers = o.workers
	}
	var largest int64
	for _, q := range points {
		largest = max(largest, q.bytes)
	}
	if fit := room / max(largest, 1); room > 0 && int64(workers) > fit {
		c.warn("only %s at a time: each needs %s of memory, and there are %s", plural(int(fit), "trajectory"), bytesOf(largest), bytesOf(room))
		workers = int(fit)
	}
	return workers, nil
}

// notes passes on what the study's author may not have meant.
func (c *console) notes(s *configs.Study) {
	for _, n := range s.Notes {
		c.warn("%s", n.Error())
	}
}
