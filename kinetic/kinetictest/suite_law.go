package kinetictest

import (
	"math"
	"math/rand/v2"

	"sojourn/kinetic"
)

// runs is how many units stand for an ensemble.
const runs = 500

// starts checks that every start is the state, or the law, that it names.
func (h *harness) starts() {
	e := h.engine(0, kinetic.StartReference)
	for lane := range e.Lanes() {
		if got := h.state(e, lane, nil); got != 0 {
			h.Errorf("lane %d of the reference start is state %d", lane, got)
		}
	}
	spins := false
	for _, k := range h.s.Kinds {
		spins = spins || k.Order && !k.Line
	}
	for _, start := range []kinetic.Start{kinetic.StartUp, kinetic.StartDown} {
		h.aligned(start, spins)
	}
	if _, err := h.make(h.g, h.seed(), 0, "sideways"); err == nil {
		h.Error("the start sideways was accepted")
	}
}

// aligned checks a start in which all spins are equal. Some models have moves
// that turn spins only together; they may refuse.
func (h *harness) aligned(start kinetic.Start, spins bool) {
	e, err := h.make(h.g, h.seed(), 0, start)
	if err != nil {
		if _, reference := NewObvious(h.g, h.seed(), 0, start); reference == nil {
			h.Errorf("start %s: %v", start, err)
		}
		return
	}
	if !spins {
		h.Errorf("start %s was accepted without spins", start)
		return
	}
	want := uint8(0)
	if start == kinetic.StartDown {
		want = uint8(h.g.Levels / 2)
	}
	for lane := range e.Lanes() {
		levels := h.read(e, lane, nil)
		for _, k := range h.s.Kinds {
			for i := k.First; k.Order && i < k.First+k.Count; i++ {
				if levels[i] != want {
					h.Errorf("start %s: spin %d of lane %d has level %d", start, i-k.First, lane, levels[i])
				}
			}
		}
		h.state(e, lane, levels)
	}
}

// afterTime compares the states of many units with the exact law: at the random
// start, and some time after it and after the reference start. One lane of a
// unit counts, since lanes of a unit need not be independent.
func (h *harness) afterTime() {
	n := h.all.Len()
	uniform, point := make([]float64, n), make([]float64, n)
	for i := range uniform {
		uniform[i] = 1 / float64(n)
	}
	point[0] = 1
	for _, c := range []struct {
		start kinetic.Start
		law   []float64
		times []float64 // mean jumps
	}{
		{kinetic.StartRandom, uniform, []float64{0, 1, 12}},
		{kinetic.StartReference, point, []float64{1.5, 4}},
	} {
		counts := make([][]int, len(c.times))
		for k := range counts {
			counts[k] = make([]int, n)
		}
		var levels []uint8
		for unit := range runs {
			e := h.engine(unit, c.start)
			lane := unit % e.Lanes()
			for k, t := range c.times {
				if t > 0 && h.rate > 0 {
					e.Advance(t / h.rate)
				}
				levels = h.read(e, lane, levels)
				counts[k][h.state(e, lane, levels)]++
			}
		}
		law, at := c.law, 0.0
		for k, t := range c.times {
			if h.rate > 0 {
				law = h.all.Matrix().Propagate(law, (t-at)/h.rate)
			}
			at = t
			name := h.name + " states from " + string(c.start)
			if p, degrees, note := chiSquare(counts[k], law); degrees > 0 || p == 0 {
				h.v.add(name, p, "after %v mean jumps: %s", t, note)
			}
			got, want := h.byEnergy(counts[k], law)
			if p, degrees, note := chiSquare(got, want); degrees > 0 {
				h.v.add(name+", by energy", p, "after %v mean jumps: %s", t, note)
			}
		}
	}
}

