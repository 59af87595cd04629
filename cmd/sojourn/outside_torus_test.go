package main

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mathext"

	"sojourn/analysis"
	"sojourn/kinetic"
)

// critical is the inverse critical temperature of the square lattice, J = 1.
var critical = math.Log(1+math.Sqrt2) / 2

// kaufmanEnergy is the energy per site of the L x L torus at inverse temperature
// b, J = 1, from the partition function
//
//	2 Z = (2 sinh 2b)^(L^2/2) [ prod 2 cosh(L g_odd/2) + prod 2 sinh(L g_odd/2)
//	                          + prod 2 cosh(L g_even/2) + prod 2 sinh(L g_even/2) ],
//	cosh g_l = cosh(2b) coth(2b) - cos(pi l/L), g_0 = 2b + ln tanh b,
//
// products over the odd and the even l from 0 to 2L-1 (B. Kaufman, Phys. Rev. 76,
// 1232 (1949)).
func kaufmanEnergy(l int, b float64) float64 {
	n := float64(l)
	c, coth := math.Cosh(2*b), 1/math.Tanh(2*b)
	slope := 2 * c * (2 - coth*coth) // of cosh(2b) coth(2b)
	var logs, derivatives, signs [4]float64
	for i := range signs {
		signs[i] = 1
	}
	for k := range 2 * l {
		g := math.Acosh(c*coth - math.Cos(math.Pi*float64(k)/n))
		d := slope / math.Sinh(g)
		if k == 0 {
			g, d = 2*b+math.Log(math.Tanh(b)), 2+2/math.Sinh(2*b)
		}
		first := 0
		if k%2 == 0 {
			first = 2
		}
		x := n * g / 2
		logs[first] += math.Log(2 * math.Cosh(x))
		derivatives[first] += n / 2 * d * math.Tanh(x)
		logs[first+1] += math.Log(2 * math.Abs(math.Sinh(x)))
		derivatives[first+1] += n / 2 * d / math.Tanh(x)
		signs[first+1] *= math.Copysign(1, x)
	}
	top := slices.Max(logs[:])
	sum, change := 0.0, 0.0
	for i := range logs {
		w := signs[i] * math.Exp(logs[i]-top)
		sum += w
		change += w * derivatives[i]
	}
	return -coth - change/sum/(n*n)
}

// onsagerEnergy is the energy per site of the infinite square lattice, J = 1 (L.
// Onsager, Phys. Rev. 65, 117 (1944)).
func onsagerEnergy(b float64) float64 {
	k, t := 2*math.Sinh(2*b)/(math.Cosh(2*b)*math.Cosh(2*b)), math.Tanh(2*b)
	return -(1 + 2/math.Pi*(2*t*t-1)*mathext.CompleteK(k*k)) / t
}

// spontaneous is the magnetization per site of the infinite square lattice below
// the critical temperature (C. N. Yang, Phys. Rev. 85, 808 (1952)).
func spontaneous(b float64) float64 {
	return math.Pow(1-math.Pow(math.Sinh(2*b), -4), 1./8)
}

// axisLength is the correlation length of the infinite square lattice along an
// axis above the critical temperature (Onsager; B. M. McCoy, T. T. Wu, The
// Two-Dimensional Ising Model (1973)). Plane sums decay with it as
// cosh((r - L/2)/xi).
func axisLength(b float64) float64 { return 1 / (math.Log(1/math.Tanh(b)) - 2*b) }

// betaOf is the inverse temperature behind a name in testdata/published.json.
func betaOf(t *testing.T, name string) float64 {
	t.Helper()
	if name == "critical" {
		return critical
	}
	var b float64
	if _, err := fmt.Sscan(name, &b); err != nil {
		t.Fatal(err)
	}
	return b
}

