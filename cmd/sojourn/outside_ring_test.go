package main

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"sojourn/analysis"
	"sojourn/kinetic"
)

// ring is the Ising ring of n spins with J = 1: tanh beta and tanh 2 beta, of
// which everything below is made.
type ring struct {
	n      int
	t, th2 float64
}

func newRing(m *measured) ring {
	beta := m.config.Spec.Beta
	return ring{m.sites(), math.Tanh(beta), math.Tanh(2 * beta)}
}

// wave is the relaxation time of the spins' Fourier mode of index k under
// heat-bath rates, on a ring of any length: 1/(1 - tanh(2 beta) cos(2 pi k/N)). k =
// 0 is the magnetization (R. J. Glauber, J. Math. Phys. 4, 294 (1963)).
func (r ring) wave(k int) float64 {
	return 1 / (1 - r.th2*math.Cos(2*math.Pi*float64(k)/float64(r.n)))
}

// covariance is <s_0 s_x> by the transfer matrix (textbook).
func (r ring) covariance(x int) float64 {
	n := float64(r.n)
	return (math.Pow(r.t, float64(x)) + math.Pow(r.t, n-float64(x))) / (1 + math.Pow(r.t, n))
}

// xi is the correlation length: -1/ln tanh beta.
func (r ring) xi() float64 { return -1 / math.Log(r.t) }

// magnetizationVariance is the sum of the covariance over all pairs.
func (r ring) magnetizationVariance() float64 {
	sum := 0.0
	for x := range r.n {
		sum += r.covariance(x)
	}
	return float64(r.n) * sum
}

// energyRate is the rate at which the energy's mode j decays under heat-bath
// rates, j = 1 ... N/2 for even N: 2 (1 - tanh(2 beta) cos q), q = (2j-1) pi/N, two
// fermions of opposite momentum. j = 1 is the slowest (B. U. Felderhof, Rep.
// Math. Phys. 1, 215 (1971), from memory).
func (r ring) energyRate(j int) float64 { return 2 * (1 - r.th2*math.Cos(r.momentum(j))) }

func (r ring) momentum(j int) float64 { return float64(2*j-1) * math.Pi / float64(r.n) }

// energyWeight is the weight of that mode in the energy's autocorrelation,
//
//	4 sin^2 q / (cosh(2 beta) (1 - tanh(2 beta) cos q))^2.
//
// For sqrt(pi) = exp(beta/2 sum ss)/sqrt Z is a product over q > 0 of states
// cos(a/2) |0> + sin(a/2) |q,-q> with tan(a/2) = t sin q/(1 - t cos q), t = tanh beta,
// and its derivative by beta is -(E - <E>)/2 times it: the weight is (da/dbeta)^2.
func (r ring) energyWeight(j int) float64 {
	q := r.momentum(j)
	w := 2 * math.Sin(q) * math.Sqrt(1-r.th2*r.th2) / (1 - r.th2*math.Cos(q))
	return w * w
}

// energyCovariance is the energy's autocorrelation.
func (r ring) energyCovariance(t float64) float64 {
	sum := 0.0
	for j := 1; j <= r.n/2; j++ {
		sum += r.energyWeight(j) * math.Exp(-r.energyRate(j)*t)
	}
	return sum
}

// energyTime is the integral of the energy's normalised autocorrelation.
func (r ring) energyTime() float64 {
	sum := 0.0
	for j := 1; j <= r.n/2; j++ {
		sum += r.energyWeight(j) / r.energyRate(j)
	}
	return sum / r.energyCovariance(0)
}

const ringStudy = `
[lattice]
size = [8]

[hamiltonian]
model = "ising"

[bath]
beta = 0.5

[trajectory]
start  = "random"
count  = %d
settle = %g
span   = %g
step   = 0.3
seed   = 4040

[scan]
size = [%s]

[[observable]]
kind = "magnetization"
single = true

[[observable]]
kind = "energy"
`

