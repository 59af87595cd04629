package analysis

import (
	"fmt"
	"math"
)

// upDown names the half difference of starts up and down.
const upDown = "up-down"

// transient is the mean of an observable against time since one start, with and
// without each unit.
type transient struct {
	observable, start string
	times             []float64
	mean              []float64
	without           [][]float64 // unit, time
	limit             Estimate
}

// approaches analyses every recorded transient: by start, and for starts up and
// down also half the difference of the two.
func approaches(p *Point, results []ObservableResult, opt Options) []Approach {
	var out []Approach
	for i := range p.Transients {
		t := &p.Transients[i]
		for _, start := range startGroups(p) {
			out = append(out, newTransient(p, t, start, results[t.Observable].Mean).approach(opt))
		}
		if o := &p.Observables[t.Observable]; o.Kind != "magnetization" || !o.Scalar {
			continue // a complex sum has no order that jumps could preserve
		}
		up, down := newTransient(p, t, "up", Estimate{}), newTransient(p, t, "down", Estimate{})
		if len(up.without) > 0 && len(down.without) > 0 {
			out = append(out, halfDifference(up, down).approach(opt))
		}
	}
	return out
}

func newTransient(p *Point, t *Transient, start string, limit Estimate) transient {
	tr := transient{observable: p.Observables[t.Observable].Name, start: start, times: t.Times, limit: limit}
	total := make([]Moment, len(t.Times))
	var units [][]Moment
	for u, sums := range t.Sums {
		if p.Starts[u] != start {
			continue
		}
		units = append(units, sums)
		for i, m := range sums {
			total[i].add(m)
		}
	}
	for i, m := range total {
		if m.N == 0 {
			tr.times = tr.times[:i]
			break
		}
		tr.mean = append(tr.mean, m.S1/float64(m.N))
	}
	for _, sums := range units {
		row := make([]float64, len(tr.times))
		for i := range row {
			m := total[i].without(sums[i])
			row[i] = m.S1 / float64(m.N)
		}
		tr.without = append(tr.without, row)
	}
	return tr
}

// halfDifference pairs the units of the two starts in their order. Its limit is
// 0 by definition of equilibrium.
func halfDifference(up, down transient) transient {
	d := transient{observable: up.observable, start: upDown, times: up.times}
	for i := range up.mean {
		d.mean = append(d.mean, (up.mean[i]-down.mean[i])/2)
	}
	for u := range min(len(up.without), len(down.without)) {
		row := make([]float64, len(up.mean))
		for i := range row {
			row[i] = (up.without[u][i] - down.without[u][i]) / 2
		}
		d.without = append(d.without, row)
	}
	d.limit = Estimate{OK: true, Units: len(d.without)}
	return d
}

// approach measures when the mean has come within epsilon of its limit and the
// time of the last exponential decay that is seen.
func (t transient) approach(opt Options) Approach {
	a := Approach{Observable: t.observable, Start: t.start, Times: t.times, Mean: t.mean, Limit: t.limit, Epsilon: opt.Epsilon}
	absent := func(code, reason string) Approach {
		a.Time, a.Tau = missing(code, reason), missing(code, reason)
		return a
	}
	a.Err = make([]float64, len(t.mean))
	if len(t.without) < 2 || len(t.mean) < 2 {
		return absent(codeFewUnits, "fewer than two units of this start")
	}
	column := make([]float64, len(t.without))
	for i := range a.Err {
		for u, row := range t.without {
			column[u] = row[i]
		}
		a.Err[i] = jackknife(column)
	}
	switch {
	case !t.limit.OK:
		return absent(t.limit.Code, "there is no equilibrium mean to compare with: "+t.limit.Reason)
	case len(t.without) < fewestBlocks:
		return absent(codeFewUnits, fmt.Sprintf("only %d units of this start, at least %d are needed", len(t.without), fewestBlocks))
	case math.Abs(t.mean[0]-t.limit.Value) <= 5*math.Hypot(a.Err[0], t.limit.Err) || t.mean[0] == t.limit.Value:
		return absent(codeNotMeaningful, "the mean starts where it ends")
	}
	a.Time = t.within(opt.Epsilon, a.Err)
	if !a.Time.OK {
		a.Warnings = append(a.Warnings, warn(a.Time.Code, "no time to equilibrium: %s", a.Time.Reason))
	}
	var logs []float64
	a.Tau, logs = t.lastDecay(a.Err)
	if t.start == upDown {
		var extrapolated bool
		if a.Coupling, extrapolated = t.coupling(a.Err, a.Tau, logs); extrapolated {
			a.Warnings = append(a.Warnings, warn(codeExtrapolated, "the coupling time %.4g is extrapolated with the last decay seen", a.Coupling.Value))
		}
	}
	return a
}

