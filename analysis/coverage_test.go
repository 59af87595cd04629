package analysis

import (
	"fmt"
	"math"
	"runtime"
	"strings"
	"sync"
)

// tally counts how an estimate of a known value did over many data sets.
type tally struct {
	truth            float64
	n, in68, in95    int
	missing, doubted int
	logs             []float64 // ln(estimate/truth)
	reasons          map[string]int
}

func (t *tally) add(e Estimate, doubted bool) {
	if !e.OK {
		t.missing++
		if t.reasons == nil {
			t.reasons = map[string]int{}
		}
		t.reasons[e.Code]++
		return
	}
	if doubted {
		t.doubted++
	}
	t.n++
	z := math.Abs(math.Log(e.Value/t.truth)) / (e.Err / e.Value)
	if z < studentT(0.16, e.Units-1) {
		t.in68++
	}
	if e.Low < t.truth && t.truth < e.High {
		t.in95++
	}
	t.logs = append(t.logs, math.Log(e.Value/t.truth))
}

func (t *tally) cover68() float64 { return 100 * float64(t.in68) / float64(t.n) }
func (t *tally) cover95() float64 { return 100 * float64(t.in95) / float64(t.n) }

// bias is the mean of ln(estimate/truth) in units of its standard deviation sd.
func (t *tally) bias() (b, sd float64) {
	mean, variance := meanVariance(t.logs)
	sd = math.Sqrt(variance)
	return mean / sd, sd
}

// cell is one process, number of units and span, repeated.
type cell struct {
	proc                       *process
	units                      int
	span, step                 float64 // in units of the slowest time
	repeats                    int
	declared                   bool // single = true
	seed                       uint64
	integrated, initial, model tally
	single                     tally
	slow                       tally // tail average, no error claimed
	boundAbove, bounds         int
	intervals, intervalsCover  int
	widthLow, widthHigh        []float64
	warnings                   map[string]int
}

// run repeats the inference; results do not depend on the number of
// processors.
func (c *cell) run() {
	results := make([]ObservableResult, c.repeats)
	var wg sync.WaitGroup
	work := make(chan int)
	for range runtime.GOMAXPROCS(0) {
		wg.Go(func() {
			for i := range work {
				p := c.proc.point(c.seed+uint64(i)*7919, c.units, c.span, c.step)
				p.Observables[0].Single = c.declared
				results[i] = Infer(p, Options{}).Observables[0]
			}
		})
	}
	for i := range c.repeats {
		work <- i
	}
	close(work)
	wg.Wait()
	c.integrated.truth, c.initial.truth = c.proc.tauInt(), c.proc.tauInitial()
	c.model.truth, c.slow.truth = c.proc.tauInt(), c.proc.tauSlowest()
	c.single.truth = c.proc.tauSlowest()
	c.warnings = map[string]int{}
	for _, r := range results {
		doubt := false
		for _, w := range r.Warnings {
			c.warnings[w.Code]++
			doubt = doubt || w.Code == codeShortTotal || w.Code == codeShortSpan
		}
		c.integrated.add(r.Integrated, doubt)
		c.initial.add(r.Initial, false)
		c.model.add(r.Model, false)
		c.single.add(r.Single, false)
		c.slow.add(r.Slowest, false)
		if r.SlowestBound.OK {
			c.bounds++
			if r.SlowestBound.Value > c.proc.tauSlowest() {
				c.boundAbove++
			}
		}
		if r.SlowestInterval.OK {
			c.intervals++
			if r.SlowestInterval.Low <= c.proc.tauSlowest() && c.proc.tauSlowest() <= r.SlowestInterval.High {
				c.intervalsCover++
			}
			c.widthLow = append(c.widthLow, r.SlowestInterval.Low)
			c.widthHigh = append(c.widthHigh, r.SlowestInterval.High)
		}
	}
}

// ideal is the relative error sqrt(2 tau/T) of a pure exponential.
func (c *cell) ideal() float64 { return math.Sqrt(2 / (float64(c.units) * c.span)) }

func (c *cell) row(t *tally) string {
	if t.n < 2 {
		return fmt.Sprintf("%5d none %v", t.missing, t.reasons)
	}
	b, sd := t.bias()
	return fmt.Sprintf("%5.1f %5.1f %+.2f %5.2f  miss %d doubt %d", t.cover68(), t.cover95(), b, sd/c.ideal(), t.missing, t.doubted)
}

func (c *cell) String() string {
	var s strings.Builder
	fmt.Fprintf(&s, "%-9s M=%-2d T=%-4g step=%g\n", c.proc.name, c.units, c.span, c.step)
	fmt.Fprintf(&s, "   tau_int     %s\n", c.row(&c.integrated))
	fmt.Fprintf(&s, "   tau_initial %s\n", c.row(&c.initial))
	if c.model.n > 0 {
		fmt.Fprintf(&s, "   model       %s\n", c.row(&c.model))
	}
	if c.single.n > 0 {
		fmt.Fprintf(&s, "   single      %s\n", c.row(&c.single))
	}
	fmt.Fprintf(&s, "   tail        %s\n", c.row(&c.slow))
	fmt.Fprintf(&s, "   bound above truth %.1f %% of %d; interval covers %.1f %% of %d, median [%.2f, %.2f]\n",
		100*float64(c.boundAbove)/float64(max(1, c.bounds)), c.bounds,
		100*float64(c.intervalsCover)/float64(max(1, c.intervals)), c.intervals,
		quantile(c.widthLow, .5), quantile(c.widthHigh, .5))
	return s.String()
}