// The magnetization of a ring of any length relaxes in the time
// 1/(1 - tanh 2 beta), as a single exponential; the energy by pairs of fermions.
// Relaxation times do not grow with the ring.
func TestOutsideRingTimes(t *testing.T) {
	points := measure(t, kinetic.LaneEngine, fmt.Sprintf(ringStudy, 32, 60.0, 240.0, "8, 16, 32, 64"))
	var results []analysis.Result
	for i := range points {
		m := &points[i]
		r := newRing(m)
		magnetization, energy := m.observable(t, "magnetization"), m.observable(t, "energy")
		m.hold(t, "tau_int of the magnetization", magnetization.Integrated, r.wave(0), threePercent)
		m.hold(t, "tau_initial of the magnetization", magnetization.Initial, r.wave(0), threePercent)
		m.hold(t, "tau_single of the magnetization", magnetization.Single, r.wave(0), threePercent)
		m.hold(t, "variance of the magnetization", magnetization.Variance, r.magnetizationVariance(), onePercent)
		if b := m.result.SlowMode.Bound; !b.OK || b.Value > r.wave(0) || b.Value < 0.9*r.wave(0) {
			t.Errorf("%s: 1/gap is bounded by %.4g (%s), exactly %.4g", m.label(), b.Value, b.Reason, r.wave(0))
		}
		m.holdCurve(t, "magnetization", func(t float64) float64 {
			return r.magnetizationVariance() * math.Exp(-t/r.wave(0))
		})
		m.hold(t, "tau_int of the energy", energy.Integrated, r.energyTime(), threePercent)
		m.hold(t, "mean energy", energy.Mean, -float64(r.n)*r.covariance(1), onePercent)
		m.hold(t, "variance of the energy", energy.Variance, r.energyCovariance(0), onePercent)
		m.holdCurve(t, "energy", r.energyCovariance)
		results = append(results, m.result)
	}
	for _, trend := range analysis.Compare(results).Trends {
		if trend.Quantity != "tau_int" {
			continue
		}
		t.Logf("%s of %s: %s", trend.Quantity, trend.Observable, trend.Regime)
		if trend.Observable == "magnetization" && !strings.HasPrefix(trend.Regime, "flat") || strings.Contains(trend.Regime, "grows") {
			t.Errorf("tau_int of the %s against length: %s", trend.Observable, trend.Regime)
		}
	}
}

// The modes of the energy are those of the exact generator: their rates and
// weights give its autocorrelation on small rings.
func TestOutsideRingEnergyModes(t *testing.T) {
	for _, n := range []string{"4", "6", "8"} {
		for _, m := range measure(t, "", fmt.Sprintf(ringStudy, 1, 0.0, 100.0, n)) {
			x, err := m.exactly()
			if err != nil {
				t.Fatal(err)
			}
			r := newRing(&m)
			for _, c := range []struct {
				what      string
				got, want float64
			}{
				{"gap", x.Gap, 1 / r.wave(0)},
				{"variance", x.Observables[1].Variance, r.energyCovariance(0)},
				{"tau_int", x.Observables[1].TauInt, r.energyTime()},
				{"tau_slowest", x.Observables[1].TauSlowest, 1 / r.energyRate(1)},
				{"tau_int of the magnetization", x.Observables[0].TauInt, r.wave(0)},
			} {
				if !(math.Abs(c.got-c.want) <= 1e-9*c.want) {
					t.Errorf("%s: %s %.15g, want %.15g", m.label(), c.what, c.got, c.want)
				}
			}
		}
	}
}

// The slowest mode that the energy sees lies where the data say that it does:
// above the lower bound, inside the interval, whose assumption holds (the mode
// carries more than a fifth of the variance).
func TestOutsideRingSlowestEnergy(t *testing.T) {
	for _, m := range measure(t, kinetic.LaneEngine, fmt.Sprintf(ringStudy, 32, 60.0, 240.0, "4, 8")) {
		r := newRing(&m)
		energy := m.observable(t, "energy")
		slowest := 1 / r.energyRate(1)
		if share := r.energyWeight(1) / r.energyCovariance(0); share < energy.WeightFloor {
			t.Fatalf("%s: the slowest mode carries %.2g of the variance", m.label(), share)
		}
		b, i := energy.SlowestBound, energy.SlowestInterval
		t.Logf("%s: tau_slowest of the energy above %.4g, in [%.4g, %.4g], exactly %.4g", m.label(), b.Value, i.Low, i.High, slowest)
		if !b.OK || b.Value > slowest || b.Value < 0.6*slowest {
			t.Errorf("%s: tau_slowest of the energy is bounded by %.4g (%s), exactly %.4g", m.label(), b.Value, b.Reason, slowest)
		}
		if !i.OK || i.Low > slowest || i.High < slowest || i.High > 2*slowest {
			t.Errorf("%s: tau_slowest of the energy in [%.4g, %.4g] (%s), exactly %.4g", m.label(), i.Low, i.High, i.Reason, slowest)
		}
	}
}

