package main

import (
	"fmt"
	"math"
	"testing"

	"sojourn/kinetic"
)

// outsideLaw is a law as a study asks for it, and as the literature has it: the
// rate of a jump that hands the energy w to a bath of inverse temperature beta.
type outsideLaw struct {
	name string
	keys string
	rate func(w, beta float64) float64
}

// outsideLaws are laws with G(0) > 0. The table is of the energies that flips on
// a ring hand over, or those of a toric code, in units of J.
func outsideLaws() []outsideLaw {
	return []outsideLaw{
		// R. J. Glauber, J. Math. Phys. 4, 294 (1963).
		{"heat-bath", "law = \"heat-bath\"\nrate = 1.25", func(w, beta float64) float64 { return 1.25 / (1 + math.Exp(-beta*w)) }},
		// N. Metropolis et al., J. Chem. Phys. 21, 1087 (1953).
		{"metropolis", "law = \"metropolis\"\nrate = 0.75", func(w, beta float64) float64 { return 0.75 * math.Min(1, math.Exp(beta*w)) }},
		{"symmetric", "law = \"symmetric\"\nrate = 0.5", func(w, beta float64) float64 { return 0.5 * math.Exp(beta*w/2) }},
		// Spectral density proportional to w, Bose occupation (A. J. Leggett et al.,
		// Rev. Mod. Phys. 59, 1 (1987)).
		{"ohmic", "law = \"ohmic\"\nrate = 0.5", func(w, beta float64) float64 { return bose(0.5, w, beta, math.Inf(1)) }},
		{"ohmic with cutoff", "law = \"power\"\nexponent = 1.0\nrate = 0.5\ncutoff = 5.0", func(w, beta float64) float64 { return bose(0.5, w, beta, 5) }},
		// Detailed balance gives the rates at -w.
		{"table", "law = \"table\"\nenergies = [0.0, 4.0]\nrates = [0.6, 1.7]", func(w, beta float64) float64 {
			switch w {
			case 0:
				return 0.6
			case 4:
				return 1.7
			case -4:
				return 1.7 * math.Exp(-4*beta)
			}
			return math.NaN()
		}},
	}
}

// bose is kappa w exp(-|w|/cutoff)/(1 - exp(-beta w)).
func bose(kappa, w, beta, cutoff float64) float64 {
	if w == 0 {
		return kappa / beta
	}
	return kappa * w * math.Exp(-math.Abs(w)/cutoff) / -math.Expm1(-beta*w)
}

const lawStudy = `
[lattice]
size = [%d]

[hamiltonian]
model = "ising"

[bath]
beta = 0.3
%s

[trajectory]
count  = 32
settle = 60.0
span   = %g
step   = 0.2
seed   = 4070

[[observable]]
kind = "magnetization"

[[observable]]
kind = "energy"
`

// triangle is the Ising ring of 3 spins, J = 1: with beta, <E>, and for a
// function that is a, b, -b, -a at magnetization 3, 1, -1, -3 the generator
//
//	(L f)(3) = 3 G(-4) (b - a),   (L f)(1) = G(4) (a - b) - 4 G(0) b.
//
// Its smaller eigenvalue is the gap, and (3, 1)(-L)^-1(3, 1) weighted by exp(-beta E)
// the integral of the magnetization's autocorrelation (elementary).
func triangle(beta float64, rate func(w, beta float64) float64) (energy, gap, time float64) {
	up, zero, down := rate(-4, beta), rate(0, beta), rate(4, beta)
	cold, hot := math.Exp(3*beta), 3*math.Exp(-beta)
	energy = (-3*cold + hot) / (cold + hot)
	trace, det := 3*up+down+4*zero, 12*up*zero
	gap = (trace - math.Sqrt(trace*trace-4*det)) / 2
	// -L (a, b) = (3, 1)
	b := (1 + down/up) / (4 * zero)
	a := b + 1/up
	time = (cold*3*a + hot*b) / (cold*9 + hot)
	return energy, gap, time
}

// Relaxation of the ring of 3 under every law that has no closed class, and that
// of 4 against its enumerated generator. Statics do not depend on the law.
func TestOutsideLaws(t *testing.T) {
	for _, law := range outsideLaws() {
		m := measure(t, kinetic.LaneEngine, fmt.Sprintf(lawStudy, 3, law.keys, 240.0))[0]
		x, err := m.exactly()
		if err != nil {
			t.Fatal(err)
		}
		energy, gap, time := triangle(m.config.Spec.Beta, law.rate)
		if math.Abs(x.Gap-gap) > 1e-10*gap {
			t.Errorf("%s, %s: gap %.12g, want %.12g", m.label(), law.name, x.Gap, gap)
		}
		if got := x.Observables[0].TauInt; math.Abs(got-time) > 1e-9*time {
			t.Errorf("%s, %s: exact tau_int of the magnetization %.12g, want %.12g", m.label(), law.name, got, time)
		}
		m.hold(t, law.name+": tau_int of the magnetization", m.observable(t, "magnetization").Integrated, time, threePercent)
		m.hold(t, law.name+": mean energy", m.observable(t, "energy").Mean, energy, onePercent)

		m = measure(t, kinetic.LaneEngine, fmt.Sprintf(lawStudy, 4, law.keys, 240.0))[0]
		if x, err = m.exactly(); err != nil {
			t.Fatal(err)
		}
		m.hold(t, law.name+": tau_int of the magnetization", m.observable(t, "magnetization").Integrated, x.Observables[0].TauInt, threePercent)
		m.hold(t, law.name+": tau_int of the energy", m.observable(t, "energy").Integrated, x.Observables[1].TauInt, threePercent)
		m.hold(t, law.name+": mean energy", m.observable(t, "energy").Mean, -4*newRing(&m).covariance(1), onePercent)
	}
}