// byEnergy adds up counts and probabilities of states of equal energy.
func (h *harness) byEnergy(counts []int, law []float64) ([]int, []float64) {
	index := map[float64]int{}
	var got []int
	var want []float64
	for i, e := range h.all.Energy {
		e = math.Round(e*1e6) / 1e6
		k, ok := index[e]
		if !ok {
			k = len(got)
			index[e] = k
			got, want = append(got, 0), append(want, 0)
		}
		got[k] += counts[i]
		want[k] += law[i]
	}
	return got, want
}

// longRun samples one long trajectory at equal steps. Given a sample, the law
// of the next is known, so that no mixing is assumed: transition counts from
// the states most visited are compared with the exact propagator, and products
// f(now) f(later) with their conditional means, at several lags. The latter
// fixes C(t) for every f tried.
func (h *harness) longRun() {
	const samples = 20000
	if h.rate == 0 {
		return
	}
	step := 1.5 / h.rate
	e := h.engine(1<<20, kinetic.StartRandom)
	path := make([]int, samples)
	var levels []uint8
	for k := range path {
		e.Advance(float64(k) * step)
		levels = h.read(e, 0, levels)
		path[k] = h.state(e, 0, levels)
	}
	if err := e.Audit(); err != nil {
		h.Errorf("after %d jumps: %v", e.Jumps(), err)
	}
	h.transitions(path, step)
	for _, lag := range []int{1, 3, 10} {
		h.products(path, lag, float64(lag)*step)
	}
}

func (h *harness) transitions(path []int, step float64) {
	n := h.all.Len()
	visits := make([]int, n)
	for _, i := range path[:len(path)-1] {
		visits[i]++
	}
	x, degrees := 0.0, 0
	for range 12 {
		most := 0
		for i, v := range visits {
			if v > visits[most] {
				most = i
			}
		}
		if visits[most] < 10*fewest {
			break
		}
		visits[most] = 0
		counts := make([]int, n)
		for k, i := range path[:len(path)-1] {
			if i == most {
				counts[path[k+1]]++
			}
		}
		from := make([]float64, n)
		from[most] = 1
		p, d, note := chiSquare(counts, h.all.Matrix().Propagate(from, step))
		if p == 0 {
			h.v.add(h.name+" transitions", p, "from state %d: %s", most, note)
			return
		}
		if d > 0 {
			x += chiSquareQuantile(p, d)
			degrees += d
		}
	}
	if degrees > 0 {
		h.v.add(h.name+" transitions", chiSquareTail(x, degrees), "chi-square %.1f for %d degrees of freedom", x, degrees)
	}
}

// products compares f(t) f(t+lag) with f(t) times the conditional mean of
// f(t+lag) for random functions f of the levels.
func (h *harness) products(path []int, lag int, t float64) {
	n := h.all.Len()
	r := rand.New(rand.NewPCG(uint64(lag), 11))
	f := make([]float64, n)
	weights := make([]float64, len(h.s.Instances))
	for i := range weights {
		weights[i] = r.NormFloat64()
	}
	var levels []uint8
	for i := range f {
		levels = h.all.Levels(i, levels[:0])
		for k, l := range levels {
			f[i] += weights[k] * (1 - 2*float64(l))
		}
	}
	mean, square := h.conditional(f, t)
	sum, variance := 0.0, 0.0
	for k := 0; k+lag < len(path); k += lag {
		i, j := path[k], path[k+lag]
		sum += f[i] * (f[j] - mean[i])
		variance += f[i] * f[i] * (square[i] - mean[i]*mean[i])
	}
	if variance < 1e-9 {
		return
	}
	z := sum / math.Sqrt(variance)
	h.v.add(h.name+" covariance", normal(z), "at lag %d: %.2f standard errors", lag, z)
}

