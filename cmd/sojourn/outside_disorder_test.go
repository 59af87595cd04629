package main

import (
	"math"
	"testing"

	"sojourn/kinetic"
)

const varyingStudy = `
[lattice]
size = [24]

[hamiltonian]
model = "custom"

[[hamiltonian.family]]
name = "cluster"
x = ["1"]
z = ["x^-1 + x"]

[hamiltonian.disorder]
of = "cluster"
kind = "gaussian"
mean = 0.7
sd = 0.5
seed = 3

[bath]
beta = 0.6
law = "metropolis"
couples = ["Z"]

[trajectory]
count  = 32
settle = 40.0
span   = 3000.0
step   = 0.2
seed   = 4081

[[observable]]
kind = "energy"
`

// Where couplings vary from term to term, terms of the cluster ring are two-state
// systems with rates of their own (see TestOutsideClusterRing).
func TestOutsideVaryingCouplings(t *testing.T) {
	m := measure(t, kinetic.CompositionEngine, varyingStudy)[0]
	beta, mean, time := m.config.Spec.Beta, 0.0, 0.0
	couplings := m.generator.Spec.Families[0].Couplings
	if len(couplings) != m.sites() {
		t.Fatalf("%d couplings on %d sites", len(couplings), m.sites())
	}
	rate := func(j float64) float64 { return 1 + math.Exp(-2*beta*math.Abs(j)) }
	variance := func(j float64) float64 { return math.Pow(j/math.Cosh(beta*j), 2) }
	curve := func(t float64) float64 {
		sum := 0.0
		for _, j := range couplings {
			sum += variance(j) * math.Exp(-rate(j)*t)
		}
		return sum
	}
	for _, j := range couplings {
		mean -= j * math.Tanh(beta*j)
		time += variance(j) / rate(j) / curve(0)
	}
	energy := m.observable(t, "energy")
	m.hold(t, "mean energy", energy.Mean, mean, onePercent)
	m.hold(t, "tau_int of the energy", energy.Integrated, time, threePercent)
	m.holdCurve(t, "energy", curve)
}
