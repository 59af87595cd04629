package analysis

import (
	"fmt"
	"math"
)

// Settings of the plateau.
const (
	plateauLags   = 3.0 // longest t, in relaxation times
	plateauRatio  = 1.5 // between successive t
	plateauFewest = 3   // points
	cutPrice      = 1.0 // added to chi^2 per point cut away
	closeRates    = 0.5 // of the next time to the slowest
	barelySeen    = 0.2 // largest share of any observable
	// boundTail is half of what a one-sided 95 % bound would need: noise raises
	// the largest of several eigenvalues, and with 0.05 the bounds exceed the
	// truth in up to 6 % of data sets.
	boundTail = 0.025
)

// slowMode solves
//
//	C(t) v = mu C(t/2) v,   tau(t) = -(t/2)/ln mu,
//
// for the largest mu at increasing t (M. Luscher, U. Wolff, Nucl. Phys. B 339,
// 222 (1990), eqs. 2.12, 2.13; with t0 = t/2 the corrections fall with the first
// level outside the basis: B. Blossier et al., JHEP 04 (2009) 094, eq. 2.17).
// tau(t) is at most the slowest time (F. Noe, F. Nuske, Multiscale Model.
// Simul. 11, 635 (2013), theorem 3.2), up to noise. It is averaged over
// plateaus: constants fitted from each first t on, weighed by
// exp[-(chi^2 + points cut away)/2].
func slowMode(p *Point, states []integrated, results []ObservableResult, pools func(int) *pool) SlowMode {
	var m SlowMode
	absent := func(code, reason string) SlowMode {
		m.Tau, m.Bound = missing(code, reason), noBound(code, reason)
		m.Rayleigh, m.RayleighBound = missing(code, reason), noBound(code, reason)
		m.Warnings = append(m.Warnings, warn(code, "no slow mode: %s", reason))
		return m
	}
	b, dropped := newBasis(p, states, pools)
	m.Dropped = dropped
	if len(b.obs) == 0 {
		return absent(codeNoData, "no scalar observable has a relaxation time with an error")
	}
	if b.pool.blocks < fewestBlocks {
		return absent(codeFewUnits, fmt.Sprintf("only %d blocks to resample, at least %d are needed", b.pool.blocks, fewestBlocks))
	}
	scale := 0.0
	for _, o := range b.obs {
		scale = math.Max(scale, states[o].tau)
		if s := results[o].Slowest; s.OK {
			scale = math.Max(scale, s.Value)
		}
	}
	mode := newMode(b, scale)
	mode.report(&m)
	if refused := allRefused(b.obs, results); refused.Code != "" && m.Tau.OK {
		// A lower bound survives short data, a value does not.
		m.Tau = missing(refused.Code, refused.Reason)
		m.Warnings = append(m.Warnings, warn(refused.Code, "no tau of the slow mode, only its bound: %s", refused.Reason))
	}
	if mode.dropped != "" {
		m.Dropped = append(m.Dropped, mode.dropped)
	}
	for _, d := range m.Dropped {
		m.Warnings = append(m.Warnings, warn(codeReduced, "left out of the slow mode: %s", d))
	}
	return m
}

// allRefused returns the first reason for which tau_int was refused if it was
// for every observable, else nothing.
func allRefused(obs []int, results []ObservableResult) Estimate {
	for _, o := range obs {
		if results[o].Integrated.OK {
			return Estimate{}
		}
	}
	return results[obs[0]].Integrated
}

// lagNear is the index of the lag closest to t.
func lagNear(times []float64, t float64) int {
	best := 0
	for i, x := range times {
		if math.Abs(x-t) < math.Abs(times[best]-t) {
			best = i
		}
	}
	return best
}

// mode is the slow mode of a basis.
type mode struct {
	b        *basis
	r        reduction
	dropped  string
	at, half []int       // lags t and t/2
	logs     []float64   // ln tau(t)
	without  [][]float64 // the same without each block
	vectors  [][]float64 // over the observables, by t

	tau, se, spread float64 // ln tau and its errors
	tauLogs         []float64
	ok              bool
	best            int // t of the plateau with most weight
}

