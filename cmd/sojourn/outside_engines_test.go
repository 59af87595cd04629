package main

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"testing"

	"sojourn/analysis"
	"sojourn/configs"
	"sojourn/kinetic"
)

const engineStudy = `
[lattice]
size = [12]

[hamiltonian]
model = "ising"

[bath]
beta = 0.4

[trajectory]
count  = 32
settle = 40.0
span   = %g
step   = 0.25
seed   = 4080

[[observable]]
kind = "energy"

[[observable]]
kind = "magnetization"
`

// Every engine gives the energy of a ring, its magnetization's relaxation time
// and its energy's autocorrelation.
func TestOutsideEngines(t *testing.T) {
	for _, engine := range kinetic.EngineNames() {
		span := 5000.0
		switch engine {
		case kinetic.CompositionEngine:
			continue // see TestOutsideVaryingCouplings
		case kinetic.LaneEngine:
			span = 180
		}
		m := measure(t, engine, fmt.Sprintf(engineStudy, span))[0]
		r := newRing(&m)
		m.hold(t, "mean energy", m.observable(t, "energy").Mean, -float64(r.n)*r.covariance(1), onePercent)
		m.hold(t, "tau_int of the magnetization", m.observable(t, "magnetization").Integrated, r.wave(0), threePercent)
		m.holdCurve(t, "energy", r.energyCovariance)
	}
}

// The command itself, through files: run prints, and fit reads from the
// directory alone, the numbers of Glauber's ring (see TestOutsideRingTimes).
func TestOutsideCommand(t *testing.T) {
	dir := t.TempDir()
	study := filepath.Join(dir, "ring.toml")
	if err := os.WriteFile(study, fmt.Appendf(nil, engineStudy, 500.0), 0o666); err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(dir, "out")
	status, ran, stderr := sojourn("run", study, "-o", out, "--json", "--quiet")
	if status != exitDone {
		t.Fatalf("run: status %d: %s", status, stderr)
	}
	var run struct{ Fit json.RawMessage }
	if err := json.Unmarshal([]byte(ran), &run); err != nil {
		t.Fatal(err)
	}
	status, fitted, stderr := sojourn("fit", out, "--json")
	if status != exitDone {
		t.Fatalf("fit: status %d: %s", status, stderr)
	}
	loaded, err := configs.Load(study)
	if err != nil {
		t.Fatal(err)
	}
	q, err := prepare(&loaded.Points[0], 0)
	if err != nil {
		t.Fatal(err)
	}
	m := measured{prepared: q}
	r := newRing(&m)
	for _, text := range []string{string(run.Fit), fitted} {
		var fit struct {
			Points []struct {
				Observables []struct {
					Name       string
					Mean       float64
					MeanErr    float64 `json:"mean_err"`
					TauInt     float64 `json:"tau_int"`
					TauErr     float64 `json:"tau_int_err"`
					Initial    float64 `json:"tau_initial"`
					InitialErr float64 `json:"tau_initial_err"`
				}
				EnergyPerSite    float64 `json:"energy_per_site"`
				EnergyPerSiteErr float64 `json:"energy_per_site_err"`
			}
		}
		if err := json.Unmarshal([]byte(text), &fit); err != nil {
			t.Fatal(err)
		}
		p := fit.Points[0]
		m.hold(t, "energy per site", analysis.Estimate{Value: p.EnergyPerSite, Err: p.EnergyPerSiteErr, OK: true}, -r.covariance(1), onePercent)
		for _, o := range p.Observables {
			time := r.energyTime()
			if o.Name == "magnetization" {
				time = r.wave(0)
				m.hold(t, "tau_initial of the magnetization", analysis.Estimate{Value: o.Initial, Err: o.InitialErr, OK: true}, time, threePercent)
			} else {
				m.hold(t, "mean energy", analysis.Estimate{Value: o.Mean, Err: o.MeanErr, OK: true}, -float64(r.n)*r.covariance(1), onePercent)
			}
			m.hold(t, "tau_int of the "+o.Name, analysis.Estimate{Value: o.TauInt, Err: o.TauErr, OK: true}, time, threePercent)
		}
	}
}
