package kinetic

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// pottsSpec is the Potts model on a torus: bonds 1 - x with E(s) = -[s = 0], and
// moves to every other colour.
func pottsSpec(t testing.TB, q int, beta float64, size ...int) Spec {
	s := Spec{Lattice: testLattice(t, false, size...), Levels: q, Sites: 1, Beta: beta}
	shape := make([]float64, q)
	shape[0] = 1
	one := pauli.Monomial{Coeff: 1}
	for a := range size {
		var e lattice.Offset
		e[a] = 1
		s.Families = append(s.Families, FamilySpec{
			Name: "bond-" + "xyzw"[a:a+1], Group: "bond", Coupling: 1, Shape: shape,
			Operator: pauli.Operator{Z: []pauli.Polynomial{{one, {Exp: e, Coeff: q - 1}}}},
		})
	}
	s.Tracked = []TrackedSpec{{Name: "spin", Order: true, Operator: pauli.Operator{Z: []pauli.Polynomial{{one}}}}}
	for k := 1; k < q; k++ {
		b := heatBath("X")[0]
		b.X = k
		s.Bath = append(s.Bath, b)
	}
	return s
}

// meanEnergy returns the mean energy with its standard error.
func meanEnergy(t *testing.T, s Spec, start Start, settle, step float64, blocks, each int) (mean, se float64) {
	t.Helper()
	g := compiled(t, s)
	engine := NewClasses
	if g.Wide != nil {
		engine = NewComposition
	}
	e, err := engine(g, [32]byte{6}, 1, start)
	if err != nil {
		t.Fatal(err)
	}
	e.Advance(settle)
	var m, q float64
	for range blocks {
		b := 0.0
		for range each {
			e.Advance(e.Time() + step)
			b += e.Energy(0) / float64(each)
		}
		m += b
		q += b * b
	}
	if err := e.Audit(); err != nil {
		t.Error(err)
	}
	n := float64(blocks)
	m /= n
	return m, math.Sqrt((q/n - m*m) / (n - 1))
}

// On the Potts ring of N sites the partition function is
// (e^b + q - 1)^N + (q-1)(e^b - 1)^N (transfer matrix, textbook).
func TestPottsRing(t *testing.T) {
	for _, c := range []struct {
		q, n int
		beta float64
	}{{3, 5, 0.9}, {3, 2, 0.7}, {4, 7, 1.1}, {5, 3, 1.3}} {
		lnZ := func(b float64) float64 {
			q, n := float64(c.q), float64(c.n)
			return math.Log(math.Pow(math.Exp(b)+q-1, n) + (q-1)*math.Pow(math.Exp(b)-1, n))
		}
		const h = 1e-5
		want := -(lnZ(c.beta+h) - lnZ(c.beta-h)) / (2 * h)
		mean, se := meanEnergy(t, pottsSpec(t, c.q, c.beta, c.n), StartRandom, 100, 1, 50, 1000)
		if math.Abs(mean-want) > 4*se || se > 0.01*math.Abs(want) {
			t.Errorf("q = %d, N = %d: energy %.4f(%.4f), want %.4f", c.q, c.n, mean, se, want)
		}
	}
}

// On the square lattice at beta_c = ln(1 + sqrt q) the energy per site is
// -(1 + 1/sqrt q) in the infinite volume (F. Y. Wu, Rev. Mod. Phys. 54, 235
// (1982)). A torus of this size lies lower by a few per cent, like 1/L.
func TestPottsCriticalEnergy(t *testing.T) {
	const l = 24
	mean, se := meanEnergy(t, pottsSpec(t, 3, math.Log(1+math.Sqrt(3)), l, l), StartRandom, 500, 4, 20, 300)
	want := -(1 + 1/math.Sqrt(3))
	if got := mean / (l * l); math.Abs(got-want) > 0.04*math.Abs(want)+4*se/(l*l) {
		t.Errorf("energy per site %.4f(%.4f), want about %.4f", got, se/(l*l), want)
	}
}

// torusEnergy returns the mean energy of spins with bonds -shape[s - s'] on a
// torus by its transfer matrix between rows (textbook): Z = tr T^length.
func torusEnergy(shape []float64, width, length int, beta float64) float64 {
	q, rows := len(shape), 1
	for range width {
		rows *= q
	}
	spin := func(row, x int) int {
		for range x {
			row /= q
		}
		return row % q
	}
	lnZ := func(b float64) float64 {
		t := mat.NewDense(rows, rows, nil)
		for i := range rows {
			for j := range rows {
				bonds := 0.0
				for x := range width {
					bonds += shape[(spin(i, x)-spin(i, (x+1)%width)+q)%q] + shape[(spin(i, x)-spin(j, x)+q)%q]
				}
				t.Set(i, j, math.Exp(b*bonds))
			}
		}
		var power mat.Dense
		power.Pow(t, length)
		return math.Log(mat.Trace(&power))
	}
	const h = 1e-4
	return -(lnZ(beta+h) - lnZ(beta-h)) / (2 * h)
}

// Tori that enumeration of states does not reach, against their transfer
// matrices: Potts moves to any colour, clock moves to the next.
func TestTorusOfLevels(t *testing.T) {
	for _, c := range []struct {
		q             int
		clock         bool
		width, length int
		beta          float64
	}{{3, false, 4, 5, 1.0}, {8, false, 2, 4, 1.3}, {5, true, 3, 4, 0.9}, {6, true, 2, 5, 0.7},
		{12, false, 2, 3, 1.5}, {16, true, 2, 4, 0.8}, {9, true, 2, 5, 1.2}} {
		s := pottsSpec(t, c.q, c.beta, c.width, c.length)
		if c.clock {
			for i := range s.Families {
				s.Families[i].Shape = ClockShape(c.q)
			}
			s.Bath = heatBath("X")[0].Powers(nil, c.q)
		}
		want := torusEnergy(s.Families[0].Shape, c.width, c.length, c.beta)
		mean, se := meanEnergy(t, s, StartRandom, 100, 1, 40, 1500)
		if math.Abs(mean-want) > 4*se || se > 0.01*math.Abs(want) {
			t.Errorf("q = %d, %d x %d, clock %v: energy %.4f(%.4f), want %.4f", c.q, c.width, c.length, c.clock, mean, se, want)
		}
	}
}
