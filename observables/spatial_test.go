package observables

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

// Covariance rows equal direct sums over all pairs of terms, and of planes, in
// the snapshots, lanes in rotation.
func TestCovarianceAgainstDirectSums(t *testing.T) {
	plan := Plan{Settle: 1, Span: 6, Step: 0.5, Every: 1, Limit: 2}
	for name, g := range cases(t) {
		for f := range g.Families {
			if g.Families[f].Terms == 0 {
				continue
			}
			t.Run(fmt.Sprintf("%s/%s", name, g.Families[f].Name), func(t *testing.T) {
				const lanes = 2
				plan := plan
				plan.Covariance = g.Families[f].Name
				u := record(t, newBundle(t, g, lanes, 3), g, nil, plan)
				e := newBundle(t, g, lanes, 3)
				var snapshots [][]uint8
				for k := range int(plan.Samples()) {
					e.Advance(plan.Settle + float64(k)*plan.Step)
					if k%2 == 0 {
						snapshots = append(snapshots, levelsOf(g, e, k/2%lanes)[f])
					}
				}
				checkCovariance(t, g, u.Covariance, f, snapshots, plan.Limit)
			})
		}
	}
}

func checkCovariance(t *testing.T, g *kinetic.Generator, rows []CovarianceRow, family int, snapshots [][]uint8, limit int) {
	t.Helper()
	name := g.Families[family].Name
	seen := make(map[string]bool)
	for _, r := range rows {
		var want CovarianceRow
		if r.Axis < 0 {
			var d lattice.Offset
			for a, x := range r.Displacement {
				d[a] = int(x)
			}
			for _, s := range snapshots {
				addPoints(&want, g, family, s, d)
			}
		} else {
			for _, s := range snapshots {
				addPlanes(&want, g, family, s, int(r.Axis), int(r.Displacement[0]))
			}
		}
		key := fmt.Sprint(r.Axis, r.Displacement)
		if seen[key] {
			t.Errorf("two rows for %s", key)
		}
		seen[key] = true
		if r.Of != name || r.Snapshots != int64(len(snapshots)) || r.Pairs != want.Pairs ||
			!same(g, r.SumF, want.SumF) || !same(g, r.SumG, want.SumG) || !same(g, r.SumFG, want.SumFG) {
			t.Errorf("%+v, want %+v", r, want)
		}
	}
	// What must be there: all displacements within the limit, up to sign, and
	// all distances of planes.
	l := g.Lattice
	for d := range within(l, limit) {
		if !seen[key(l, d)] && !seen[key(l, d.Neg())] && !folded(l, d, seen) && possible(g, family, snapshots[0], d) {
			t.Errorf("no row for displacement %v", d)
		}
	}
	for a := range l.Axes {
		for r := range min(longest(l, a), chainLimit) + 1 {
			var want CovarianceRow
			addPlanes(&want, g, family, snapshots[0], a, r)
			if want.Pairs > 0 && !seen[fmt.Sprint(a, []int32{int32(r)})] {
				t.Errorf("no row for planes at distance %d along axis %d", r, a)
			}
		}
	}
}

// same compares sums, which are integers for two levels.
func same(g *kinetic.Generator, a, b float64) bool {
	return a == b || g.Levels > 2 && near(a, b, math.Abs(b))
}

func key(l lattice.Lattice, d lattice.Offset) string {
	var list []int32
	for a := range l.Axes {
		list = append(list, int32(d[a]))
	}
	return fmt.Sprint(-1, list)
}

// folded looks for d with -L/2 for L/2.
func folded(l lattice.Lattice, d lattice.Offset, seen map[string]bool) bool {
	for range 2 {
		e := d
		for a := range l.Axes {
			if !l.Open[a] && 2*e[a] == -l.Size[a] {
				e[a] = -e[a]
			}
		}
		if seen[key(l, e)] {
			return true
		}
		d = d.Neg()
	}
	return false
}

func within(l lattice.Lattice, limit int) map[lattice.Offset]bool {
	out := map[lattice.Offset]bool{{}: true}
	for a := range l.Axes {
		for d := range out {
			for x := -limit; x <= limit; x++ {
				if abs(x) <= longest(l, a) {
					d[a] = x
					out[d] = true
				}
			}
		}
	}
	return out
}

func abs(x int) int { return max(x, -x) }

func possible(g *kinetic.Generator, family int, levels []uint8, d lattice.Offset) bool {
	var r CovarianceRow
	addPoints(&r, g, family, levels, d)
	return r.Pairs > 0
}

// parts are the real and the imaginary part of the values of a family by level,
// the latter only where there is one.
func parts(g *kinetic.Generator, family int) [][]float64 {
	re, im, two := worth(g, family, 1)
	if !two {
		return [][]float64{re}
	}
	return [][]float64{re, im}
}

func addPoints(r *CovarianceRow, gen *kinetic.Generator, family int, levels []uint8, d lattice.Offset) {
	l, values := gen.Lattice, parts(gen, family)
	for c, s := range levels {
		to, ok := l.Wrap(l.Coord(c), d)
		if !ok || s == kinetic.Absent || levels[l.Index(to)] == kinetic.Absent {
			continue
		}
		r.Pairs++
		for _, value := range values {
			f, g := value[s], value[levels[l.Index(to)]]
			r.SumF += f
			r.SumG += g
			r.SumFG += f * g
		}
	}
}

