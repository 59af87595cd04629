package analysis

import "math"

// logMean is the mean of C over an interval on which ln C is linear between a
// and b, (a-b)/ln(a/b). Where one of them is not positive, it is the mean of
// the two.
func logMean(a, b float64) float64 {
	if a <= 0 || b <= 0 {
		return (a + b) / 2
	}
	r := math.Log(a / b)
	if math.Abs(r) < 1e-4 {
		return (a + b) / 2 * (1 - r*r/12)
	}
	return (a - b) / r
}

// logLinearAbove is the share of C(0) above which ln C is taken linear between
// lags. Below it noise would bias the logarithmic mean downwards, and the lags
// are dense enough for the trapezoid (ratio 2^(1/8): 0.1 % of tau_int).
const logLinearAbove = 0.2

// strip is the integral of C between lag i and the next.
func strip(times, c []float64, i int) float64 {
	h := times[i+1] - times[i]
	if c[i+1] < logLinearAbove*c[0] {
		return h * (c[i] + c[i+1]) / 2
	}
	return h * logMean(c[i], c[i+1])
}

// integral sums C over the lags up to index last.
func integral(times, c []float64, last int) float64 {
	sum := 0.0
	for i := range last {
		sum += strip(times, c, i)
	}
	return sum
}

// endCorrection is what integral is too large by because ln C is convex between
// the equally spaced first lags: to second order in the step h
//
//	h^2/12 integral C (ln C)'' dt = h^2/12 [ E - s C(end) - integral s^2 C dt ],
//
// s being the slopes of -ln C and E = -C'(0) the Dirichlet form
// (Euler-Maclaurin; the trapezoid's correction h^2 E/12 is its analogue). It is
// zero if the bracket, which log-convexity makes positive, comes out negative.
func endCorrection(times, c []float64, e float64, last int) float64 {
	h := times[1] - times[0]
	bracket, slope := e, 0.0
	n := 0
	for i := range last {
		if times[i+1]-times[i] > 1.01*h || c[i+1] < logLinearAbove*c[0] {
			break
		}
		slope = math.Log(c[i]/c[i+1]) / h
		bracket -= slope * slope * h * logMean(c[i], c[i+1])
		n = i + 1
	}
	if n == 0 { // all of the decay within one step: what the tangents leave open
		low, high := firstInterval(times, c, e)
		return (high - low) / 2
	}
	if bracket -= slope * c[n]; bracket < 0 {
		return 0
	}
	// Second order overshoots when the step is long: the correction cannot
	// exceed what is left between the chord and the tangents in the first
	// interval.
	low, high := firstInterval(times, c, e)
	return min(h*h/12*bracket, high-low)
}

// firstInterval bounds the integral of C over the first step for a log-convex
// C: from above by the chord of ln C, from below by the tangent at 0 (slope
// -E/C(0)) and the chord of the next step extended back.
func firstInterval(times, c []float64, e float64) (low, high float64) {
	h := times[1] - times[0]
	high = h * logMean(c[0], c[1])
	if c[1] <= 0 || c[0] <= 0 {
		return 0, high
	}
	next := 0.0
	if len(c) > 2 && c[2] > 0 && c[2] < c[1] {
		next = math.Log(c[1]/c[2]) / (times[2] - times[1])
	}
	at := math.Log(c[0] / c[1])
	first := e / c[0]
	if first*h <= at || next*h >= at { // no room within the noise
		return high, high
	}
	// The lower lines ln C(0) - first t and ln C(h) + next (h - t) cross at t.
	t := (at - next*h) / (first - next)
	low = c[0]*(1-math.Exp(-first*t))/first + c[1]*expm1Over(next, h-t)
	return min(low, high), high
}

// expm1Over is (exp(a x) - 1)/a.
func expm1Over(a, x float64) float64 {
	if a*x < 1e-8 {
		return x
	}
	return math.Expm1(a*x) / a
}