// The formulas give the published numbers to their last digit.
func TestOutsideTorusFormulas(t *testing.T) {
	check := func(what string, got, want, digit float64) {
		t.Helper()
		if !(math.Abs(got-want) <= 0.6*digit) {
			t.Errorf("%s: %.10g, published %.10g", what, got, want)
		}
	}
	for _, c := range []struct {
		beta    string
		lengths []int
	}{{"0.35", []int{8, 16, 32}}, {"0.42", []int{8, 16, 32, 64}}, {"critical", []int{8, 16, 32, 64}}, {"0.5", []int{32}}} {
		for _, l := range c.lengths {
			b := betaOf(t, c.beta)
			if c.beta == "critical" {
				b += 1e-12 // at b itself one product is 0, and its logarithm infinite
			}
			check(fmt.Sprintf("energy at beta = %s, L = %d", c.beta, l),
				kaufmanEnergy(l, b), published(t, "torus, energy per site, beta=%s, L=%d", c.beta, l), 1e-8)
		}
	}
	// On the 2 x 2 torus every bond is there twice: it is the ring of 4 at 2 beta.
	u := math.Tanh(0.6)
	check("energy of the 2 x 2 torus at beta = 0.3", kaufmanEnergy(2, 0.3), -2*(u+u*u*u)/(1+u*u*u*u), 1e-12)
	for _, b := range []float64{0.3, 0.6} {
		check(fmt.Sprintf("energy at beta = %g", b), onsagerEnergy(b), published(t, "infinite square lattice, energy per site, beta=%g", b), 1e-8)
		check("its limit", kaufmanEnergy(200, b), onsagerEnergy(b), 1e-10)
	}
	check("magnetization", spontaneous(0.5), published(t, "infinite square lattice, spontaneous magnetization, beta=0.5"), 1e-8)
	for _, b := range []float64{0.35, 0.4} {
		check("correlation length", axisLength(b), published(t, "infinite square lattice, correlation length, beta=%g", b), 1e-5)
	}
}

const torusStudy = `
[lattice]
size = [8, 8]

[hamiltonian]
model = "ising"

[bath]
beta = %.17g

[scan]
size = [%d]

[trajectory]
count  = %d
start  = %q
settle = %g
span   = %g
step   = %g
seed   = 4050

[[observable]]
kind = "energy"

[[observable]]
kind = "magnetization"
`

// Energies of finite tori are Kaufman's, known to a fifth of a percent.
func TestOutsideTorusEnergies(t *testing.T) {
	for _, c := range []struct {
		beta         string
		length       int
		start        string
		settle, span float64
	}{
		{"0.35", 8, "random", 100, 400},
		{"0.35", 16, "random", 100, 200},
		{"0.35", 32, "random", 100, 100},
		{"0.42", 8, "random", 300, 1000},
		{"0.42", 16, "random", 600, 1000},
		{"0.42", 32, "random", 1000, 500},
		{"critical", 8, "random", 600, 2000},
		{"critical", 16, "up", 2000, 2000},
		{"0.5", 32, "up", 100, 100},
	} {
		m := measure(t, kinetic.LaneEngine, fmt.Sprintf(torusStudy, betaOf(t, c.beta), c.length, 16, c.start, c.settle, c.span, c.span/200))[0]
		m.hold(t, "energy per site", m.result.EnergyPerSite, published(t, "torus, energy per site, beta=%s, L=%d", c.beta, c.length), 0.002)
	}
}

// Large tori away from the critical point are the infinite lattice: Onsager's
// energy above and below the critical temperature, and below it Yang's
// magnetization, which a torus of 48 that starts up keeps for e^20 times as long
// as it runs.
func TestOutsideInfiniteLattice(t *testing.T) {
	for _, c := range []struct {
		beta  float64
		start string
	}{{0.3, "random"}, {0.6, "up"}} {
		m := measure(t, kinetic.LaneEngine, fmt.Sprintf(torusStudy, c.beta, 64, 16, c.start, 60.0, 40.0, 0.5))[0]
		m.hold(t, "energy per site", m.result.EnergyPerSite, published(t, "infinite square lattice, energy per site, beta=%g", c.beta), 0.001)
	}
	m := measure(t, kinetic.LaneEngine, fmt.Sprintf(torusStudy, 0.5, 48, 16, "up", 100.0, 100.0, 1.0))[0]
	magnetization := published(t, "infinite square lattice, spontaneous magnetization, beta=0.5")
	m.hold(t, "magnetization", m.observable(t, "magnetization").Mean, 48*48*magnetization, 0.002)
}

