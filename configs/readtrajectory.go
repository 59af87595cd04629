package configs

import (
	"math"
	"strconv"
)

// minSamples is the fewest samples of a span: moments come in 16 segments and
// lags reach a quarter of the span, with a few samples in each.
const minSamples = 64

// maxSteps keeps sample times apart in double precision.
const maxSteps = 1 << 52

// Default times as multiples of 1/G, G the largest rate of one bath operator.
const (
	defaultStep   = 0.25
	defaultSettle = 100
	defaultSpan   = 4000
	defaultEvery  = 10
)

// round4 rounds to four significant digits, so that default times are the same
// on machines whose exponentials differ in the last place.
func round4(x float64) float64 {
	y, err := strconv.ParseFloat(strconv.FormatFloat(x, 'g', 4, 64), 64)
	if err != nil {
		panic("configs: " + err.Error())
	}
	return y
}

// trajectory reads [trajectory] but for its times.
func (r *reading) trajectory(h *hamiltonian) Trajectory {
	v := r.section("trajectory")
	var t Trajectory
	count, _ := v.integer("count")
	t.Count = int(count)
	t.Start, _ = v.word("start")
	t.Seed, _ = v.integer("seed")
	t.Engine, _ = v.word("engine")
	if h != nil && (t.Start == "up" || t.Start == "down") {
		if _, ok := h.order(); !ok {
			v.fault("start", "%s needs spins, which this Hamiltonian has not: take reference, random or both", strconv.Quote(t.Start))
		}
	}
	return t
}

// times reads the times of [trajectory] and fills in defaults from the largest
// rate, which is 0 if it is not known: then only what the study gives is
// checked.
func (r *reading) times(t *Trajectory, rate float64) {
	v := r.section("trajectory")
	t.Settle = v.time("settle", defaultSettle, rate)
	t.Span = v.time("span", defaultSpan, rate)
	t.Step = v.time("step", defaultStep, rate)
	if math.IsNaN(t.Span) || math.IsNaN(t.Step) {
		return
	}
	key := v.blame("step", "span")
	samples := math.Round(t.Span / t.Step)
	switch {
	case t.Step > t.Span:
		v.fault(key, "the time between samples, %s, is longer than the span, %s", formatNumber(t.Step), formatNumber(t.Span))
	case samples < minSamples:
		v.fault(key, "span / step = %s / %s gives %.0f samples; at least %d are needed",
			formatNumber(t.Span), formatNumber(t.Step), samples, minSamples)
	case (t.Settle+t.Span)/t.Step > maxSteps:
		v.fault(key, "%s is too short a step for times up to %s: they could not be told apart",
			formatNumber(t.Step), formatNumber(t.Settle+t.Span))
	}
}

// time reads a time whose default is a multiple of 1/rate; NaN if it is not
// known.
func (v view) time(key string, factor, rate float64) float64 {
	if n, found := v.find(key); found {
		if n.bad {
			return math.NaN()
		}
		v.took(key, n.number)
		return n.number
	}
	if rate <= 0 {
		return math.NaN()
	}
	x := round4(factor / rate)
	if math.IsInf(x, 0) || x == 0 {
		v.need(key, "the largest rate here, "+formatNumber(rate)+", suggests no time")
		return math.NaN()
	}
	v.took(key, x)
	v.fill(key, formatNumber(x))
	return x
}

// blame chooses, of keys that do not fit together, the one to report: the first
// that is scanned, else the first that is given.
func (v view) blame(keys ...string) string {
	for _, key := range keys {
		if _, ok := v.r.scanned[v.target(key)]; ok {
			return key
		}
	}
	for _, key := range keys {
		if v.has(key) {
			return key
		}
	}
	return keys[0]
}

// covariance reads [covariance]; nil if there is none.
func (r *reading) covariance(h *hamiltonian) *Covariance {
	if r.root.get("covariance") == nil {
		if _, ok := r.scanned[target{name: "covariance", key: "every"}]; ok {
			r.section("covariance").need("of", "a scan of its times needs [covariance] with of = a family or tracked operator")
		}
		return nil
	}
	v := r.section("covariance")
	c := &Covariance{}
	limit, _ := v.integer("limit")
	c.Limit = int(limit)
	n, found := v.find("of")
	switch {
	case !found:
		v.need("of", "name a family or tracked operator")
	case n.bad:
	case h != nil:
		c.Of = n.text
		v.resolveFamily("of", n, h)
	}
	return c
}

// snapshots reads the time between snapshots.
func (r *reading) snapshots(c *Covariance, t Trajectory, rate float64) {
	v := r.section("covariance")
	c.Every = v.time("every", defaultEvery, rate)
	switch {
	case c.Every > t.Span:
		v.fault("every", "the time between snapshots, %s, is longer than the span, %s", formatNumber(c.Every), formatNumber(t.Span))
	case c.Every < t.Step:
		v.fault("every", "snapshots are taken at samples: the time between them, %s, must not be below the step, %s",
			formatNumber(c.Every), formatNumber(t.Step))
	}
}
