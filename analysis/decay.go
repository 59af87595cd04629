package analysis

import (
	"fmt"
	"math"
)

// Thresholds of the decay in space.
const (
	noDecayRatio    = 0.5 // of the lattice: a longer fitted length is "no decay"
	smallLattice    = 6.0 // L in xi
	fewestDistances = 4
	worstFit        = 10.0 // chi^2 per degree of freedom
	seenAbove       = 3.0  // standard errors: what is smaller is noise
)

// planeSums is the covariance of plane sums along one axis, pooled.
type planeSums struct {
	units   [][]Lagged // unit, distance
	total   []Lagged
	length  int
	open    bool
	k       []float64   // covariance by distance
	without [][]float64 // the same without each unit
}

// newPlaneSums pools a plane; K(r) = [S_fg - m (S_f + S_g)]/n + m^2 + Var(m),
// with the grand mean m and its variance between units.
func newPlaneSums(p *Point, plane *Plane) planeSums {
	s := planeSums{units: plane.Sums, length: p.Size[plane.Axis], open: p.Open[plane.Axis]}
	s.pool()
	return s
}

// pool sums over units and forms the covariance with and without each.
func (s *planeSums) pool() {
	if len(s.units) == 0 {
		return
	}
	s.total = make([]Lagged, len(s.units[0]))
	for _, unit := range s.units {
		for r, v := range unit {
			s.total[r].add(v)
		}
	}
	s.k = s.covariance(all)
	for u := range s.units {
		s.without = append(s.without, s.covariance(u))
	}
}

func (s *planeSums) covariance(out int) []float64 {
	sums := make([]Lagged, len(s.total))
	copy(sums, s.total)
	if out != all {
		for r, v := range s.units[out] {
			sums[r] = Lagged{sums[r].N - v.N, sums[r].SF - v.SF, sums[r].SG - v.SG, sums[r].SFG - v.SFG}
		}
	}
	var k []float64
	if len(sums) == 0 || sums[0].N == 0 {
		return nil
	}
	mean := sums[0].SF / float64(sums[0].N)
	var ss, n float64
	for u, unit := range s.units {
		if u == out || unit[0].N == 0 {
			continue
		}
		d := unit[0].SF/float64(unit[0].N) - mean
		ss += d * d
		n++
	}
	shift := 0.0
	if n > 1 {
		shift = ss / (n * (n - 1))
	}
	for _, v := range sums {
		if v.N <= 0 {
			break
		}
		k = append(k, (v.SFG-mean*(v.SF+v.SG))/float64(v.N)+mean*mean+shift)
	}
	return k
}

// flat reports whether K falls by less than it would over half the lattice if
// xi were noDecayRatio times its length.
func (s *planeSums) flat() bool {
	half := min(s.length/2, len(s.k)-1)
	fall := math.Exp(-float64(half) / (noDecayRatio * float64(s.length)))
	if !s.open {
		x := 1 / noDecayRatio / 2
		fall = 1 / math.Cosh(x)
	}
	return s.k[half] > fall*s.k[0]
}

// errors returns the standard error at each distance.
func (s *planeSums) errors() []float64 {
	se := make([]float64, len(s.k))
	if len(s.without) < 2 {
		return se
	}
	column := make([]float64, len(s.without))
	for r := range se {
		for u, k := range s.without {
			column[u] = k[r]
		}
		se[r] = jackknife(column)
	}
	return se
}