// within is when |mean - limit| first falls to epsilon times its first value. The
// distance is made monotone first, which keeps single noisy times from deciding,
// and its logarithm is linear between times.
func (t transient) within(epsilon float64, se []float64) Estimate {
	first := math.Abs(t.mean[0] - t.limit.Value)
	weights := make([]float64, len(se))
	for i, x := range se {
		weights[i] = 1 / math.Max(x*x, 1e-6*first*first)
	}
	of := func(mean []float64) (float64, bool) {
		sign := math.Copysign(1, mean[0]-t.limit.Value)
		distance := make([]float64, len(mean))
		for i := range mean {
			distance[i] = sign * (mean[i] - t.limit.Value)
		}
		decreasing(distance, weights)
		goal := epsilon * distance[0]
		for i := 1; i < len(mean); i++ {
			if distance[i] > goal {
				continue
			}
			f := math.Log(distance[i-1]/goal) / math.Log(distance[i-1]/math.Max(distance[i], goal/10))
			return t.times[i-1] + f*(t.times[i]-t.times[i-1]), true
		}
		return 0, false
	}
	v, ok := of(t.mean)
	if !ok {
		return missing(codeNotReached, fmt.Sprintf("the mean stays farther than %g %% of its first distance from its limit", 100*epsilon))
	}
	resolution := math.Hypot(t.limit.Err, se[lagNear(t.times, v)])
	if resolution > epsilon*first {
		return missing(codeNoise, fmt.Sprintf("errors of the mean are %.2g %% of its first distance, above %g %%", 100*resolution/first, 100*epsilon))
	}
	for i := range t.mean {
		if t.times[i] > v && math.Abs(t.mean[i]-t.limit.Value) > epsilon*first+3*math.Hypot(se[i], t.limit.Err) {
			return missing(codeNotReached, "the mean leaves its limit again")
		}
	}
	without, ok := resampled(len(t.without), func(u int) (float64, bool) { return of(t.without[u]) })
	if !ok {
		return missing(codeNoise, "without one of the units the limit is not reached")
	}
	return symmetric(v, jackknife(without), len(t.without))
}

// decreasing replaces y by the closest decreasing sequence in weighted least
// squares: neighbours that rise are pooled (M. Ayer et al., Ann. Math. Stat. 26,
// 641 (1955)).
func decreasing(y, weights []float64) {
	type pooled struct {
		mean, weight float64
		n            int
	}
	var stack []pooled
	for i := range y {
		stack = append(stack, pooled{y[i], weights[i], 1})
		for k := len(stack); k > 1 && stack[k-1].mean > stack[k-2].mean; k = len(stack) {
			a, b := stack[k-2], stack[k-1]
			w := a.weight + b.weight
			stack = append(stack[:k-2], pooled{(a.mean*a.weight + b.mean*b.weight) / w, w, a.n + b.n})
		}
	}
	i := 0
	for _, p := range stack {
		for range p.n {
			y[i] = p.mean
			i++
		}
	}
}

