package analysis

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The solution of a non-negative least-squares problem is the one that
// satisfies the Karush-Kuhn-Tucker conditions: a_j'r = 0 where x_j > 0, a_j'r <=
// 0 where x_j = 0 (Lawson, Hanson, theorem 23.4).
func TestNNLS(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for range 200 {
		rows, n := 3+rng.IntN(8), 1+rng.IntN(30)
		columns := make([][]float64, n)
		for j := range columns {
			columns[j] = make([]float64, rows)
			for i := range columns[j] {
				columns[j][i] = rng.NormFloat64()
			}
		}
		y := make([]float64, rows)
		for i := range y {
			y[i] = rng.NormFloat64()
		}
		s := newNNLS(rows)
		first := rng.IntN(n)
		chi2 := s.solve(columns, first, y)
		for j := first; j < n; j++ {
			g := dot(columns[j], s.residual)
			if g > 1e-6 || s.has(j) && math.Abs(g) > 1e-8 {
				t.Fatalf("gradient %g of column %d (passive %v), chi2 %g", g, j, s.has(j), chi2)
			}
		}
		for i, x := range s.x {
			if x <= 0 || s.passive[i] < first {
				t.Fatalf("x = %g at column %d, first %d", x, s.passive[i], first)
			}
		}
	}
}

// Variance and covariance of the estimates of C for one exponential, from
// Bartlett's formula by hand: phi(d) = c^2 exp(-l d)(1/l + d).
func TestGaussianCovariance(t *testing.T) {
	got := gaussianCovariance([]float64{0, 0.5}, []exponential{{2, 3}}, 100)
	phi := func(d float64) float64 { return 4 * math.Exp(-3*d) * (1.0/3 + d) }
	for _, test := range []struct{ got, want float64 }{
		{got[0][0], 2 * phi(0) / 100}, {got[0][1], 2 * phi(0.5) / 100}, {got[1][1], (phi(0) + phi(1)) / 100},
	} {
		if math.Abs(test.got-test.want) > 1e-15 {
			t.Errorf("%g, want %g", test.got, test.want)
		}
	}
	// Two rates that approach each other must give the limit of one.
	near := gaussianCovariance([]float64{0, 0.5}, []exponential{{1, 3}, {1, 3.001}}, 100)
	for i := range near {
		for j := range near {
			if math.Abs(near[i][j]/got[i][j]-1) > 1e-3 {
				t.Errorf("rates close together: %g, want %g", near[i][j], got[i][j])
			}
		}
	}
}

// Shrinking must leave a well-determined matrix alone and replace one that few
// blocks leave undetermined by the model's shape.
func TestShrunkCovariance(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	draw := func(blocks int, l [][]float64) [][]float64 {
		x := make([][]float64, blocks)
		for b := range x {
			z := make([]float64, len(l))
			x[b] = make([]float64, len(l))
			for i := range z {
				z[i] = rng.NormFloat64()
			}
			for i := range z {
				x[b][i] = dot(l[i][:i+1], z[:i+1])
			}
		}
		return x
	}
	truth := [][]float64{{1, .8, .5}, {.8, 2, 1}, {.5, 1, 3}}
	l, _ := cholesky(truth)
	one := [][]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
	// Values without each block scatter (U-1) times less than the blocks.
	scaled := func(x [][]float64) [][]float64 {
		for _, row := range x {
			for i := range row {
				row[i] /= math.Sqrt(float64(len(x) - 1))
			}
		}
		return x
	}
	got, ok := shrunkCovariance(scaled(draw(4000, l)), one)
	for i := range truth {
		for j := range truth {
			if !ok || math.Abs(got[i][j]-truth[i][j]) > 0.2 { // 4 standard errors, 4000 blocks
				t.Errorf("many blocks: %v, want %v", got, truth)
			}
		}
	}
	x := scaled(draw(5, l))
	got, ok = shrunkCovariance(x, truth)
	if !ok {
		t.Fatal("few blocks: no matrix")
	}
	raw := jackCovariance(x)
	norm := func(a [][]float64) float64 {
		s, scale := 0.0, (a[0][0]+a[1][1]+a[2][2])/6
		for i := range a {
			for j := range a {
				s += math.Pow(a[i][j]/scale-truth[i][j], 2)
			}
		}
		return s
	}
	if norm(got) > norm(raw)/2 {
		t.Errorf("few blocks: distance %g from the truth, unshrunk %g", norm(got), norm(raw))
	}
}