// conditional returns the means of f and f^2 a time t after each state. The
// propagator is symmetric in the Gibbs scalar product, so that the mean from
// every state is the propagation of one vector.
func (h *harness) conditional(f []float64, t float64) (mean, square []float64) {
	apply := func(g func(i int) float64) []float64 {
		v := make([]float64, len(f))
		for i := range v {
			v[i] = h.all.Weight[i] * g(i)
		}
		v = h.all.Matrix().Propagate(v, t)
		for i := range v {
			v[i] /= h.all.Weight[i]
		}
		return v
	}
	return apply(func(i int) float64 { return f[i] }), apply(func(i int) float64 { return f[i] * f[i] })
}

// jumpByJump follows one trajectory in steps so small that jumps come one at a
// time (two in a step, which happens once in some hundred jumps, are passed
// over). The wait from the step after a jump to the next, times the total rate
// of the state, must be exponential; the jumps must be drawn in proportion to
// their rates. Only engines with one lane show single jumps.
func (h *harness) jumpByJump() {
	const jumps, perWait = 3000, 500
	e := h.engine(1<<21, kinetic.StartRandom)
	if e.Lanes() > 1 {
		return
	}
	m := h.all.Matrix()
	groups := h.effects()
	which := newDrift(len(groups.index))
	rates := make([]float64, len(groups.index))
	jitter := rand.New(rand.NewPCG(3, 5))
	var uniform []float64
	excess := 0.0
	levels := h.read(e, 0, nil)
	state := h.state(e, 0, levels)
	for range jumps {
		total := m.Exit[state]
		if total == 0 {
			e.Advance(e.Time() + 1e6)
			if e.Jumps() != 0 || h.state(e, 0, levels) != state {
				h.Error("a frozen state was left")
			}
			break
		}
		step := 1 / (total * perWait)
		start, before := e.Time(), e.Jumps()
		k := 0
		for ; e.Jumps() == before; k++ {
			e.Advance(start + float64(k+1)*step)
		}
		levels = h.read(e, 0, levels)
		next := h.state(e, 0, levels)
		wait := (float64(k-1) + jitter.Float64()) * step
		uniform = append(uniform, -math.Expm1(-wait*total))
		excess += wait*total - 1
		if e.Jumps() == before+1 {
			probabilities := groups.rates(h, state, rates)
			for i := range probabilities {
				probabilities[i] /= total
			}
			if g := groups.between(h, state, next); g < 0 {
				h.Fatalf("one jump led from state %d to %d, which no move does", state, next)
			} else {
				which.outcome(g, probabilities)
			}
		}
		state = next
	}
	if len(uniform) > 100 {
		p, note := kolmogorov(uniform)
		h.v.add(h.name+" waiting times", p, "%s", note)
		h.v.waits += len(uniform)
		h.v.excess += excess
	}
	if p, degrees, note := which.test(); degrees > 0 {
		h.v.add(h.name+" jumps", p, "%s", note)
	}
}

// effects groups moves that change the same levels in the same way.
type effects struct {
	index map[string]int
	of    []int // by move
}

func key(change []byte) string { return string(change) }

func (h *harness) effects() effects {
	g := effects{index: map[string]int{}}
	change := make([]byte, len(h.s.Instances))
	for _, m := range h.s.Moves {
		clear(change)
		for _, c := range m.Changes {
			change[c.Instance] = c.Add
		}
		k, ok := g.index[key(change)]
		if !ok {
			k = len(g.index)
			g.index[key(change)] = k
		}
		g.of = append(g.of, k)
	}
	return g
}

// rates fills dst with the rate of each group in a state.
func (g effects) rates(h *harness, state int, dst []float64) []float64 {
	clear(dst)
	levels := h.all.Levels(state, nil)
	for m, k := range g.of {
		dst[k] += h.s.Rate(m, levels)
	}
	return dst
}

// between returns the group that leads from one state to another, or -1.
func (g effects) between(h *harness, from, to int) int {
	a, b := h.all.Levels(from, nil), h.all.Levels(to, nil)
	q := uint8(h.g.Levels)
	for i := range b {
		b[i] = (b[i] + q - a[i]) % q
	}
	k, ok := g.index[key(b)]
	if !ok {
		return -1
	}
	return k
}