func newMode(b *basis, scale float64) *mode {
	m := &mode{b: b}
	var ok bool
	if m.r, m.dropped, ok = b.reduce(); !ok {
		return m
	}
	m.chooseLags(scale)
	for i := range m.at {
		ln, v, ok := m.solve(b.c, i)
		if !ok {
			break
		}
		row := make([]float64, len(b.without))
		for out := range row {
			if row[out], _, ok = m.solve(b.without[out], i); !ok {
				break
			}
		}
		if !ok {
			break
		}
		m.logs = append(m.logs, ln)
		m.vectors = append(m.vectors, v)
		for out, x := range row {
			if i == 0 {
				m.without = append(m.without, nil)
			}
			m.without[out] = append(m.without[out], x)
		}
	}
	m.plateau()
	return m
}

// chooseLags takes every lag t up to plateauLags relaxation times that grows by
// plateauRatio and whose half was recorded.
func (m *mode) chooseLags(scale float64) {
	times := m.b.times
	next := 0.0
	for i := 1; i < len(times) && times[i] <= plateauLags*scale; i++ {
		if times[i] < next*(1-1e-9) {
			continue
		}
		h := lagNear(times[:i], times[i]/2)
		if h == 0 || math.Abs(times[h]-times[i]/2) > 1e-6*times[i] {
			continue
		}
		m.at, m.half = append(m.at, i), append(m.half, h)
		next = times[i] * plateauRatio
	}
}

// solve returns ln tau at point i and the mode as weights of the observables.
func (m *mode) solve(c [][][]float64, i int) (ln float64, v []float64, ok bool) {
	mu, u, ok := largestGeneralized(m.r.apply(c[m.at[i]]), m.r.apply(c[m.half[i]]))
	if !ok || mu <= 0 || mu >= 1 {
		return 0, nil, false
	}
	return math.Log(-(m.b.times[m.at[i]] - m.b.times[m.half[i]]) / math.Log(mu)), m.r.expand(u), true
}

// plateau averages constants fitted to ln tau(t) from each t on. The covariance
// of the points is shrunk towards its diagonal.
func (m *mode) plateau() {
	n := len(m.logs)
	if n == 0 {
		return
	}
	model := jackCovariance(m.without)
	for i := range model {
		for j := range model {
			if i != j {
				model[i][j] = 0
			}
		}
	}
	cov, ok := shrunkCovariance(m.without, model)
	if !ok {
		return
	}
	fits, ok := newPlateaus(cov)
	if !ok {
		return
	}
	m.tau, m.spread, m.best = fits.average(m.logs)
	m.tauLogs = make([]float64, len(m.without))
	for out, y := range m.without {
		m.tauLogs[out], _, _ = fits.average(y)
	}
	m.se = jackknife(m.tauLogs)
	m.ok = m.se < noisyLog
}

// report fills in the result.
func (m *mode) report(out *SlowMode) {
	u := len(m.b.without)
	out.Rayleigh, out.RayleighBound = m.rayleigh()
	if !m.ok {
		const reason = "no lag gives a valid eigenvalue within noise"
		out.Tau, out.Bound = missing(codeNoise, reason), noBound(codeNoise, reason)
		out.Warnings = append(out.Warnings, warn(codeNoise, "no slow mode: %s", reason))
		return
	}
	out.Bound = Bound{Value: math.Exp(m.tau - studentT(boundTail, u-1)*math.Hypot(m.se, m.spread)), Confidence: 0.95, OK: true}
	if u < 8 {
		out.Warnings = append(out.Warnings, warn(codeFewUnits, "errors of the slow mode rest on %d blocks only", u))
	}
	m.shares(out)
	if len(m.r) == 1 || m.alone(out.Shares) {
		out.Tau = missing(codeLowerBound, "one observable alone shares in the mode, so that faster modes cannot be told apart from it: a lower bound is all it gives")
		out.Warnings = append(out.Warnings, warn(codeLowerBound, "no tau of the slow mode, only its bound: %s", out.Tau.Reason))
		return
	}
	out.Tau = logarithmic(m.tau, m.se, u)
	m.warnings(out)
}

// shares gives the squared correlation of each observable with the mode,
// (C(0) v)_i^2 / (C_ii v'C(0) v), at the first point of the best plateau.
func (m *mode) shares(out *SlowMode) {
	of := func(c [][]float64, v []float64) []float64 {
		cv := make([]float64, len(v))
		for i := range cv {
			cv[i] = dot(c[i], v)
		}
		norm := dot(v, cv)
		for i := range cv {
			cv[i] = cv[i] * cv[i] / (c[i][i] * norm)
		}
		return cv
	}
	value := of(m.b.c[0], m.vectors[m.best])
	without := make([][]float64, len(value))
	for out, w := range m.b.without {
		_, v, _ := m.solve(w, m.best)
		for i, x := range of(m.b.without[out][0], v) {
			without[i] = append(without[i], x)
		}
	}
	for i, o := range m.b.obs {
		out.Shares = append(out.Shares, Share{Name: m.b.p.Observables[o].Name, Value: value[i], Err: jackknife(without[i])})
	}
}

