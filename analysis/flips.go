package analysis

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Switching is what the flips of an observable between two wells say of its
// relaxation time: right where the wells are so deep that C(t) does not decay
// within a span.
type Switching struct {
	OK     bool
	Reason string
	Level  float64 // hysteresis: a flip leads from beyond +Level to beyond -Level, or back
	Flips  int64
	Time   float64 // of all trajectories
	// Tau is Time/(2 Flips): a two-state process that flips at rate r has
	// C(t) = exp(-2 r t) (common practice). Not OK when there was no flip.
	Tau Estimate
	// Bound is the one-sided 95 % lower bound on that time; without any flip it
	// is Time/6.
	Bound Bound
}

// wellKurtosis is below what an observable without two wells shows (3 if
// Gaussian, 1.8 if uniform), and above 1, of two narrow wells: two Gaussian wells
// reach it when their width is 0.31 of their distance from zero.
const wellKurtosis = 1.5

// switching estimates the relaxation time of observable o from its flips. The
// level is the largest recorded one of at most half the root mean square, so
// that both wells lie beyond it. Counts are Poisson (distuv.ChiSquared gives the
// exact interval), widened by the spread between units where it is larger.
func switching(p *Point, o int) Switching {
	obs := &p.Observables[o]
	if len(obs.Flips) == 0 {
		return Switching{Reason: "its flips were not recorded"}
	}
	var n, s2 float64
	for _, unit := range obs.Moments {
		for _, m := range unit {
			n += float64(m.N)
			s2 += m.S2
		}
	}
	half := math.Sqrt(s2/n) / 2
	level := -1
	for k, c := range obs.Flips[0] {
		if c.Level <= half && (level < 0 || c.Level > obs.Flips[0][level].Level) {
			level = k
		}
	}
	if level < 0 || !twoWells(obs) {
		return Switching{Reason: "it does not have two wells"}
	}
	s := Switching{OK: true, Level: obs.Flips[0][level].Level}
	counts := make([]float64, len(obs.Flips))
	for u, c := range obs.Flips {
		s.Flips += c[level].N
		s.Time += c[level].Time
		counts[u] = float64(c[level].N)
	}
	spread := dispersion(counts)
	// Rates below which so few flips would be seen in 5 % of cases, and so on.
	flips := float64(s.Flips) / spread
	rate := func(count, tail float64) float64 {
		return distuv.ChiSquared{K: 2 * count}.Quantile(tail) / 2 * spread / s.Time
	}
	s.Bound = Bound{Value: 1 / (2 * rate(flips+1, 0.95)), Confidence: 0.95, OK: true}
	if s.Flips == 0 {
		s.Tau = missing(codeNoise, "there was no flip")
		return s
	}
	tau := s.Time / (2 * float64(s.Flips))
	s.Tau = Estimate{
		Value: tau, Err: tau / math.Sqrt(flips), Units: len(counts), OK: true,
		Low: 1 / (2 * rate(flips+1, 0.975)), High: 1 / (2 * rate(flips, 0.025)),
	}
	return s
}

// twoWells reports whether E f^4 / (E f^2)^2 is that of two wells. Moments are
// about zero: the mean is off it when wells were seldom changed.
func twoWells(obs *Observable) bool {
	var n, s2, s4 float64
	for _, unit := range obs.Moments {
		for _, m := range unit {
			n += float64(m.N)
			s2 += m.S2
			s4 += m.S4
		}
	}
	return s2 > 0 && s4*n/(s2*s2) < wellKurtosis
}

// dispersion is the variance of counts over their mean, at least 1; with fewer
// than 8 counts, or hardly any, 1.
func dispersion(counts []float64) float64 {
	n := float64(len(counts))
	sum, squares := 0.0, 0.0
	for _, c := range counts {
		sum += c
		squares += c * c
	}
	if n < 8 || sum < n {
		return 1
	}
	mean := sum / n
	return math.Max(1, (squares-n*mean*mean)/(n-1)/mean)
}

// switches fills in the flips, with a word where they take over from C(t).
func (res *ObservableResult) switches(p *Point, o int) {
	res.Switching = switching(p, o)
	s := &res.Switching
	if !s.OK {
		return
	}
	const enough = 20 // spans of fewer relaxation times do not show the decay
	switch {
	case !s.Tau.OK:
		res.Warnings = append(res.Warnings, warn(codeSwitching,
			"%s stayed in one of two wells: no flip in a total time of %.3g, so that its relaxation time is above %.3g (95 %%); C(t) has not decayed and does not count",
			res.Name, s.Time, s.Bound.Value))
	case p.Span < enough*s.Tau.Value:
		res.Warnings = append(res.Warnings, warn(codeSwitching,
			"%s has two wells and C(t) does not decay within a span: go by its %d flips beyond +-%.3g in a total time of %.3g, tau = T/2n = %s, 95 %% interval %.3g to %.3g",
			res.Name, s.Flips, s.Level, s.Time, withError(s.Tau.Value, s.Tau.Err), s.Tau.Low, s.Tau.High))
	}
}
