package analysis

import "math"

// fitted is the part of an autocorrelation that models are fitted to: about ten
// lags spread geometrically, with a covariance matrix.
type fitted struct {
	at      []int // indices of the lags
	times   []float64
	y       []float64
	without [][]float64 // block, lag
	cov     [][]float64
	low     float64 // range of rates that fits search
	high    float64
	wrap    float64 // length of the ring for covariances in space, 0 in time
	tau     float64 // tau_int, the scale of everything
	step    float64
	total   float64 // time of all trajectories
}

// Lags of fits: 0, the step, then by this ratio, to the first C below 1.5
// standard errors or 2.5 tau_int, whichever is later, but at most 10 tau_int.
const (
	lagRatio  = 1.5
	lagNoise  = 1.5
	lagLeast  = 2.5
	lagMost   = 10
	fewestFit = 4 // lags
)

// chooseLags picks the lags of fits.
func chooseLags(times, c, se []float64, tau float64) []int {
	end := len(times) - 1
	for i := 1; i < len(times); i++ {
		if times[i] >= lagLeast*tau && c[i] < lagNoise*se[i] || times[i] > lagMost*tau {
			end = i
			break
		}
	}
	at := []int{0}
	next := times[min(1, end)]
	for i := 1; i <= end; i++ {
		if times[i] >= next*(1-1e-9) {
			at = append(at, i)
			next = times[i] * lagRatio
		}
	}
	return at
}

// newFitted gathers what fits need, or returns false if there are too few lags.
func newFitted(in *integrated) (f fitted, ok bool) {
	u := len(in.without)
	n := len(in.c)
	for _, row := range in.without {
		n = min(n, len(row))
	}
	se := make([]float64, n)
	column := make([]float64, u)
	for i := range n {
		for b, row := range in.without {
			column[b] = row[i]
		}
		se[i] = jackknife(column)
	}
	f.at = chooseLags(in.times[:n], in.c, se, in.tau)
	if len(f.at) < fewestFit {
		return f, false
	}
	f.tau, f.step, f.total = in.tau, in.pool.p.Step, in.pool.time(in.o, all)
	f.low, f.high = 0.05/f.tau, 3/f.step
	for _, i := range f.at {
		f.times = append(f.times, in.times[i])
		f.y = append(f.y, in.c[i])
	}
	f.without = make([][]float64, u)
	for b, row := range in.without {
		for _, i := range f.at {
			f.without[b] = append(f.without[b], row[i])
		}
	}
	f.cov, ok = f.covariance(se)
	return f, ok
}

// covariance shrinks the delete-one covariance towards the Gaussian form of a
// pilot fit with one or two exponentials.
func (f *fitted) covariance(se []float64) ([][]float64, bool) {
	weight := make([]float64, len(f.y))
	for i, k := range f.at {
		if se[k] <= 0 {
			// A constant of the path (the variance of a two-state process with
			// known mean): give it the error of its neighbour, or nothing.
			weight[i] = 0
			continue
		}
		weight[i] = 1 / (se[k] * se[k])
	}
	model := gaussianCovariance(f.times, f.pilot(weight), f.total)
	// Guard against exact degeneracy.
	for i := range model {
		model[i][i] *= 1 + 1e-9
	}
	return shrunkCovariance(f.without, model)
}

// pilot fits one and two exponentials with independent errors and returns the
// better by the Akaike criterion. Only the scale of the covariance depends on
// it.
func (f *fitted) pilot(weight []float64) []exponential {
	low, high := math.Log(0.25/f.tau), math.Log(3/f.step)
	const grid = 40
	rates := make([]float64, grid+1)
	for i := range rates {
		rates[i] = math.Exp(low + (high-low)*float64(i)/grid)
	}
	columns := make([][]float64, len(rates))
	for r, rate := range rates {
		columns[r] = make([]float64, len(f.y))
		for i, t := range f.times {
			columns[r][i] = math.Exp(-rate*t) * math.Sqrt(weight[i])
		}
	}
	y := make([]float64, len(f.y))
	for i := range y {
		y[i] = f.y[i] * math.Sqrt(weight[i])
	}
	yy := dot(y, y)
	best1, chi1 := exponential{}, math.Inf(1)
	best2, chi2 := [2]exponential{}, math.Inf(1)
	for a := range rates {
		aa, ay := dot(columns[a], columns[a]), dot(columns[a], y)
		if c := ay / aa; c > 0 && yy-c*ay < chi1 {
			best1, chi1 = exponential{c, rates[a]}, yy-c*ay
		}
		for b := a + 1; b < len(rates); b++ {
			ab, bb, by := dot(columns[a], columns[b]), dot(columns[b], columns[b]), dot(columns[b], y)
			det := aa*bb - ab*ab
			if det <= 1e-12*aa*bb {
				continue
			}
			ca, cb := (ay*bb-by*ab)/det, (by*aa-ay*ab)/det
			if ca > 0 && cb > 0 && yy-ca*ay-cb*by < chi2 {
				best2 = [2]exponential{{ca, rates[a]}, {cb, rates[b]}}
				chi2 = yy - ca*ay - cb*by
			}
		}
	}
	if math.IsInf(chi1, 1) {
		return []exponential{{f.y[0], 1 / f.tau}}
	}
	if chi2 < chi1-4 {
		return best2[:]
	}
	return []exponential{best1}
}