// decay fits the plane-summed covariance with
//
//	K(r) = c [exp(-r/xi) + exp(-(L-r)/xi)]
//
// (periodic; the second term is absent on an open axis), averaged over first
// distances like tails of C(t). Plane sums have no power prefactor: by the
// transfer matrix they are sums of such terms with c >= 0.
func decay(p *Point, of string, plane *Plane) Decay {
	d := Decay{Of: of, Axis: plane.Axis}
	s := newPlaneSums(p, plane)
	absent := func(code, reason string) Decay {
		d.Xi, d.SecondMoment, d.Amplitude = missing(code, reason), missing(code, reason), missing(code, reason)
		d.Warnings = append(d.Warnings, warn(code, "no xi: %s", reason))
		return d
	}
	switch {
	case len(s.k) < fewestDistances:
		return absent(codeSmallLattice, fmt.Sprintf("only %d distances along this axis, at least %d are needed", len(s.k), fewestDistances))
	case s.k[0] <= 1e-11*s.total[0].SFG/float64(s.total[0].N):
		return absent(codeConstant, "the plane sums did not change")
	case len(s.units) < fewestBlocks:
		return absent(codeFewUnits, fmt.Sprintf("only %d units to resample, at least %d are needed (raise count)", len(s.units), fewestBlocks))
	}
	if s.flat() {
		d.NoDecay = true
		return absent(codeNoDecay, fmt.Sprintf("the covariance does not decay within the lattice (L = %d): ordered, or xi above L/2", s.length))
	}
	f, err := s.fitted()
	if err != "" {
		return absent(codeNoise, err)
	}
	d.From, d.To = f.at[0], f.at[len(f.at)-1]
	t, ok := newTails(f)
	if !ok {
		return absent(codeNoise, "the errors of the covariance are degenerate")
	}
	ln, se, logs, ok := t.estimate()
	if !ok {
		return absent(codeNoise, "no decay can be fitted")
	}
	xi := math.Exp(ln)
	if xi > noDecayRatio*float64(s.length) {
		d.NoDecay = true
		return absent(codeNoDecay, fmt.Sprintf("the covariance does not decay within the lattice (L = %d): a fit gives %.3g", s.length, xi))
	}
	if t.reduced > worstFit {
		return absent(codePoorFit, fmt.Sprintf("no range of distances follows an exponential (chi^2 %.3g per degree of freedom)", t.reduced))
	}
	if se > noisyLog {
		return absent(codeNoise, fmt.Sprintf("its standard error would be %.0f %%", 100*se))
	}
	d.Xi = logarithmic(ln, se, len(s.units))
	d.Amplitude = s.amplitude(f, xi, se, logs)
	if len(s.units) < 8 {
		d.Warnings = append(d.Warnings, warn(codeFewUnits, "errors rest on %d units only", len(s.units)))
	}
	if float64(s.length) < smallLattice*xi {
		d.Warnings = append(d.Warnings, warn(codeSmallLattice, "L = %d is %.2g xi, below %.0f: xi belongs to this lattice, not to a large one",
			s.length, float64(s.length)/xi, smallLattice))
	}
	d.SecondMoment = s.secondMoment()
	if !d.SecondMoment.OK {
		d.Warnings = append(d.Warnings, warn(d.SecondMoment.Code, "no second-moment xi: %s", d.SecondMoment.Reason))
	}
	return d
}

// fitted chooses distances, 1 to 5 and then by a ratio of 1.2 up to where K is
// lost in its error, and shrinks their covariance towards that of a Gaussian
// chain with the same K. Distance 0, where all short-ranged parts add, is taken
// only if fewer than five are left.
func (s *planeSums) fitted() (*fitted, string) {
	se := s.errors()
	limit := len(s.k) - 1
	if !s.open {
		limit = min(limit, s.length/2)
	}
	end := limit
	for r := 1; r <= limit; r++ {
		if s.k[r] < lagNoise*se[r] {
			end = min(limit, max(r, fewestDistances))
			break
		}
	}
	f := &fitted{step: 1, tau: 1, total: 1, high: 10}
	f.low = 0.1 / float64(s.length)
	if !s.open {
		f.wrap = float64(s.length)
	}
	next := 0.0
	if end >= 5 {
		next = 1
	}
	for r := 0; r <= end; r++ {
		if float64(r) >= next {
			f.at = append(f.at, r)
			f.times = append(f.times, float64(r))
			f.y = append(f.y, s.k[r])
			next = math.Max(float64(r+1), 1.2*float64(r))
		}
	}
	if len(f.at) < tailLeast {
		return nil, "too few distances"
	}
	if s.k[1] <= 2*se[1] {
		return nil, "the covariance at distance 1 is zero within two standard errors: shorter than the lattice can show"
	}
	f.without = make([][]float64, len(s.without))
	for u, k := range s.without {
		for _, r := range f.at {
			f.without[u] = append(f.without[u], k[r])
		}
	}
	cov, ok := shrunkCovariance(f.without, chainCovariance(f.at, s.k[1]/s.k[0], s.length))
	if !ok {
		return nil, "the errors of the covariance are degenerate"
	}
	f.cov = cov
	return f, ""
}

