package analysis

import "math"

// sumFit fits y by c_1 exp(-r_1 t) + ... + c_K exp(-r_K t) in coordinates
// whitened by l, within bounds on amplitudes and rates.
type sumFit struct {
	l       [][]float64
	times   []float64
	y       []float64 // whitened
	leastC  float64
	low     float64 // of rates
	high    float64
	c, rate []float64
	chi2    float64
}

// newSumFit fits k exponentials; false if no start converges.
func newSumFit(l [][]float64, times, y []float64, k int, leastC, low, high float64) (*sumFit, bool) {
	f := &sumFit{l: l, times: times, leastC: leastC, low: low, high: high, chi2: math.Inf(1)}
	f.y = append(f.y, y...)
	solveLower(l, f.y)
	for _, start := range f.starts(k) {
		f.descend(start)
	}
	return f, !math.IsInf(f.chi2, 1)
}

// starts returns the two best sets of rates on a coarse grid.
func (f *sumFit) starts(k int) [][]float64 {
	grid := 14
	if k == 3 {
		grid = 9
	}
	columns, rates := make([][]float64, grid), make([]float64, grid)
	for i := range rates {
		rates[i] = f.low * math.Pow(f.high/f.low, (float64(i)+0.5)/float64(grid))
		columns[i] = f.column(rates[i])
	}
	best := [2][]int{}
	least := [2]float64{math.Inf(1), math.Inf(1)}
	var visit func(set []int)
	visit = func(set []int) {
		if len(set) == k {
			_, chi2 := f.amplitudes(columns, set)
			switch {
			case chi2 < least[0]:
				best[1], least[1] = best[0], least[0]
				best[0], least[0] = append([]int(nil), set...), chi2
			case chi2 < least[1]:
				best[1], least[1] = append([]int(nil), set...), chi2
			}
			return
		}
		first := 0
		if len(set) > 0 {
			first = set[len(set)-1] + 1
		}
		for i := first; i < grid; i++ {
			visit(append(set, i))
		}
	}
	visit(make([]int, 0, k))
	var out [][]float64
	for _, set := range best {
		if set == nil {
			continue
		}
		var p []float64 // ln rates, then amplitudes
		for _, i := range set {
			p = append(p, math.Log(rates[i]))
		}
		c, _ := f.amplitudes(columns, set)
		out = append(out, append(p, c...))
	}
	return out
}

func (f *sumFit) column(rate float64) []float64 {
	col := make([]float64, len(f.times))
	for i, t := range f.times {
		col[i] = math.Exp(-rate * t)
	}
	solveLower(f.l, col)
	return col
}

// amplitudes solves for the amplitudes of some columns; those that would fall
// below their bound are set to it and the others solved again.
func (f *sumFit) amplitudes(columns [][]float64, set []int) (c []float64, chi2 float64) {
	k := len(set)
	c = make([]float64, k)
	bound := make([]bool, k)
	for range k + 1 {
		var free []int
		r := append([]float64(nil), f.y...)
		for i, j := range set {
			if !bound[i] {
				free = append(free, i)
				continue
			}
			for x := range r {
				r[x] -= f.leastC * columns[j][x]
			}
		}
		a, b := square(len(free)), make([]float64, len(free))
		for i, fi := range free {
			b[i] = dot(columns[set[fi]], r)
			for j, fj := range free {
				a[i][j] = dot(columns[set[fi]], columns[set[fj]])
			}
		}
		l, ok := cholesky(a)
		if !ok {
			return c, math.Inf(1)
		}
		solveLower(l, b)
		solveUpper(l, b)
		again := false
		for i, fi := range free {
			c[fi] = b[i]
			if b[i] < f.leastC {
				bound[fi], again = true, true
			}
		}
		for i := range c {
			if bound[i] {
				c[i] = f.leastC
			}
		}
		if !again {
			for i, j := range set {
				if !bound[i] {
					for x := range r {
						r[x] -= c[i] * columns[j][x]
					}
				}
			}
			return c, dot(r, r)
		}
	}
	return c, math.Inf(1)
}

// residual returns y minus the model, and the model's derivatives by ln rates
// and amplitudes, whitened.
func (f *sumFit) residual(p []float64, derivatives bool) (r []float64, d [][]float64) {
	k := len(p) / 2
	r = append([]float64(nil), f.y...)
	for i := range k {
		rate := math.Exp(p[i])
		col := f.column(rate)
		for x := range r {
			r[x] -= p[k+i] * col[x]
		}
		if derivatives {
			dr := make([]float64, len(r))
			for x, t := range f.times {
				dr[x] = -p[k+i] * rate * t * math.Exp(-rate*t)
			}
			solveLower(f.l, dr)
			d = append(d, dr, col)
		}
	}
	if derivatives { // order: ln rates, then amplitudes
		ordered := make([][]float64, 2*k)
		for i := range k {
			ordered[i], ordered[k+i] = d[2*i], d[2*i+1]
		}
		d = ordered
	}
	return r, d
}

