package analysis

import "fmt"

// pool holds the raw sums of a point, in total and by resampling block. A block
// is a unit or, with split > 1, an equal stretch of one: pairs of samples go
// with their first time, so that no pair is lost. Sums without one block are
// differences, which is what the jackknife needs.
type pool struct {
	p      *Point
	split  int // blocks per unit
	blocks int

	obs   []blockMoments
	pairs []blockPairs
}

type blockMoments struct {
	total Moment
	by    []Moment
}

type blockPairs struct {
	times     []float64 // lags in units of time
	total     []Lagged
	by        [][]Lagged // block, lag
	dirichlet Sum
	dirBy     []Sum
}

// all is the block index that leaves nothing out.
const all = -1

func newPool(p *Point, split int) *pool {
	q := &pool{p: p, split: split, blocks: len(p.Starts) * split}
	for i := range p.Observables {
		q.obs = append(q.obs, poolMoments(p, i, split))
	}
	for i := range p.Pairs {
		q.pairs = append(q.pairs, poolPairs(p, i, split))
	}
	return q
}

func poolMoments(p *Point, o, split int) blockMoments {
	units := p.Observables[o].Moments
	if len(units) != len(p.Starts) {
		panic(fmt.Sprintf("analysis: moments of %s: %d units, starts: %d", p.Observables[o].Name, len(units), len(p.Starts)))
	}
	m := blockMoments{by: make([]Moment, len(units)*split)}
	for u, segments := range units {
		for s, v := range segments {
			m.by[u*split+s*split/len(segments)].add(v)
			m.total.add(v)
		}
	}
	return m
}

func poolPairs(p *Point, i, split int) blockPairs {
	pair := &p.Pairs[i]
	if len(pair.Sums) != len(p.Starts) {
		panic(fmt.Sprintf("analysis: pair %d: %d units, starts: %d", i, len(pair.Sums), len(p.Starts)))
	}
	n := len(pair.Lags)
	b := blockPairs{
		times: make([]float64, n),
		total: make([]Lagged, n),
		by:    make([][]Lagged, len(pair.Sums)*split),
	}
	for k, lag := range pair.Lags {
		b.times[k] = float64(lag) * p.Step
	}
	flat := make([]Lagged, len(b.by)*n)
	for k := range b.by {
		b.by[k] = flat[k*n : (k+1)*n]
	}
	for u, segments := range pair.Sums {
		for s, lags := range segments {
			if len(lags) != n {
				panic(fmt.Sprintf("analysis: pair %d, unit %d, segment %d: %d lags, want %d", i, u, s, len(lags), n))
			}
			to := b.by[u*split+s*split/len(segments)]
			for k, v := range lags {
				to[k].add(v)
				b.total[k].add(v)
			}
		}
	}
	if pair.Dirichlet == nil {
		return b
	}
	b.dirBy = make([]Sum, len(b.by))
	for u, segments := range pair.Dirichlet {
		for s, v := range segments {
			to := &b.dirBy[u*split+s*split/len(segments)]
			to.N += v.N
			to.S += v.S
			b.dirichlet.N += v.N
			b.dirichlet.S += v.S
		}
	}
	return b
}

func (m *Moment) add(v Moment) {
	m.N += v.N
	m.S1 += v.S1
	m.S2 += v.S2
	m.S3 += v.S3
	m.S4 += v.S4
}

func (m Moment) without(v Moment) Moment {
	return Moment{m.N - v.N, m.S1 - v.S1, m.S2 - v.S2, m.S3 - v.S3, m.S4 - v.S4}
}

func (l *Lagged) add(v Lagged) {
	l.N += v.N
	l.SF += v.SF
	l.SG += v.SG
	l.SFG += v.SFG
}

// moments returns the sums of observable o without block out.
func (q *pool) moments(o, out int) Moment {
	if out == all {
		return q.obs[o].total
	}
	return q.obs[o].total.without(q.obs[o].by[out])
}

// mean is the grand mean of observable o; it is zero where symmetry says so.
func (q *pool) mean(o, out int) float64 {
	if q.zeroMean(o) {
		return 0
	}
	m := q.moments(o, out)
	return m.S1 / float64(m.N)
}

// zeroMean reports whether the mean is known to vanish: a Fourier amplitude at
// a wavevector that is not zero, by translation invariance.
func (q *pool) zeroMean(o int) bool { return q.p.Observables[o].Kind == "fourier" }

// time is the total recorded time of all trajectories that moments(o, out)
// pools.
func (q *pool) time(o, out int) float64 {
	return float64(q.moments(o, out).N) * q.p.Step
}

// covariance writes C_fg at every lag of pair k, with the grand means:
//
//	C = [S_fg - m_f S_g - m_g S_f]/n + m_f m_g
//
// It still lacks the variance of the grand mean (see meanVariance). Lags
// without pairs end the curve: the returned slice is shorter then.
func (q *pool) covariance(k, out int, dst []float64) []float64 {
	pair, b := &q.p.Pairs[k], &q.pairs[k]
	mf, mg := q.mean(pair.F, out), q.mean(pair.G, out)
	dst = dst[:0]
	for i, t := range b.total {
		if out != all {
			v := b.by[out][i]
			t = Lagged{t.N - v.N, t.SF - v.SF, t.SG - v.SG, t.SFG - v.SFG}
		}
		if t.N <= 0 {
			break
		}
		dst = append(dst, (t.SFG-mf*t.SG-mg*t.SF)/float64(t.N)+mf*mg)
	}
	return dst
}

// dirichlet returns E(f,g) of pair k.
func (q *pool) dirichlet(k, out int) (e float64, ok bool) {
	b := &q.pairs[k]
	if b.dirBy == nil {
		return 0, false
	}
	d := b.dirichlet
	if out != all {
		d.N -= b.dirBy[out].N
		d.S -= b.dirBy[out].S
	}
	if d.N <= 0 {
		return 0, false
	}
	return d.S / float64(d.N), true
}

// meanVariance is the variance of the grand mean of observable o between
// blocks, for averages over positions, whose variance cannot be had from C(t).
func (q *pool) meanVariance(o, out int) float64 {
	if q.zeroMean(o) || q.blocks < 3 {
		return 0
	}
	mean := q.mean(o, out)
	var ss float64
	n := 0
	for b, m := range q.obs[o].by {
		if b == out || m.N == 0 {
			continue
		}
		d := m.S1/float64(m.N) - mean
		ss += d * d
		n++
	}
	return ss / float64(n*(n-1))
}

// pairOf returns the index of the pair (f, g), or -1.
func (p *Point) pairOf(f, g int) int {
	if f > g {
		f, g = g, f
	}
	for i := range p.Pairs {
		if p.Pairs[i].F == f && p.Pairs[i].G == g {
			return i
		}
	}
	return -1
}

// splitFor returns into how many blocks each unit is cut for an observable with
// relaxation time tau: as many as bring the blocks to 32, none shorter than 20
// tau, and a divisor of the recorded segments.
func (p *Point) splitFor(tau float64, segments int) int {
	const wanted = 32
	units := len(p.Starts)
	if units == 0 {
		return 1
	}
	most := min((wanted+units-1)/units, segments)
	if tau > 0 {
		most = min(most, int(p.Span/(20*tau)))
	}
	for n := most; n > 1; n-- {
		if segments%n == 0 {
			return n
		}
	}
	return 1
}