// lastDecay averages exponential tails of mean - limit, as for C(t). It returns
// ln tau without each unit too.
func (t transient) lastDecay(se []float64) (Estimate, []float64) {
	sign := math.Copysign(1, t.mean[0]-t.limit.Value)
	f := &fitted{step: 1, tau: 1, total: 1}
	next := 0.0
	distance := func(mean []float64, i int) float64 { return sign * (mean[i] - t.limit.Value) }
	for i := range t.mean {
		if distance(t.mean, i) < 2*math.Hypot(se[i], t.limit.Err) {
			break
		}
		// The first value is a constant of the start, without error.
		if se[i] == 0 || t.times[i] < next*(1-1e-9) {
			continue
		}
		f.at = append(f.at, i)
		f.times = append(f.times, t.times[i])
		f.y = append(f.y, distance(t.mean, i))
		next = t.times[i] * 1.25
	}
	if len(t.without) < 16 {
		return missing(codeFewUnits, "fits of a decay need at least 16 units of each start"), nil
	}
	if len(f.at) < fewestFit {
		return missing(codeNoise, "fewer than 4 times of the decay stand out of noise"), nil
	}
	f.without = make([][]float64, len(t.without))
	for u, mean := range t.without {
		for _, i := range f.at {
			f.without[u] = append(f.without[u], distance(mean, i))
		}
	}
	last := f.times[len(f.times)-1]
	f.low, f.high = 0.02/last, 20/f.times[0]
	model := square(len(f.at))
	for i, a := range f.at {
		for j, b := range f.at {
			// Shape only: errors of the mean decorrelate over the decay.
			model[i][j] = se[a] * se[b] * math.Exp(-math.Abs(f.times[i]-f.times[j])/(last/3))
		}
		model[i][i] *= 1 + 1e-9
	}
	var ok bool
	if f.cov, ok = shrunkCovariance(f.without, model); !ok {
		return missing(codeNoise, "the errors of the mean are degenerate"), nil
	}
	tl, ok := newTails(f)
	if !ok {
		return missing(codeNoise, "the errors of the mean are degenerate"), nil
	}
	ln, se2, logs, ok := tl.estimate()
	if !ok {
		return missing(codeNoise, "no decay can be fitted"), nil
	}
	if se2 > noisyLog {
		return missing(codeNoise, "its error would exceed the value"), nil
	}
	return logarithmic(ln, se2, len(f.without)), logs
}

// coupling is when half the difference of the two total magnetisations falls to
// 1/4. Where the jumps preserve order (an attractive model), trajectories from
// all-up and all-down can be coupled so that half the difference is the mean
// number of sites on which they disagree; at time t the distance in total
// variation from equilibrium, from any start, is at most that number (D. A.
// Levin, Y. Peres, E. L. Wilmer, Markov Chains and Mixing Times, corollary 5.5):
// an upper bound of the mixing time. Where the difference is lost in noise
// before, it is extrapolated from the last time at which it is ten standard
// errors large, with the last decay seen.
func (t transient) coupling(se []float64, tau Estimate, logs []float64) (e Estimate, extrapolated bool) {
	const goal, clear = mixingDistance, 10
	from := 0
	for from+1 < len(t.mean) && t.mean[from+1] > math.Max(goal, clear*se[from+1]) {
		from++
	}
	if from+1 == len(t.mean) {
		return missing(codeNotReached, "half the difference does not fall to 1/4 within the recorded time"), false
	}
	if t.mean[from] <= clear*se[from] || !tau.OK {
		return missing(codeNoise, "half the difference is lost in noise before it falls to 1/4"), false
	}
	at := func(mean, ln float64) float64 { return t.times[from] + math.Exp(ln)*math.Log(mean/goal) }
	without, ok := resampled(len(t.without), func(u int) (float64, bool) {
		return at(t.without[u][from], logs[u]), t.without[u][from] > 0
	})
	if !ok {
		return missing(codeNoise, "half the difference is lost in noise without one of the units"), false
	}
	return symmetric(at(t.mean[from], math.Log(tau.Value)), jackknife(without), len(without)), t.mean[from+1] > goal
}