// A straight line: parameters and errors of the textbook's weighted regression.
func TestLeastSquares(t *testing.T) {
	x, y, se := []float64{1, 2, 3, 5}, []float64{1.1, 1.9, 3.2, 4.8}, []float64{.1, .2, .1, .3}
	f := leastSquares(func(x float64, p []float64) float64 { return p[0] + p[1]*x }, x, y, se, [][]float64{{5, -3}})
	var s, sx, sy, sxx, sxy float64
	for i := range x {
		w := 1 / (se[i] * se[i])
		s, sx, sy, sxx, sxy = s+w, sx+w*x[i], sy+w*y[i], sxx+w*x[i]*x[i], sxy+w*x[i]*y[i]
	}
	d := s*sxx - sx*sx
	want := []float64{(sxx*sy - sx*sxy) / d, (s*sxy - sx*sy) / d, math.Sqrt(sxx / d), math.Sqrt(s / d)}
	for i, got := range append(f.p, f.err...) {
		if math.Abs(got-want[i]) > 1e-6 {
			t.Errorf("parameter %d: %.8g, want %.8g", i, got, want[i])
		}
	}
}

func TestGeneralizedEigenproblem(t *testing.T) {
	// C(t) of two decays seen by two observables: eigenvalues exp(-rate t).
	a := [][]float64{{1, 2}, {3, -1}} // amplitudes
	c := func(t float64) [][]float64 {
		m := square(2)
		for i := range 2 {
			for j := range 2 {
				m[i][j] = a[i][0]*a[j][0]*math.Exp(-t) + a[i][1]*a[j][1]*math.Exp(-4*t)
			}
		}
		return m
	}
	mu, v, ok := largestGeneralized(c(1), c(0.5))
	if !ok || math.Abs(mu-math.Exp(-0.5)) > 1e-12 {
		t.Fatalf("mu = %g, want %g", mu, math.Exp(-0.5))
	}
	if r := v[0]*a[0][1] + v[1]*a[1][1]; math.Abs(r) > 1e-10*math.Abs(v[0]) {
		t.Errorf("the mode %v overlaps with the fast decay: %g", v, r)
	}
}

func TestStudentQuantile(t *testing.T) {
	// Any table of Student's t, to its printed digits.
	for _, test := range []struct {
		tail float64
		dof  int
		want float64
	}{{0.025, 3, 3.182}, {0.05, 10, 1.812}, {0.025, 30, 2.042}} {
		if got := studentT(test.tail, test.dof); math.Abs(got-test.want) > 5e-4 {
			t.Errorf("t(%g, %d) = %.4f, want %.3f", test.tail, test.dof, got, test.want)
		}
	}
}

func TestWithError(t *testing.T) {
	for _, test := range []struct {
		value, err float64
		want       string
	}{{12.4137, 0.07, "12.41(7)"}, {12.4137, 0.12, "12.41(12)"}, {10.47, 2, "10.5(2.0)"}, {1234, 50, "1230(50)"}, {1234, 12, "1234(12)"}, {0.00123, 0.00004, "0.00123(4)"}, {3, 0, "3"}} {
		if got := withError(test.value, test.err); got != test.want {
			t.Errorf("%g +- %g: %s, want %s", test.value, test.err, got, test.want)
		}
	}
}

// Pooling neighbours that rise: by hand.
func TestDecreasing(t *testing.T) {
	y := []float64{5, 2, 4, 3, 1, 2}
	decreasing(y, []float64{1, 1, 3, 1, 1, 1})
	for i, want := range []float64{5, 3.5, 3.5, 3, 1.5, 1.5} {
		if math.Abs(y[i]-want) > 1e-12 {
			t.Fatalf("%v at %d, want %g", y, i, want)
		}
	}
}

// Without noise a sum of exponentials is found exactly, and its tail integral
// and sensitivity follow.
func TestSumFit(t *testing.T) {
	times := []float64{0, 0.1, 0.2, 0.3, 0.5, 0.8, 1.2, 1.8, 2.7, 4}
	one := square(len(times))
	for i := range one {
		one[i][i] = 1e-4
	}
	l, _ := cholesky(one)
	for _, terms := range [][]exponential{{{1, 0.7}}, {{.3, 1}, {.7, 6}}, {{.3, .5}, {.3, 3}, {.4, 15}}} {
		y := make([]float64, len(times))
		want := 0.0
		for _, e := range terms {
			for i, x := range times {
				y[i] += e.c * math.Exp(-e.rate*x)
			}
			want += e.c / e.rate * math.Exp(-e.rate*0.3)
		}
		f, ok := newSumFit(l, times, y, len(terms), 0.05, 0.1, 30)
		got, sensitivity := f.tail(0.3)
		if !ok || math.Abs(got/want-1) > 2e-3 {
			t.Errorf("%v: tail %g, want %g, fit %v %v", terms, got, want, f.c, f.rate)
		}
		// The sensitivity is the derivative: refit with one datum moved.
		moved := append([]float64(nil), y...)
		moved[3] += 1e-4
		g, _ := newSumFit(l, times, moved, len(terms), 0.05, 0.1, 30)
		after, _ := g.tail(0.3)
		change := make([]float64, len(times))
		change[3] = 1e-4
		solveLower(l, change)
		if d := dot(sensitivity, change); math.Abs(after-got-d) > 0.1*math.Abs(d)+2e-5 {
			t.Errorf("%v: the tail changes by %g, predicted %g", terms, after-got, d)
		}
	}
}
