package sharing

import (
	"context"
	"errors"
	"fmt"
	"runtime/debug"
	"slices"
	"sync"
	"time"

	"sojourn/observables"
	"sojourn/observables/archive"
)

// work is the state of a Job that runs.
type work struct {
	job   *Job
	parts []Part // of the share, in the order of work
	meter *meter

	mu       sync.Mutex // guards what follows; not held during work with files
	change   *sync.Cond
	finished []bool  // by part
	held     []*held // parts that this process holds
	queue    []int   // parts to try in this pass
	opening  bool    // a worker claims a part
	claimed  bool    // something was claimed since the pass began
	err      error   // the first

	warning sync.Mutex
}

// held is a part that this process holds. Its fields are guarded by work.mu.
type held struct {
	part  int
	claim *archive.Claim
	todo  []int // units not begun
	busy  int   // workers that run a unit, or merge the part
	lost  bool  // another process has taken it
}

func newWork(j *Job) (*work, error) {
	if j.Workers < 1 {
		panic("sharing: a job without workers")
	}
	if err := j.Share.Check(); err != nil {
		panic("sharing: " + err.Error())
	}
	all := Parts(j.Points)
	task := split(j.Points, all, max(j.Share.Tasks, 1))
	w := &work{job: j}
	w.change = sync.NewCond(&w.mu)
	for i, p := range all {
		if j.Share.whole() || task[i] == j.Share.Task {
			w.parts = append(w.parts, p)
		}
	}
	w.parts = byCost(j.Points, w.parts)
	w.finished = make([]bool, len(w.parts))
	w.meter = newMeter(j.Points, w.parts, j.Notify)
	for i, p := range w.parts {
		done, err := partDone(j.Dir, p)
		if err != nil {
			return nil, err
		}
		w.meter.found(i, done)
		if done >= p.Units {
			w.finished[i] = true
			w.meter.partDone(false)
		}
	}
	return w, nil
}

// partDone is Dir.PartDone with damage taken for nothing done.
func partDone(d *archive.Dir, p Part) (int, error) {
	done, err := d.PartDone(p.Key, p.First)
	if errors.Is(err, archive.ErrDamaged) {
		return 0, nil
	}
	return done, err
}

// run starts the workers and waits for them.
func (w *work) run(ctx context.Context) error {
	w.newPass()
	w.meter.now()
	stop := make(chan struct{})
	var beating, working sync.WaitGroup
	beating.Go(func() { w.beat(stop) })
	for range w.job.Workers {
		working.Go(func() { w.worker(ctx) })
	}
	working.Wait()
	close(stop)
	beating.Wait()
	for _, h := range w.held {
		h.claim.Release()
	}
	w.meter.now()
	return w.err
}

// newPass queues the parts that are neither finished nor held by this process.
func (w *work) newPass() {
	w.queue, w.claimed = nil, false
	for i := range w.parts {
		ours := slices.ContainsFunc(w.held, func(h *held) bool { return h.part == i })
		if !w.finished[i] && !ours {
			w.queue = append(w.queue, i)
		}
	}
}

// worker runs units until none is left for this process.
func (w *work) worker(ctx context.Context) {
	slot := w.meter.newSlot()
	for {
		h, unit := w.next(ctx)
		if h == nil {
			return
		}
		u, seconds, err := w.runUnit(ctx, h.part, unit, slot)
		if err == nil {
			err = w.job.Dir.SaveUnit(w.parts[h.part].Key, u, seconds)
		}
		w.meter.ended(slot, err == nil, seconds)
		w.mu.Lock()
		h.busy--
		w.fail(err)
		w.mu.Unlock()
		if err == nil {
			w.settle(h)
		}
		w.meter.now()
	}
}

// next returns a unit to run, or nil if there is none. One worker at a time
// claims parts; the others wait to see whether there is something for them.
func (w *work) next(ctx context.Context) (*held, int) {
	w.mu.Lock()
	defer w.mu.Unlock()
	for {
		if ctx.Err() != nil {
			w.fail(context.Cause(ctx))
		}
		if w.err != nil {
			return nil, 0
		}
		for _, h := range w.held {
			if len(h.todo) > 0 {
				unit := h.todo[0]
				h.todo = h.todo[1:]
				h.busy++
				return h, unit
			}
		}
		if w.opening {
			w.change.Wait()
			continue
		}
		if len(w.queue) == 0 && w.claimed {
			w.newPass()
		}
		if len(w.queue) == 0 {
			return nil, 0
		}
		part := w.queue[0]
		w.queue = w.queue[1:]
		w.opening = true
		w.mu.Unlock()
		err := w.open(part)
		w.mu.Lock()
		w.opening = false
		w.fail(err)
		w.change.Broadcast()
	}
}

// fail notes the first error, after which no unit is begun. It is called with
// mu held.
func (w *work) fail(err error) {
	if err == nil || w.err != nil {
		return
	}
	w.err = err
	running := 0
	for _, h := range w.held {
		running += h.busy
	}
	var signal *Interrupted
	if running > 0 && !errors.As(err, &signal) && !errors.Is(err, context.Canceled) {
		w.warn("%v; what is running (%d) is finished first", err, running)
	}
}

// runUnit runs one unit and turns a panic into an error.
func (w *work) runUnit(ctx context.Context, part, unit int, slot *slot) (u observables.Unit, seconds float64, err error) {
	p := w.job.Points[w.parts[part].Point]
	w.meter.began(slot, part)
	start := time.Now()
	defer func() {
		seconds = time.Since(start).Seconds()
		var stack []byte
		if r := recover(); r != nil {
			err, stack = fmt.Errorf("panic: %v", r), debug.Stack()
		}
		switch {
		case err == nil:
		case ctx.Err() != nil && stack == nil:
			err = context.Cause(ctx)
		default:
			err = &UnitError{Point: p.Number, Unit: unit, Key: p.Key, Err: err, Stack: stack}
		}
	}()
	u, err = w.job.Run(ctx, p.Number, unit, func(jumps uint64) { w.meter.jumps(slot, jumps) })
	if err == nil && u.Unit != unit {
		err = fmt.Errorf("what was recorded says that it is of unit %d", u.Unit)
	}
	return u, 0, err
}

// beat renews the claims until stop is closed.
func (w *work) beat(stop <-chan struct{}) {
	every := archive.Beat
	if w.job.beat > 0 {
		every = w.job.beat
	}
	tick := time.NewTicker(every)
	defer tick.Stop()
	for {
		select {
		case <-stop:
			return
		case <-tick.C:
		}
		w.mu.Lock()
		claims := slices.Clone(w.held)
		w.mu.Unlock()
		for _, h := range claims {
			// Another error is one of the file system and may pass; if it
			// lasts, the claim grows old. A claim that was given up since
			// looks lost, which does not matter any more.
			if errors.Is(h.claim.Beat(), archive.ErrLost) {
				w.lose(h)
			}
		}
	}
}

// lose gives up a part that another process has taken. Units of it that run are
// finished and kept: the taker may not have got there yet.
func (w *work) lose(h *held) {
	w.mu.Lock()
	defer w.mu.Unlock()
	if h.lost || !slices.Contains(w.held, h) {
		return
	}
	h.lost, h.todo = true, nil
	w.warn("part %s was taken over by another process, as if this one had not run for %v", w.parts[h.part].name(), archive.Stale)
}

// warn tells of something that was mended.
func (w *work) warn(format string, args ...any) {
	if w.job.Warn == nil {
		return
	}
	w.warning.Lock()
	defer w.warning.Unlock()
	w.job.Warn(fmt.Sprintf(format, args...))
}
