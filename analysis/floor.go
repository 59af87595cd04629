package analysis

import "math"

// floorInterval is the interval of the slowest time that follows if the slowest
// mode carries at least the share floor of the variance: C(t) is that much of
// exp(-lambda_1 t) plus any non-negative sum of exponentials as fast or faster,
// and all lambda_1 are kept whose least chi^2 exceeds the best by at most the
// squared Student quantile. The lower end is lowered to that of the plateau
// average if that is lower.
//
// Everything rests on the floor: where the slowest mode carries less, the
// interval can miss it, more surely the more data there are.
type floorInterval struct {
	f       *fitted
	factor  [][]float64
	rates   []float64 // increasing
	columns [][]float64
	y       []float64
	floor   float64 // of C(0)
	solver  *nnls
	shifted []float64
	known   []float64 // profile by rate, -1 if not computed
}

func newFloorInterval(f *fitted, floor float64) (*floorInterval, bool) {
	l, ok := cholesky(f.cov)
	if !ok {
		return nil, false
	}
	v := &floorInterval{f: f, factor: l, floor: floor * f.y[0], solver: newNNLS(len(f.y))}
	v.y = append(v.y, f.y...)
	solveLower(l, v.y)
	v.shifted = make([]float64, len(v.y))
	// Fine steps where the slowest rate may lie, a fraction of its attainable
	// error; coarse ones for what is faster. A slowest time 300 tau_int long
	// cannot be told from infinity.
	fine := math.Max(0.01, 0.3*math.Sqrt(2*f.tau/f.total))
	for x := math.Log(1 / (300 * f.tau)); x < math.Log(3/f.step); {
		v.rates = append(v.rates, math.Exp(x))
		switch {
		case x < math.Log(0.1/f.tau):
			x += 0.12
		case x < math.Log(1.6/f.tau):
			x += fine
		default:
			x += 0.12
		}
	}
	for _, r := range v.rates {
		column := make([]float64, len(v.y))
		for i, t := range f.times {
			column[i] = math.Exp(-r * t)
		}
		solveLower(l, column)
		v.columns = append(v.columns, column)
		v.known = append(v.known, -1)
	}
	return v, true
}

// profile is the least chi^2 with the floor at rate number j.
func (v *floorInterval) profile(j int) float64 {
	if v.known[j] < 0 {
		for i := range v.shifted {
			v.shifted[i] = v.y[i] - v.floor*v.columns[j][i]
		}
		v.known[j] = v.solver.solve(v.columns, j, v.shifted)
	}
	return v.known[j]
}

// limits returns the range of slowest times within delta of the best chi^2.
// The profile is scanned in strides and its two crossings then bisected.
func (v *floorInterval) limits(delta float64) (low, high float64) {
	const stride = 8
	n := len(v.rates)
	best := 0
	for j := 0; j < n; j += stride {
		if v.profile(j) < v.profile(best) {
			best = j
		}
	}
	for j := max(0, best-stride); j < min(n, best+stride); j++ {
		if v.profile(j) < v.profile(best) {
			best = j
		}
	}
	limit := v.profile(best) + delta
	// The outermost strides inside, so that a dip elsewhere is not lost.
	first, last := best, best
	for j := 0; j < n; j += stride {
		if v.profile(j) <= limit {
			first, last = min(first, j), max(last, j)
		}
	}
	outside := max(0, first-stride)
	for first-outside > 1 {
		mid := (first + outside) / 2
		if v.profile(mid) <= limit {
			first = mid
		} else {
			outside = mid
		}
	}
	if outside == 0 && v.profile(0) <= limit {
		first = 0
	}
	outside = min(n-1, last+stride)
	for outside-last > 1 {
		mid := (last + outside) / 2
		if v.profile(mid) <= limit {
			last = mid
		} else {
			outside = mid
		}
	}
	high = math.Inf(1)
	if first > 0 {
		high = 1 / v.rates[first-1]
	}
	return 1 / v.rates[min(n-1, last+1)], high
}

// slowestInterval returns the interval of tau_slowest under the weight floor.
// plateau is the plateau average.
func slowestInterval(f *fitted, floor float64, plateau Estimate) Interval {
	if !plateau.OK {
		return noInterval(plateau.Code, plateau.Reason)
	}
	v, ok := newFloorInterval(f, floor)
	if !ok {
		return noInterval(codeNoise, "the autocorrelation's errors are degenerate")
	}
	t := studentT(0.025, len(f.without)-1)
	low, high := v.limits(t * t)
	low = math.Min(low, plateau.Value*math.Exp(-t*plateau.Err/plateau.Value))
	return Interval{Low: low, High: high, Confidence: 0.95, OK: true}
}
