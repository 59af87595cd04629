//go:build long

package main

import (
	"fmt"
	"math"
	"testing"

	"sojourn/kinetic"
)

// Heavier checks of the same kind, on larger lattices or three times as sharp:
// some minutes.

// Kaufman's energies where relaxation is slow, known to a thousandth.
func TestLongOutsideTorusEnergies(t *testing.T) {
	for _, c := range []struct {
		beta         string
		length       int
		settle, span float64
	}{
		{"0.42", 64, 3000, 2000},
		{"critical", 8, 1000, 20000},
		{"critical", 16, 3000, 20000},
		{"critical", 32, 10000, 10000},
		{"critical", 64, 20000, 10000},
	} {
		start := "random"
		if c.beta == "critical" {
			start = "up"
		}
		m := measure(t, kinetic.LaneEngine, fmt.Sprintf(torusStudy, betaOf(t, c.beta), c.length, 16, start, c.settle, c.span, c.span/1000))[0]
		m.hold(t, "energy per site", m.result.EnergyPerSite, published(t, "torus, energy per site, beta=%s, L=%d", c.beta, c.length), 0.001)
	}
}

// Correlation lengths on larger lattices, and up to 12 cells.
func TestLongOutsideCorrelationLength(t *testing.T) {
	for _, c := range []struct {
		beta         float64
		length       int
		settle, span float64
	}{
		{0.35, 32, 60, 4000},
		{0.4, 64, 300, 2000},
		{0.42, 96, 1500, 3000},
	} {
		m := measure(t, kinetic.LaneEngine, fmt.Sprintf(lengthStudy, c.length, c.beta, c.settle, c.span, 1.0))[0]
		for _, d := range m.result.Decay {
			m.hold(t, fmt.Sprintf("xi along axis %d", d.Axis), d.Xi, axisLength(c.beta), onePercent)
		}
	}
}

// Relaxation times of the ring to a percent, up to tau = 28.
func TestLongOutsideRingTimes(t *testing.T) {
	for _, beta := range []float64{0.5, 0.8, 1} {
		slowest := 1 / (1 - math.Tanh(2*beta))
		text := fmt.Sprintf(longRingStudy, beta, 20*slowest, 500*slowest, slowest/12)
		for _, m := range measure(t, kinetic.LaneEngine, text) {
			r := newRing(&m)
			magnetization := m.observable(t, "magnetization")
			m.hold(t, "tau_int of the magnetization", magnetization.Integrated, r.wave(0), onePercent)
			m.hold(t, "tau_initial of the magnetization", magnetization.Initial, r.wave(0), onePercent)
			m.hold(t, "tau_int of the first wave", m.observable(t, "fourier-spin-1").Integrated, r.wave(1), onePercent)
			m.hold(t, "tau_int of the energy", m.observable(t, "energy").Integrated, r.energyTime(), onePercent)
		}
	}
}

const longRingStudy = `
[lattice]
size = [16]

[hamiltonian]
model = "ising"

[bath]
beta = %g

[scan]
size = [16, 64]

[trajectory]
count  = 32
settle = %g
span   = %g
step   = %g
seed   = 4090

[[observable]]
kind = "magnetization"

[[observable]]
kind = "energy"

[[observable]]
kind = "fourier"
family = "spin"
wavevector = [1]
`

// The critical torus of 3, whose magnetization is not quite its slowest mode, to
// half a percent: enough to tell its tau_int from 1/gap.
func TestLongOutsideCriticalTorus(t *testing.T) {
	most := 1 / criticalGap(t, 3)
	m := measure(t, kinetic.LaneEngine, fmt.Sprintf(criticalStudy, 3, critical, 8*most, 1500*most, most/20))[0]
	x, err := m.exactly()
	if err != nil {
		t.Fatal(err)
	}
	m.hold(t, "tau_int of the magnetization", m.observable(t, "magnetization").Integrated, x.Observables[0].TauInt, 0.005)
	m.hold(t, "tau_initial of the magnetization", m.observable(t, "magnetization").Initial, x.Observables[0].TauInitial, 0.005)
}