func addPlanes(r *CovarianceRow, gen *kinetic.Generator, family int, levels []uint8, axis, d int) {
	for i, value := range parts(gen, family) {
		pairs := r.Pairs
		addPlanePart(r, gen, value, levels, axis, d)
		if i > 0 {
			r.Pairs = pairs
		}
	}
}

func addPlanePart(r *CovarianceRow, gen *kinetic.Generator, value []float64, levels []uint8, axis, d int) {
	l := gen.Lattice
	sums := make([]float64, l.Size[axis])
	exist := make([]bool, l.Size[axis])
	for c, s := range levels {
		if s != kinetic.Absent {
			x := l.Coord(c)[axis]
			exist[x] = true
			sums[x] += value[s]
		}
	}
	for x := range sums {
		y := x + d
		if y >= len(sums) {
			if l.Open[axis] {
				continue
			}
			y -= len(sums)
		}
		if exist[x] && exist[y] {
			r.Pairs++
			r.SumF += sums[x]
			r.SumG += sums[y]
			r.SumFG += sums[x] * sums[y]
		}
	}
}

// Long axes take another way to the products of plane sums; lengths that are
// prime, odd, open or a power of two give the same sums as the direct one.
func TestLongAxes(t *testing.T) {
	for _, l := range []lattice.Lattice{
		kinetictest.Lattice(521, 2), kinetictest.Lattice(1024, 1), opened(kinetictest.Lattice(1031, 1), 0),
		kinetictest.Lattice(2500),
		kinetictest.Lattice(3, 751), opened(kinetictest.Lattice(600, 2), 0),
	} {
		g := compile(t, kinetictest.Ising(l, 0.5, kinetictest.HeatBath))
		plan := Plan{Span: 1, Step: 1, Covariance: "spin", Every: 1, Limit: 1}
		u := record(t, newBundle(t, g, 1, 4), g, nil, plan)
		e := newBundle(t, g, 1, 4)
		checkCovariance(t, g, u.Covariance, l.Axes, [][]uint8{levelsOf(g, e, 0)[l.Axes]}, 1)
	}
}

// A group is taken family by family.
func TestCovarianceOfGroup(t *testing.T) {
	g := compile(t, kinetictest.Ising(kinetictest.Lattice(4, 4), 0.3, kinetictest.HeatBath))
	u := record(t, newBundle(t, g, 1, 4), g, nil, Plan{Span: 1, Step: 1, Covariance: "bond", Every: 1})
	counts := map[string]int{}
	for _, r := range u.Covariance {
		counts[r.Of]++
	}
	if len(counts) != 2 || counts["bond-x"] != counts["bond-y"] || counts["bond-x"] == 0 {
		t.Errorf("rows by family: %v", counts)
	}
}

func TestCopyBits(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		src := []uint64{rng.Uint64(), rng.Uint64(), rng.Uint64()}
		n := rng.IntN(129)
		i, j := rng.IntN(192-n+1), rng.IntN(192-n+1)
		dst := make([]uint64, 3)
		copyBits(dst, j, src, i, n)
		for b := range 192 {
			want := uint64(0)
			if b >= j && b < j+n {
				at := b - j + i
				want = src[at/64] >> (at % 64) & 1
			}
			if dst[b/64]>>(b%64)&1 != want {
				t.Fatalf("bit %d of %d bits from %d to %d", b, n, i, j)
			}
		}
	}
}

// Spins on a ring have the covariance
//
//	K(r) = (t^r + t^(N-r))/(1 + t^N),  t = tanh beta
//
// (transfer matrix of the Ising ring). Tolerance: 4 standard errors, from 32
// units.
func TestRingCovariance(t *testing.T) {
	const (
		beta  = 0.9
		n     = 24
		units = 32
	)
	g := compile(t, kinetictest.Ising(kinetictest.Lattice(n), beta, kinetictest.HeatBath))
	plan := Plan{Settle: 60, Span: 2000, Step: 10, Covariance: "spin", Every: 10}
	points, planes := newAverages(n/2+1), newAverages(n/2+1)
	for unit := range units {
		u := record(t, newBundle(t, g, 1, byte(10+unit)), g, nil, plan)
		for _, r := range u.Covariance {
			k := r.SumFG / float64(r.Pairs)
			if d := r.Displacement[0]; r.Axis < 0 {
				points.add(int(d), k)
			} else {
				planes.add(int(d), k)
			}
		}
	}
	th := math.Tanh(beta)
	for r := range n/2 + 1 {
		want := (math.Pow(th, float64(r)) + math.Pow(th, float64(n-r))) / (1 + math.Pow(th, n))
		points.check(t, fmt.Sprintf("K(%d)", r), r, want, 4)
		planes.check(t, fmt.Sprintf("planes at %d", r), r, want, 4)
	}
}

// averages are means over units with their standard errors.
type averages struct{ n, s1, s2 []float64 }

func newAverages(n int) *averages {
	return &averages{make([]float64, n), make([]float64, n), make([]float64, n)}
}

func (a *averages) add(i int, v float64) {
	a.n[i]++
	a.s1[i] += v
	a.s2[i] += v * v
}

func (a *averages) mean(i int) (mean, err float64) {
	mean = a.s1[i] / a.n[i]
	return mean, math.Sqrt(math.Max(0, a.s2[i]/a.n[i]-mean*mean) / (a.n[i] - 1))
}

func (a *averages) check(t *testing.T, what string, i int, want, errors float64) {
	t.Helper()
	mean, err := a.mean(i)
	if !(math.Abs(mean-want) <= errors*err+1e-12) {
		t.Errorf("%s is %.5f(%.5f), want %.5f", what, mean, err, want)
	}
}