// clamp puts the parameters within their bounds.
func (f *sumFit) clamp(p []float64) {
	k := len(p) / 2
	for i := range k {
		p[i] = math.Min(math.Max(p[i], math.Log(f.low)), math.Log(f.high))
		p[k+i] = math.Max(p[k+i], f.leastC)
	}
}

// free lists the parameters that are not held at a bound by the gradient g of
// chi^2/2 downhill.
func (f *sumFit) free(p, g []float64) []int {
	k := len(p) / 2
	var out []int
	for i := range p {
		held := i >= k && p[i] <= f.leastC && g[i] < 0 ||
			i < k && (p[i] <= math.Log(f.low) && g[i] < 0 || p[i] >= math.Log(f.high) && g[i] > 0)
		if !held {
			out = append(out, i)
		}
	}
	return out
}

// descend runs Marquardt's method with projected steps and keeps the result if
// it is the best so far.
func (f *sumFit) descend(p []float64) {
	f.clamp(p)
	r, d := f.residual(p, true)
	chi2 := dot(r, r)
	lambda := 1e-3
	for range 40 {
		step, ok := f.step(p, r, d, lambda)
		if !ok {
			break
		}
		trial := append([]float64(nil), p...)
		for i, s := range step {
			trial[i] += s
		}
		f.clamp(trial)
		rt, dt := f.residual(trial, true)
		ct := dot(rt, rt)
		if !(ct < chi2) {
			if lambda *= 10; lambda > 1e8 {
				break
			}
			continue
		}
		done := chi2-ct < 1e-6
		p, r, d, chi2 = trial, rt, dt, ct
		lambda = math.Max(lambda/10, 1e-9)
		if done {
			break
		}
	}
	if chi2 < f.chi2 {
		k := len(p) / 2
		f.chi2, f.rate, f.c = chi2, make([]float64, k), append([]float64(nil), p[k:]...)
		for i := range k {
			f.rate[i] = math.Exp(p[i])
		}
	}
}

// step solves the damped normal equations for the free parameters.
func (f *sumFit) step(p, r []float64, d [][]float64, lambda float64) ([]float64, bool) {
	g := make([]float64, len(p))
	for i := range g {
		g[i] = dot(d[i], r)
	}
	free := f.free(p, g)
	if len(free) == 0 {
		return nil, false
	}
	a, b := square(len(free)), make([]float64, len(free))
	for i, fi := range free {
		b[i] = g[fi]
		for j, fj := range free {
			a[i][j] = dot(d[fi], d[fj])
		}
		a[i][i] *= 1 + lambda
	}
	l, ok := cholesky(a)
	if !ok {
		return nil, false
	}
	solveLower(l, b)
	solveUpper(l, b)
	step := make([]float64, len(p))
	for i, fi := range free {
		step[fi] = b[i]
	}
	return step, true
}

// tail is the integral of the fitted sum from time s on, and its first-order
// change with the data: sensitivity times the change of the whitened y.
func (f *sumFit) tail(s float64) (value float64, sensitivity []float64) {
	k := len(f.c)
	p := make([]float64, 2*k)
	slope := make([]float64, 2*k)
	for i := range k {
		e := math.Exp(-f.rate[i]*s) / f.rate[i]
		p[i], p[k+i] = math.Log(f.rate[i]), f.c[i]
		value += f.c[i] * e
		slope[i] = -f.c[i] * e * (1 + f.rate[i]*s)
		slope[k+i] = e
	}
	r, d := f.residual(p, true)
	g := make([]float64, len(p))
	for i := range g {
		g[i] = dot(d[i], r)
	}
	free := f.free(p, g)
	sensitivity = make([]float64, len(r))
	a, b := square(len(free)), make([]float64, len(free))
	for i, fi := range free {
		b[i] = slope[fi]
		for j, fj := range free {
			a[i][j] = dot(d[fi], d[fj])
		}
		a[i][i] *= 1 + 1e-9
	}
	l, ok := cholesky(a)
	if !ok {
		return value, nil
	}
	solveLower(l, b)
	solveUpper(l, b)
	for i, fi := range free {
		for x := range sensitivity {
			sensitivity[x] += b[i] * d[fi][x]
		}
	}
	return value, sensitivity
}
