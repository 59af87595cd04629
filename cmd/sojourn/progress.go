package main

import (
	"fmt"
	"io"
	"os"
	"strconv"
	"strings"
	"sync"
	"time"

	"github.com/vbauerster/cupwriter"
	"github.com/vbauerster/mpb/v8"
	"github.com/vbauerster/mpb/v8/decor"
)

// tally is how far a run has come, as the workers see it.
type tally struct {
	done, total int     // units
	share       float64 // of the expected work that is done, in [0, 1]
	jumps       uint64  // executed by this process since it began
}

const (
	lineEvery = 30 * time.Second       // between lines where there is no terminal
	tickEvery = 250 * time.Millisecond // between looks at the tally
	rateOver  = 10 * time.Second       // the window of the shown speed
)

// progress shows how far a run has come: a live bar on a terminal, a line every
// 30 s elsewhere, nothing if quiet.
type progress struct {
	out   io.Writer
	look  func() tally
	begin time.Time
	first tally // what was done before this process began to work
	every time.Duration

	stop chan struct{}
	wait sync.WaitGroup

	writing sync.Mutex
	live    *mpb.Progress // the bar, while there is one

	mu     sync.Mutex
	recent []mark // looks within the window of the speed
	now    tally
}

type mark struct {
	at    time.Time
	jumps uint64
}

// startProgress begins to show what look returns, on out. The caller must call
// finish before it writes to out itself.
func startProgress(out io.Writer, quiet bool, look func() tally) *progress {
	p := &progress{out: out, look: look, begin: time.Now(), first: look(), every: lineEvery, stop: make(chan struct{})}
	p.now = p.first
	if quiet {
		return p
	}
	p.wait.Add(1)
	if isTerminal(out) {
		go p.bar()
	} else {
		go p.lines()
	}
	return p
}

// say writes a line between two displays.
func (p *progress) say(line string) {
	p.writing.Lock()
	defer p.writing.Unlock()
	if p.live != nil {
		if _, err := fmt.Fprintln(p.live, line); err == nil {
			return
		}
	}
	fmt.Fprintln(p.out, line)
}

// finish stops the display and, where there was a bar, leaves a clean line.
func (p *progress) finish() {
	close(p.stop)
	p.wait.Wait()
}

// isTerminal reports whether w is a terminal of known width.
func isTerminal(w io.Writer) bool {
	f, ok := w.(*os.File)
	if !ok {
		return false
	}
	t := cupwriter.New(f, false)
	if !t.IsTerminal() {
		return false
	}
	width, _, err := t.GetTermSize()
	return err == nil && width > 0
}

func (p *progress) lines() {
	defer p.wait.Done()
	tick := time.NewTicker(tickEvery)
	defer tick.Stop()
	last := p.begin
	for {
		select {
		case <-p.stop:
			return
		case now := <-tick.C:
			p.sample(now)
			if now.Sub(last) >= p.every {
				last = now
				p.say("sojourn: " + p.sentence(now))
			}
		}
	}
}

func (p *progress) bar() {
	defer p.wait.Done()
	const whole = 1 << 20
	show := mpb.New(mpb.WithOutput(p.out), mpb.WithRefreshRate(tickEvery), mpb.WithWidth(24))
	bar := show.New(whole, mpb.BarStyle().Lbound("[").Filler("=").Tip(">").Padding(" ").Rbound("]"),
		mpb.BarRemoveOnComplete(), mpb.BarFillerClearOnAbort(),
		mpb.PrependDecorators(decor.Any(func(decor.Statistics) string { return p.units() })),
		mpb.AppendDecorators(decor.Any(func(decor.Statistics) string { return p.pace(time.Now()) })))
	p.hold(show)
	tick := time.NewTicker(tickEvery)
	defer tick.Stop()
	for {
		select {
		case <-p.stop:
			p.hold(nil)
			bar.Abort(true)
			show.Wait()
			return
		case now := <-tick.C:
			t := p.sample(now)
			bar.SetCurrent(min(int64(t.share*whole), whole-1))
		}
	}
}

func (p *progress) hold(live *mpb.Progress) {
	p.writing.Lock()
	defer p.writing.Unlock()
	p.live = live
}

// sample takes a look and keeps those within the window of the speed.
func (p *progress) sample(now time.Time) tally {
	t := p.look()
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.first.total == 0 {
		p.first = t // the first time that the work is known
	}
	p.now = t
	p.recent = append(p.recent, mark{now, t.jumps})
	for len(p.recent) > 2 && now.Sub(p.recent[0].at) > rateOver {
		p.recent = p.recent[1:]
	}
	return t
}

func (p *progress) sentence(now time.Time) string { return p.units() + ", " + p.pace(now) }

func (p *progress) units() string {
	p.mu.Lock()
	defer p.mu.Unlock()
	return fmt.Sprintf("%*d of %d units", len(strconv.Itoa(p.now.total)), p.now.done, p.now.total)
}

// pace is the speed over the last seconds and the time left at the average
// speed since the start.
func (p *progress) pace(now time.Time) string {
	p.mu.Lock()
	defer p.mu.Unlock()
	pace := "- jumps/s"
	if n := len(p.recent); n > 1 {
		first, last := p.recent[0], p.recent[n-1]
		if dt := last.at.Sub(first.at).Seconds(); dt > 0 {
			pace = strings.Replace(speed(float64(last.jumps-first.jumps)/dt), "/s", " jumps/s", 1)
		}
	}
	gone := now.Sub(p.begin).Seconds()
	if share := p.now.share - p.first.share; share > 0 && gone > 1 {
		return pace + ", " + duration(gone*(1-p.now.share)/share) + " left"
	}
	return pace
}