const toricStudy = `
[lattice]
size = [3, 3]

[scan]
size = [2, 3]

[hamiltonian]
%s

[bath]
beta = 0.7
couples = ["X", "Z"]
%s

[trajectory]
count  = 32
settle = 40.0
span   = 60.0
step   = 0.5
seed   = 4071

[[observable]]
kind = "terms"
family = "plaquette"

[[observable]]
kind = "terms"
family = "star"
`

const customToric = `model = "custom"
sites_per_cell = 2

[[hamiltonian.family]]
name = "star"
x = ["1 + x^-1", "1 + y^-1"]
coupling = 0.5

[[hamiltonian.family]]
name = "plaquette"
z = ["1 + y", "1 + x"]
`

// toricMean is the mean of one of n terms that are independent but for their
// product, which is 1: (t + t^(n-1))/(1 + t^n), t = tanh(beta J) (elementary).
func toricMean(n int, betaJ float64) float64 {
	t := math.Tanh(betaJ)
	return (t + math.Pow(t, float64(n-1))) / (1 + math.Pow(t, float64(n)))
}

// Plaquettes and stars of the toric code on small tori, built in and spelt out,
// under every law.
func TestOutsideToricMeans(t *testing.T) {
	for _, c := range []struct {
		hamiltonian string
		star        float64
	}{{`model = "toric-code"`, 1}, {customToric, 0.5}} {
		for _, law := range outsideLaws() {
			if law.name == "table" && c.star != 1 {
				law.keys = "law = \"table\"\nenergies = [0.0, 2.0, 4.0]\nrates = [0.6, 1.2, 1.7]"
			}
			for _, m := range measure(t, kinetic.LaneEngine, fmt.Sprintf(toricStudy, c.hamiltonian, law.keys)) {
				n, beta := m.generator.Cells(), m.config.Spec.Beta
				m.hold(t, law.name+": plaquettes", m.observable(t, "terms-plaquette").Mean, float64(n)*toricMean(n, beta), onePercent)
				m.hold(t, law.name+": stars", m.observable(t, "terms-star").Mean, float64(n)*toricMean(n, beta*c.star), onePercent)
			}
		}
	}
}

const triangularStudy = `
[lattice]
size = [4, 4]

[hamiltonian]
model = "triangular-plaquette"

[scan]
size = [4, 8]

[bath]
beta = 0.8

[trajectory]
count  = 32
settle = 100.0
span   = 100.0
step   = 0.5
seed   = 4072

[[observable]]
kind = "energy"
`

// Terms of the triangular plaquette model are independent on an L x L torus, L a
// power of two: their mean is tanh beta (M. E. J. Newman, C. Moore, Phys. Rev. E
// 60, 5068 (1999)).
func TestOutsideTriangularPlaquette(t *testing.T) {
	for _, m := range measure(t, kinetic.LaneEngine, triangularStudy) {
		n, th := float64(m.sites()), math.Tanh(m.config.Spec.Beta)
		m.hold(t, "mean energy", m.observable(t, "energy").Mean, -n*th, onePercent)
		m.hold(t, "variance of the energy", m.observable(t, "energy").Variance, n*(1-th*th), onePercent)
	}
}

const clusterStudy = `
[lattice]
size = [12]

[hamiltonian]
model = "custom"

[[hamiltonian.family]]
name = "cluster"
x = ["1"]
z = ["x^-1 + x"]
coupling = %g

[bath]
beta = 0.6
couples = ["Z"]
%s

[trajectory]
count  = 32
settle = 40.0
span   = %g
step   = 0.1
seed   = 4073

[[observable]]
kind = "energy"

[[observable]]
kind = "local"
family = "cluster"
`

// Terms of the cluster ring, X times the Z of both neighbours, are turned over
// by the Z of their own site alone: each is a two-state system of its own that
// relaxes at the rate G(w) + G(-w), w = 2J (elementary).
func TestOutsideClusterRing(t *testing.T) {
	for _, law := range outsideLaws() {
		coupling := 0.8
		if law.name == "table" {
			coupling = 2 // w = 4
		}
		for _, engine := range []string{kinetic.ClassEngine, kinetic.LaneEngine} {
			span := 1000.0
			if engine == kinetic.LaneEngine {
				span = 60
			}
			m := measure(t, engine, fmt.Sprintf(clusterStudy, coupling, law.keys, span))[0]
			beta, n := m.config.Spec.Beta, float64(m.sites())
			rate := law.rate(2*coupling, beta) + law.rate(-2*coupling, beta)
			th := math.Tanh(beta * coupling)
			energy := m.observable(t, "energy")
			m.hold(t, law.name+": mean energy", energy.Mean, -n*coupling*th, onePercent)
			if engine == kinetic.LaneEngine {
				m.hold(t, law.name+": tau_int of the energy", energy.Integrated, 1/rate, threePercent)
				m.holdCurve(t, "energy", func(t float64) float64 { return n * coupling * coupling * (1 - th*th) * math.Exp(-rate*t) })
				continue
			}
			m.hold(t, law.name+": tau_int of single terms", m.observable(t, "local-cluster").Integrated, 1/rate, threePercent)
			m.holdCurve(t, "local-cluster", func(t float64) float64 { return (1 - th*th) * math.Exp(-rate*t) })
		}
	}
}
