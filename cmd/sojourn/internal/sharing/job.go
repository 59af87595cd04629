package sharing

import (
	"context"
	"fmt"
	"time"

	"sojourn/observables"
	"sojourn/observables/archive"
)

// Runner runs one unit of a point. It reports the jumps executed so far in this
// unit through progress, some ten times a second, and returns with ctx.Err()
// within a second after ctx is done. Runners of several units run at once.
type Runner func(ctx context.Context, point, unit int, progress func(jumps uint64)) (observables.Unit, error)

// Job is the work of one process on a results directory.
type Job struct {
	Dir     *archive.Dir
	Points  []Point
	Run     Runner
	Workers int // at least 1
	Share   Share
	Host    string // for receipts
	// Notify, if not nil, is told of progress: after every finished unit and
	// part, and otherwise at most ten times a second. Calls do not overlap.
	Notify func(Progress)
	// Warn, if not nil, is told of what was mended on the way. Calls do not
	// overlap.
	Warn func(message string)

	beat time.Duration // between renewals of claims, for tests; 0 means archive.Beat
}

// Progress is a state of the work. Totals are over the share of this process.
type Progress struct {
	Units, UnitsDone int     // wanted; finished by anyone, as far as was seen
	Parts, PartsDone int     // likewise
	UnitsHere        int     // finished by this process
	PartsHere        int     // likewise
	Jumps            uint64  // executed by this process, unfinished units included
	Seconds          float64 // in finished units of this process
	Done             float64 // finished share of the estimated work, 0 to 1
}

// Outcome says what a process did and what is left.
type Outcome struct {
	Progress
	Left []Left // parts of the whole study that are not finished
}

// Left is a part that is not finished.
type Left struct {
	Part
	Other  bool           // it belongs to another share
	Held   bool           // a process holds it
	Holder archive.Holder // if held
}

// Complete reports whether every part of the study is finished.
func (o Outcome) Complete() bool { return len(o.Left) == 0 }

// UnitError is a unit that failed, by its error or a recovered panic.
type UnitError struct {
	Point, Unit int // Point is the number that the Runner was given
	Key         string
	Err         error
	Stack       []byte // of a panic
}

func (e *UnitError) Error() string {
	return fmt.Sprintf("point %d (%s), unit %d: %v", e.Point, e.Key, e.Unit, e.Err)
}

func (e *UnitError) Unwrap() error { return e.Err }

// Work runs parts until every one of the share is finished or held by another
// process. After an error no unit is begun any more, but those that run are
// finished; after ctx is done they are given up. The error is the first: the
// cause of ctx (an *Interrupted), a *UnitError, or one of the directory. The
// outcome is right in any case.
func (j *Job) Work(ctx context.Context) (Outcome, error) {
	w, err := newWork(j)
	if err != nil {
		return Outcome{}, err
	}
	err = w.run(ctx)
	left, leftErr := j.left()
	if err == nil {
		err = leftErr
	}
	return Outcome{Progress: w.meter.progress(), Left: left}, err
}

// left lists the parts of the whole study that are not finished.
func (j *Job) left() ([]Left, error) {
	parts := Parts(j.Points)
	task := split(j.Points, parts, max(j.Share.Tasks, 1))
	var list []Left
	for i, p := range parts {
		done, err := partDone(j.Dir, p)
		if err != nil {
			return list, err
		}
		if done >= p.Units {
			continue
		}
		l := Left{Part: p, Other: !j.Share.whole() && task[i] != j.Share.Task}
		l.Holder, l.Held = j.Dir.Claimed(p.name())
		list = append(list, l)
	}
	return list, nil
}