// chainCovariance is gaussianCovariance on a ring of plane sums whose
// covariance falls by the factor a per plane; only its shape matters.
func chainCovariance(at []int, a float64, length int) [][]float64 {
	a = math.Min(math.Max(a, 0.01), 0.98)
	k := func(r int) float64 {
		r = ((r % length) + length) % length
		return math.Pow(a, float64(r)) + math.Pow(a, float64(length-r))
	}
	phi := make([]float64, length)
	for d := range phi {
		for u := range length {
			phi[d] += k(u) * k(u+d)
		}
	}
	cov := square(len(at))
	for i, r := range at {
		for j, q := range at {
			diff, sum := ((r-q)%length+length)%length, (r+q)%length
			cov[i][j] = phi[diff] + phi[sum]
			if i == j {
				cov[i][j] *= 1 + 1e-6
			}
		}
	}
	return cov
}

// amplitude is c/K(0) of an exponential with length xi through the middle of the
// fitted distances. Its error includes that of xi.
func (s *planeSums) amplitude(f *fitted, xi, se float64, logs []float64) Estimate {
	r := f.at[len(f.at)/2]
	e := func(xi float64) float64 {
		e := math.Exp(-float64(r) / xi)
		if f.wrap > 0 {
			e += math.Exp(-(f.wrap - float64(r)) / xi)
		}
		return e
	}
	at := func(k []float64, xi float64) float64 { return k[r] / e(xi) / k[0] }
	c := at(s.k, xi)
	without, ok := resampled(len(s.without), func(b int) (float64, bool) {
		return at(s.without[b], math.Exp(logs[b])), true
	})
	if !ok {
		return missing(codeNoise, "it cannot be told from noise")
	}
	return symmetric(c, math.Hypot(jackknife(without), c*float64(r)/xi*math.Sqrt(math.Max(0, se*se-math.Pow(jackknife(logs), 2)))), len(f.without))
}

// secondMoment is xi_2 = sqrt(S(0)/S(k1) - 1) / (2 sin(k1/2)), k1 = 2 pi/L,
// from the structure factor along a periodic axis (F. Cooper, B. Freedman, D.
// Preston, Nucl. Phys. B 210, 210 (1982)).
func (s *planeSums) secondMoment() Estimate {
	half := s.length / 2
	switch {
	case s.open:
		return missing(codeNotMeaningful, "the structure factor needs a periodic axis")
	case s.length < 3:
		return missing(codeNotMeaningful, "the axis is too short")
	case len(s.k) <= half:
		return missing(codeNoData, "distances up to half the lattice were not recorded")
	}
	k1 := 2 * math.Pi / float64(s.length)
	ratio := func(k []float64) (q float64, ok bool) { // S(0)/S(k1) - 1
		var s0, s1 float64
		for r := range s.length {
			v := k[min(r, s.length-r)]
			s0 += v
			s1 += v * math.Cos(k1*float64(r))
		}
		return s0/s1 - 1, s1 > 0
	}
	q, ok := ratio(s.k)
	without, ok2 := resampled(len(s.without), func(b int) (float64, bool) { return ratio(s.without[b]) })
	if !ok || !ok2 || q <= seenAbove*jackknife(without) {
		return missing(codeNoise, fmt.Sprintf("S(0) does not exceed S(k1) by %g standard errors", seenAbove))
	}
	of := func(q float64) float64 { return math.Log(math.Sqrt(q) / (2 * math.Sin(k1/2))) }
	logs, ok := resampled(len(without), func(b int) (float64, bool) { return of(without[b]), without[b] > 0 })
	if !ok {
		return missing(codeNoise, "S(0) does not exceed S(k1) without one of the units")
	}
	return logarithmic(of(q), jackknife(logs), len(logs))
}