const lengthStudy = `
[lattice]
size = [%[1]d, %[1]d]

[hamiltonian]
model = "ising"

[bath]
beta = %[2]g

[trajectory]
count  = 64
settle = %[3]g
span   = %[4]g
step   = %[5]g
seed   = 4051

[[observable]]
kind = "energy"

[covariance]
of = "spin"
every = %[5]g
limit = 1
`

// Correlation lengths from plane sums, on lattices of at least 8 of them.
func TestOutsideCorrelationLength(t *testing.T) {
	for _, c := range []struct {
		beta         float64
		length       int
		settle, span float64
		every        float64 // a snapshot of one lane, the same one after 64 of them
	}{
		{0.35, 24, 60, 1000, 0.5},
		{0.4, 48, 300, 500, 1},
	} {
		m := measure(t, kinetic.LaneEngine, fmt.Sprintf(lengthStudy, c.length, c.beta, c.settle, c.span, c.every))[0]
		want := published(t, "infinite square lattice, correlation length, beta=%g", c.beta)
		for _, d := range m.result.Decay {
			m.hold(t, fmt.Sprintf("xi along axis %d", d.Axis), d.Xi, want, onePercent)
		}
	}
}

const criticalStudy = `
[lattice]
size = [%[1]d, %[1]d]

[hamiltonian]
model = "ising"

[bath]
beta = %.17[2]g

[trajectory]
count  = 32
settle = %[3]g
span   = %[4]g
step   = %[5]g
seed   = 4052

[[observable]]
kind = "magnetization"
`

// criticalGap is the gap of the L x L torus at the critical temperature.
func criticalGap(t *testing.T, l int) float64 {
	return float64(l*l) * (1 - published(t, "critical torus, second eigenvalue, L=%d", l))
}

// The exact values of a study are the published ones to the last digits.
func TestOutsideCriticalTorusExact(t *testing.T) {
	for _, l := range []int{2, 3} {
		m := measure(t, "", fmt.Sprintf(criticalStudy, l, critical, 0.0, 100.0, 1.0))[0]
		x, err := m.exactly()
		if err != nil {
			t.Fatal(err)
		}
		if want := criticalGap(t, l); math.Abs(x.Gap-want) > 1e-12 {
			t.Errorf("%s: gap %.15g, want %.15g", m.label(), x.Gap, want)
		}
	}
}

// The magnetization of the critical torus relaxes almost with its slowest mode,
// on which it has the weight 0.992 at L = 3 and hardly less at L = 5: its tau_int
// lies that little below 1/gap, and every lower bound does.
func TestOutsideCriticalTorus(t *testing.T) {
	for _, c := range []struct {
		length int
		share  float64 // of the slowest mode in the variance of the magnetization, from below
	}{{2, 1}, {3, 0.99}, {5, 0.98}} {
		most := 1 / criticalGap(t, c.length)
		m := measure(t, kinetic.LaneEngine, fmt.Sprintf(criticalStudy, c.length, critical, 8*most, 60*most, most/40))[0]
		o := m.observable(t, "magnetization")
		least := c.share * most
		m.holdBetween(t, "tau_int of the magnetization", o.Integrated, least, most, threePercent)
		b := m.result.SlowMode.Bound
		if !b.OK || b.Value > most || b.Value < 0.9*most {
			t.Errorf("%s: 1/gap is bounded by %.5g (%s), exactly %.5g", m.label(), b.Value, b.Reason, most)
		}
		if i := o.SlowestInterval; !i.OK || i.Low > most || i.High < most {
			t.Errorf("%s: tau_slowest in [%.5g, %.5g] (%s), exactly %.5g", m.label(), i.Low, i.High, i.Reason, most)
		}
	}
}

// holdBetween is hold for a value of which two ends are known.
func (m *measured) holdBetween(t *testing.T, what string, x analysis.Estimate, least, most, precision float64) {
	t.Helper()
	m.hold(t, what, x, math.Min(math.Max(x.Value, least), most), precision)
}