// warnings judges the plateau.
func (m *mode) warnings(out *SlowMode) {
	n := len(m.logs)
	if n < plateauFewest {
		out.Warnings = append(out.Warnings, warn(codePlateau, "only %d lags give a valid eigenvalue: read tau as a lower bound", n))
		return
	}
	// Does tau(t) still rise from the best plateau's start to its last third?
	from, to := m.best, m.best+2*(n-m.best)/3
	if to > from {
		diff := make([]float64, len(m.without))
		for b, y := range m.without {
			diff[b] = y[to] - y[from]
		}
		if d := m.logs[to] - m.logs[from]; d > 2*jackknife(diff) && d > 0.01 {
			out.Warnings = append(out.Warnings, warn(codePlateau, "the time still grows by %.0f %% along the plateau: read tau as a lower bound", 100*(math.Exp(d)-1)))
		}
	}
	largest := 0.0
	for _, s := range out.Shares {
		largest = math.Max(largest, s.Value)
	}
	if largest < barelySeen {
		out.Warnings = append(out.Warnings, warn(codeBarelySeen, "no observable shares more than %.0f %% of its variance with the slow mode", 100*largest))
	}
	second, se, ok := m.second()
	if ok && second+se > closeRates {
		out.Warnings = append(out.Warnings, warn(codeCloseRates, "the next time of these observables is %s of the slowest: with a third mode nearby tau is a lower bound", withError(second, se)))
	}
}

// alone reports whether all observables but one are uncorrelated with the mode
// within two standard errors, as where a symmetry forbids it.
func (m *mode) alone(shares []Share) bool {
	seen := 0
	for _, s := range shares {
		if s.Value > 2*s.Err && s.Value > 0.01 {
			seen++
		}
	}
	return seen < 2
}

// second is the second time over the first at the best plateau's start, with
// its standard error.
func (m *mode) second() (ratio, se float64, ok bool) {
	of := func(c [][][]float64) (float64, bool) {
		values, ok := generalized(m.r.apply(c[m.at[m.best]]), m.r.apply(c[m.half[m.best]]))
		n := len(values)
		if !ok || values[n-1] >= 1 || values[n-1] <= 0 {
			return 0, false
		}
		if values[n-2] <= 0 {
			return 0, true // lost in noise: very fast
		}
		return math.Log(values[n-1]) / math.Log(values[n-2]), true
	}
	if ratio, ok = of(m.b.c); !ok {
		return 0, 0, false
	}
	without, ok := resampled(len(m.b.without), func(out int) (float64, bool) { return of(m.b.without[out]) })
	if !ok {
		return 0, 0, false
	}
	return ratio, jackknife(without), true
}

// rayleigh is the largest tau of C(0) v = tau E v: the largest ratio of variance
// to Dirichlet form among linear combinations, at most 1/gap (variational
// principle).
func (m *mode) rayleigh() (Estimate, Bound) {
	absent := func(code, reason string) (Estimate, Bound) { return missing(code, reason), noBound(code, reason) }
	if m.r == nil {
		return absent(codeNoise, "the correlation matrix is degenerate")
	}
	of := func(c [][]float64, out int) (float64, bool) {
		e, ok := m.b.dirichlet(out)
		if !ok {
			return 0, false
		}
		tau, _, ok := largestGeneralized(m.r.apply(c), m.r.apply(e))
		return math.Log(tau), ok && tau > 0
	}
	if _, ok := m.b.dirichlet(all); !ok {
		return absent(codeNoData, "the Dirichlet forms were not recorded")
	}
	ln, ok := of(m.b.c[0], all)
	const reason = "the matrix of Dirichlet forms is not positive"
	if !ok {
		return absent(codeNoise, reason)
	}
	logs, ok := resampled(len(m.b.without), func(out int) (float64, bool) { return of(m.b.without[out][0], out) })
	if !ok {
		return absent(codeNoise, reason)
	}
	u := len(m.b.without)
	se := jackknife(logs)
	return logarithmic(ln, se, u), Bound{Value: math.Exp(ln - studentT(boundTail, u-1)*se), Confidence: 0.95, OK: true}
}
