package sharing

import (
	"context"
	"os"

	"sojourn/observables"
	"sojourn/observables/archive"
)

// Cost estimates the work in one unit.
type Cost struct {
	Sites   float64 // sites of the lattice
	Rate    float64 // largest total rate of one site
	Time    float64 // settle + span
	Samples float64 // samples taken of the whole lattice
	Lanes   float64 // trajectories in the unit, at least 1
}

// Extent returns how many units make a part that takes minutes: a power of two
// from 1 to 64.
func Extent(c Cost) int { panic("sharing: not written") }

// Point is one point to run.
type Point struct {
	Number int // passed to the Runner
	Key    string
	Count  int // units wanted
	Extent int // units in a part: from the directory's manifest
	Cost   Cost
	Lead   []archive.Lead  // leading columns of its tables
	Stamp  archive.Receipt // Tool, Engine and StreamRevision of its receipts
}

// Part is the units First .. First+Units-1 of a point.
type Part struct {
	Point int // index into the points
	Key   string
	First int
	Units int // as far as the count goes
}

// Runner runs one unit of a point. It reports the jumps executed so far in
// this unit through progress, about ten times a second, and returns with
// ctx.Err() within a second after ctx is done.
type Runner func(ctx context.Context, point, unit int, progress func(jumps uint64)) (observables.Unit, error)

// Share restricts a process to share Task of Tasks, from 0. The zero value is
// no restriction.
type Share struct {
	Task, Tasks int
}

// ShareFromEnvironment returns the share that the batch system's array
// variables determine, and false if they determine none.
func ShareFromEnvironment(env func(string) string) (s Share, ok bool) { panic("sharing: not written") }

// Workers returns the number of cores that this process may use.
func Workers(env func(string) string) int { panic("sharing: not written") }

// Progress is a state of the work. Totals are over the share of this process.
type Progress struct {
	Units, UnitsDone int     // wanted; finished by anyone
	Parts, PartsDone int     // likewise
	UnitsHere        int     // finished by this process
	Jumps            uint64  // executed by this process
	Done             float64 // finished share of the estimated work, 0 to 1
}

// Job is the work of one process on a results directory.
type Job struct {
	Dir     *archive.Dir
	Points  []Point
	Run     Runner
	Workers int // at least 1
	Share   Share
	// Notify, if not nil, is told of progress: after every finished unit and
	// part, and otherwise at most ten times a second. Calls do not overlap.
	Notify func(Progress)
	// Warn, if not nil, is told of what was mended on the way.
	Warn func(message string)
}

// Left is a part that this process leaves undone.
type Left struct {
	Part  Part
	Share bool   // it belongs to another share
	Host  string // who holds it, if anyone
	PID   int
}

// Outcome says what a process did.
type Outcome struct {
	Progress
	PartsHere int
	Seconds   float64 // in trajectories, summed over workers
	Left      []Left  // parts of the whole study that are not finished
}

// Complete reports whether every part of the study is finished.
func (o Outcome) Complete() bool { return len(o.Left) == 0 }

// Work runs parts until every one is finished or held by another process. The
// error is the first that stopped it: an *Interrupted, a *UnitError, or one of
// the directory.
func (j *Job) Work(ctx context.Context) (Outcome, error) { panic("sharing: not written") }

// UnitError is a unit that failed, by its error or a recovered panic.
type UnitError struct {
	Point, Unit int
	Key         string
	Err         error
}

// Interrupted is the cause of a context that a signal cancelled.
type Interrupted struct {
	Signal os.Signal
}

// Interrupt returns a context that is cancelled with an *Interrupted on the
// first SIGINT or SIGTERM. On the second, exit is called with 128 plus the
// signal's number. stop ends the watch.
func Interrupt(parent context.Context, exit func(code int)) (ctx context.Context, stop func()) {
	panic("sharing: not written")
}

func (e *UnitError) Error() string   { panic("sharing: not written") }
func (e *UnitError) Unwrap() error   { return e.Err }
func (e *Interrupted) Error() string { panic("sharing: not written") }
