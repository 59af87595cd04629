package exact_test

import (
	"math"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

// diagonalise returns a system with its full spectrum.
func diagonalise(t *testing.T, spec kinetic.Spec) (*exact.System, *exact.Spectrum) {
	t.Helper()
	s, err := exact.NewSystem(spec)
	if err != nil {
		t.Fatal(err)
	}
	st, err := s.Explore(1 << 11)
	if err != nil {
		t.Fatal(err)
	}
	sp, err := st.Spectrum()
	if err != nil {
		t.Fatal(err)
	}
	return s, sp
}

// At beta = 0 every jump has the rate G(0), and the eigenvalue w^s of a product
// operator to which jump a adds c_a mod q decays at G(0) sum_a (1 - cos(2 pi
// c_a/q)) (elementary: w^s is an eigenvector of the generator, and jumps come
// with their inverses). Potts moves add every c, and the sum over one spin is
// q G(0).
func TestInfiniteTemperatureLevels(t *testing.T) {
	for _, q := range []int{3, 4, 5} {
		s, sp := diagonalise(t, kinetictest.Potts(q, kinetictest.Lattice(3), 0, bath.Law{Kind: bath.Metropolis, Rate: 1.5}))
		m, err := s.Magnetization()
		if err != nil {
			t.Fatal(err)
		}
		r := sp.Relaxation(m)
		if len(r.Modes) != 1 || math.Abs(r.Modes[0].Rate-1.5*float64(q)) > 1e-10 || math.Abs(r.Variance-3) > 1e-10 || math.Abs(r.Mean) > 1e-12 {
			t.Errorf("q = %d: magnetization %+v, want one mode of rate %v and weight 3", q, r, 1.5*float64(q))
		}
		// A wave of a complex field has the same rate in both directions.
		f, err := s.Fourier(lattice.Offset{1}, len(s.Spec.Families))
		if err != nil {
			t.Fatal(err)
		}
		if r := sp.Relaxation(f); len(r.Modes) != 1 || math.Abs(r.Modes[0].Rate-1.5*float64(q)) > 1e-10 || math.Abs(r.Variance-3) > 1e-10 {
			t.Errorf("q = %d: amplitude %+v", q, r)
		}
	}
}

// The Potts ring by its transfer matrix, whose eigenvalues are e^b + q - 1 and,
// q - 1 times, e^b - 1 (textbook): mean energy, and the covariance of spins
// Re <w^(s_r - s_0)> = (a^r + a^(N-r) + (q - 2) a^N)/(1 + (q - 1) a^N), where a is
// the ratio of the two.
func TestPottsRing(t *testing.T) {
	const beta = 0.8
	for _, c := range []struct{ q, n int }{{3, 5}, {4, 4}, {5, 3}} {
		s, sp := diagonalise(t, kinetictest.Potts(c.q, kinetictest.Lattice(c.n), beta, kinetictest.HeatBath))
		q, n := float64(c.q), float64(c.n)
		big, small := math.Exp(beta)+q-1, math.Exp(beta)-1
		z := math.Pow(big, n) + (q-1)*math.Pow(small, n)
		energy := -n * math.Exp(beta) * (math.Pow(big, n-1) + (q-1)*math.Pow(small, n-1)) / z
		if r := sp.Relaxation(s.Energy()); math.Abs(r.Mean-energy) > 1e-10 {
			t.Errorf("q = %d, N = %d: energy %v, want %v", c.q, c.n, r.Mean, energy)
		}
		bonds, err := s.Terms(0)
		if err != nil {
			t.Fatal(err)
		}
		if r := sp.Relaxation(bonds); math.Abs(r.Mean+energy) > 1e-10 {
			t.Errorf("q = %d, N = %d: satisfied bonds %v, want %v", c.q, c.n, r.Mean, -energy)
		}
		spin, err := s.Local(1)
		if err != nil {
			t.Fatal(err)
		}
		st, err := s.Explore(1 << 11)
		if err != nil {
			t.Fatal(err)
		}
		k, err := st.Covariance(spin)
		if err != nil {
			t.Fatal(err)
		}
		a := small / big
		for r := range c.n {
			want := (math.Pow(a, float64(r)) + math.Pow(a, n-float64(r)) + (q-2)*math.Pow(a, n)) / (1 + (q-1)*math.Pow(a, n))
			if r == 0 {
				want = 1
			}
			if got := k.At(lattice.Offset{r}); math.Abs(got-want) > 1e-12 {
				t.Errorf("q = %d, N = %d: covariance at distance %d is %v, want %v", c.q, c.n, r, got, want)
			}
		}
	}
}