const wavesStudy = `
[lattice]
size = [12]

[hamiltonian]
model = "ising"

[bath]
beta = 0.6

[trajectory]
count  = 32
settle = 60.0
span   = %g
step   = 0.25
seed   = 4041

[[observable]]
kind = "fourier"
family = "spin"
wavevector = [1]

[[observable]]
kind = "fourier"
family = "spin"
wavevector = [3]

[[observable]]
kind = "fourier"
family = "spin"
wavevector = [6]

[[observable]]
kind = "local"
family = "spin"

[[observable]]
kind = "terms"
family = "bond"
`

// Every wave on the ring fades at its own rate, and single spins by all of them.
func TestOutsideRingWaves(t *testing.T) {
	for _, m := range measure(t, kinetic.LaneEngine, fmt.Sprintf(wavesStudy, 200.0)) {
		r := newRing(&m)
		n := float64(r.n)
		size := func(k int) float64 { // N times the structure factor
			sum := 0.0
			for x := range r.n {
				sum += n * r.covariance(x) * math.Cos(2*math.Pi*float64(k*x)/n)
			}
			return sum
		}
		for _, k := range []int{1, 3, 6} {
			name := fmt.Sprintf("fourier-spin-%d", k)
			o := m.observable(t, name)
			m.hold(t, "tau_int of "+name, o.Integrated, r.wave(k), threePercent)
			m.hold(t, "tau_initial of "+name, o.Initial, r.wave(k), threePercent)
			m.holdCurve(t, name, func(t float64) float64 { return size(k) * math.Exp(-t/r.wave(k)) })
		}
		local := func(t float64) float64 {
			sum := 0.0
			for k := range r.n {
				sum += size(k) / (n * n) * math.Exp(-t/r.wave(k))
			}
			return sum
		}
		m.holdCurve(t, "local-spin", local)
		time := 0.0
		for k := range r.n {
			time += size(k) / (n * n) * r.wave(k)
		}
		m.hold(t, "tau_int of single spins", m.observable(t, "local-spin").Integrated, time, threePercent)
		m.holdCurve(t, "terms-bond", r.energyCovariance)
	}
}

const ringSpaceStudy = `
[lattice]
size = [24]

[hamiltonian]
model = "ising"

[bath]
beta = 0.8

[scan]
size = [6, 24]

[trajectory]
count  = 32
settle = 200.0
span   = 5000.0
step   = 1.0
seed   = 4042

[[observable]]
kind = "energy"

[covariance]
of = "spin"
every = 1.0
limit = 6
`

// Spins on the ring covary as the transfer matrix says, and both correlation
// lengths follow from it: xi = -1/ln tanh beta, and the second-moment length
// 1/(2 sinh(1/(2 xi))) on a ring of any length (elementary: the structure factor
// is proportional to 1/(1 - 2 t cos k + t^2), t = tanh beta).
func TestOutsideRingSpace(t *testing.T) {
	for _, m := range measure(t, kinetic.LaneEngine, ringSpaceStudy) {
		r := newRing(&m)
		curve := m.result.Spatial[0]
		for x := 1; x < len(curve.K); x++ {
			k := analysis.Estimate{Value: curve.K[x], Err: curve.Err[x], OK: true}
			if s := off(k, r.covariance(x), 1, onePercent); s != "" {
				t.Errorf("%s: covariance at distance %d: %s", m.label(), x, s)
			}
		}
		d := m.result.Decay[0]
		m.hold(t, "second-moment xi", d.SecondMoment, 1/(2*math.Sinh(1/(2*r.xi()))), onePercent)
		if r.n > 6 { // six spins are too few for a fit
			m.hold(t, "xi", d.Xi, r.xi(), onePercent)
			m.hold(t, "amplitude", d.Amplitude, 1/(1+math.Pow(r.t, float64(r.n))), onePercent)
		}
	}
}
