package analysis

import "math"

// A mode that is weak and slow beside fast ones can outlast Wolff's window,
// which is chosen from tau_int alone: what it adds beyond is then a bias that no
// error shows. Where the autocorrelation is still clearly positive at the end of
// the window, the sum goes on as long as it is, and the rest is added as the
// exponential that the second half of the sum shows.

// falseTail is the probability with which noise alone makes the sum from a
// window to its double clearly positive, by Student's t. A single exponential is
// far below one standard error there. With 0.025 the outliers that false tails
// make raise the error of tau_int by up to a half where there is no slow mode.
const falseTail = 0.001

// slowTail returns the lag up to which the sum goes on, if that is beyond the
// window: from window to its double, as long as what lies between is clearly
// positive. ok is false for the ordinary case.
func (in *integrated) slowTail() (last int, ok bool) {
	if len(in.without) < 8 {
		return 0, false
	}
	last = in.win.last
	clearly := studentT(falseTail, len(in.without)-1)
	for {
		next := last
		for next < len(in.c)-1 && in.times[next] < 2*in.times[last] {
			next++
		}
		if in.times[next] < 1.5*in.times[last] {
			return last, ok
		}
		sum := func(c []float64) float64 {
			return integral(in.times, c, next) - integral(in.times, c, last)
		}
		values := make([]float64, 0, len(in.without))
		for _, c := range in.without {
			if next < len(c) {
				values = append(values, sum(c))
			}
		}
		if len(values) < len(in.without) || sum(in.c) <= clearly*jackknife(values) {
			return last, ok
		}
		last, ok = next, true
	}
}

// beyond is the integral of C past lag last, relative to C(0): of an exponential
// through C at that lag and at half its time, but with a time of at most the
// lag's, beyond which noise decides.
func beyond(times, c []float64, last int) float64 {
	half := last
	for half > 0 && times[half] > times[last]/2 {
		half--
	}
	if c[last] <= 0 {
		return 0
	}
	tau := times[last]
	if c[half] > c[last] {
		tau = math.Min(tau, (times[last]-times[half])/math.Log(c[half]/c[last]))
	}
	return c[last] / c[0] * tau
}
