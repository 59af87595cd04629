package main

import (
	"encoding/json"
	"math"
	"os"
	"slices"
	"strings"
	"testing"

	"sojourn/configs"
	"sojourn/observables/table"
)

// fitted runs a study and returns its fit.
func fitted(t *testing.T, text string) fitJSON {
	t.Helper()
	t.Chdir(t.TempDir())
	if err := os.WriteFile("study.toml", []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	status, stdout, stderr := sojourn("run", "study.toml", "--json", "--quiet", "--audit")
	var out struct{ Fit fitJSON }
	if err := json.Unmarshal([]byte(stdout), &out); err != nil || status != exitDone {
		t.Fatalf("status %d, %v: %s", status, err, stderr)
	}
	return out.Fit
}

// close4 reports a value that is off by more than four standard errors, or whose
// error is larger than most.
func close4(t *testing.T, what string, value, err *float64, want, most float64) {
	t.Helper()
	if value == nil || err == nil {
		t.Errorf("%s is missing", what)
		return
	}
	if math.Abs(*value-want) > 4**err || *err > most {
		t.Errorf("%s: %.5f(%.5f), want %.5f with an error of at most %.5f", what, *value, *err, want, most)
	}
}

const randomChain = `
[lattice]
size = [8]
boundary = "open"
[hamiltonian]
model = "ising"
[[hamiltonian.disorder]]
kind = "gaussian"
of = "bond"
mean = 0.2
sd = 1.0
samples = 3
seed = 21
[scan]
beta = [0.4, 0.9]
[bath]
law = "metropolis"
[trajectory]
count = 8
settle = 100.0
span = 4000.0
step = 0.5
[[observable]]
kind = "energy"
[[observable]]
kind = "terms"
family = "bond-x"
`

// The bonds of an open chain are independent: their means are tanh(beta J)
// (elementary). The couplings are those that the study draws, the same at both
// temperatures.
func TestRandomChain(t *testing.T) {
	fit := fitted(t, randomChain)
	study, err := configs.Load("study.toml")
	if err != nil {
		t.Fatal(err)
	}
	bonds := map[int][]float64{}
	for i, p := range study.Points {
		j := p.Draw().Families[0].Couplings[:7]
		if first := bonds[p.Sample]; first != nil && !slices.Equal(first, j) {
			t.Errorf("sample %d has another coupling at beta %v", p.Sample, p.Spec.Beta)
		}
		bonds[p.Sample] = j
		energy, sum := 0.0, 0.0
		for _, x := range j {
			energy -= x * math.Tanh(p.Spec.Beta*x)
			sum += math.Tanh(p.Spec.Beta * x)
		}
		if fit.Points[i].Key != p.Key {
			t.Fatalf("point %d is another one", i)
		}
		o := fit.Points[i].Observables
		close4(t, "energy", o[0].Mean, o[0].MeanErr, energy, 0.05)
		close4(t, "bonds", o[1].Mean, o[1].MeanErr, sum, 0.05)
	}
	if len(fit.Samples) != 2 || len(fit.Samples[0].Points) != 3 || fit.Samples[1].Beta != 0.9 {
		t.Fatalf("samples %+v", fit.Samples)
	}
	for _, s := range fit.Samples {
		logs := 0.0
		for _, n := range s.Points {
			logs += math.Log(*fit.Points[n].Observables[0].TauInt) / 3
		}
		x := s.Observables[0].TauInt
		if x.MeanLn == nil || math.Abs(*x.MeanLn-logs) > 1e-12 || x.MedianLn == nil || x.Measured != 3 || len(s.Curves) != 3 {
			t.Errorf("energy over samples: %+v, the mean of ln tau_int is %v", x, logs)
		}
	}
	for _, name := range []string{"samples", "sample_curves"} {
		r, err := table.Open("study/fits/" + name + ".parquet")
		if err != nil {
			t.Error(err)
			continue
		}
		r.Close()
	}
	if _, stdout, _ := sojourn("fit", "study"); !strings.Contains(stdout, "3 samples of random couplings") || !strings.Contains(stdout, "typical tau_int") {
		t.Errorf("the print lacks the samples:\n%s", stdout)
	}
	status, stdout, stderr := sojourn("exact", "study.toml", "--json")
	var exact exactJSON
	if err := json.Unmarshal([]byte(stdout), &exact); err != nil || status != exitDone {
		t.Fatalf("status %d, %v: %s", status, err, stderr)
	}
	for i := range exact.Points {
		x, o := exact.Points[i].Observables, fit.Points[i].Observables
		for k := range x {
			close4(t, "exact mean of "+x[k].Name, o[k].Mean, o[k].MeanErr, x[k].Mean, 0.05)
			close4(t, "exact tau_int of "+x[k].Name, o[k].TauInt, o[k].TauIntErr, x[k].TauInt, 0.2**o[k].TauInt)
			close4(t, "exact tau_initial of "+x[k].Name, o[k].TauInitial, o[k].TauInitialErr, x[k].TauInitial, 0.1**o[k].TauInitial)
		}
	}
}

// A torus whose bonds are all negative turns into one whose bonds are all
// positive when every second spin is counted the other way round: its energy is
// Kaufman's (Phys. Rev. 76, 1232 (1949), evaluated). A chain with random signs
// does so in every sample, with tanh(beta) for every bond.
func TestSignsThatGaugeUndoes(t *testing.T) {
	study := func(size, boundary, probability, engine string, samples string) string {
		return `[lattice]
size = ` + size + `
boundary = "` + boundary + `"
[hamiltonian]
model = "ising"
[hamiltonian.disorder]
kind = "plus-minus"
probability = ` + probability + `
samples = ` + samples + `
[bath]
beta = 0.35
[trajectory]
count = 8
settle = 100.0
span = 2000.0
step = 0.5
engine = "` + engine + `"
`
	}
	for _, engine := range []string{"auto", "tiles", "lanes"} {
		fit := fitted(t, study("[8, 8]", "periodic", "1.0", engine, "1"))
		close4(t, engine+": energy per site", fit.Points[0].EnergyPerSite, fit.Points[0].EnergyErr, -0.9191479, 0.01)
		if fit.Samples != nil {
			t.Error("one sample is averaged over")
		}
	}
	fit := fitted(t, study("[10]", "open", "0.5", "classes", "3"))
	for i := range fit.Points {
		o := fit.Points[i].Observables[0]
		close4(t, "energy of a chain", o.Mean, o.MeanErr, -9*math.Tanh(0.35), 0.1)
	}
	if s := fit.Samples[0].Observables[0]; math.Abs(*s.Mean+9*math.Tanh(0.35)) > 0.1 {
		t.Errorf("mean over samples %v", *s.Mean)
	}
}

// Random couplings of all points are held at once: where they do not fit the
// memory they are not even drawn.
func TestCouplingsThatDoNotFit(t *testing.T) {
	study, err := configs.Decode("chain", "", []byte(randomChain))
	if err != nil {
		t.Fatal(err)
	}
	if _, err := prepareAll(study, 500); err == nil || !strings.Contains(err.Error(), "the random couplings of 6 points would need 576 B") {
		t.Errorf("with 500 bytes: %v", err)
	}
	if _, err := prepareAll(study, 1<<30); err != nil {
		t.Errorf("with 1 GiB: %v", err)
	}
}
