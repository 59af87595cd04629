package main

import (
	"encoding/json"
	"math"
	"os"
	"strings"
	"testing"

	"sojourn/configs"
)

// preparedPoint compiles the first point of a study file.
func preparedPoint(t *testing.T, path string) *prepared {
	t.Helper()
	s, err := configs.Load(path)
	if err != nil {
		t.Fatal(err)
	}
	q, err := prepare(&s.Points[0], 0)
	if err != nil {
		t.Fatal(err)
	}
	return q
}

const againstStudy = `
[lattice]
size = [6]
[hamiltonian]
model = "ising"
[bath]
beta = 0.4
[scan]
size = [6, 16]
[trajectory]
count = 16
settle = 20.0
span = 400.0
step = 0.25
seed = 4
engine = "classes"
`

// Estimates of a small ring lie within 4 standard errors of the exact values
// beside them; a ring that is too large is named with its number of states.
func TestFitAgainstExact(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("study.toml", []byte(againstStudy), 0o666); err != nil {
		t.Fatal(err)
	}
	if status, _, stderr := sojourn("run", "study.toml", "--quiet"); status != exitDone {
		t.Fatal(stderr)
	}
	status, stdout, stderr := sojourn("fit", "study", "--against-exact", "--json")
	var fit fitJSON
	if err := json.Unmarshal([]byte(stdout), &fit); err != nil || status != exitDone {
		t.Fatalf("status %d, %v: %s", status, err, stderr)
	}
	small, large := fit.Points[0], fit.Points[1]
	if small.Exact == nil || math.Abs(*small.Exact.Gap-(1-math.Tanh(0.8))) > 1e-10 || small.Exact.States != 64 {
		t.Errorf("the ring of 6: %+v", small.Exact)
	}
	for _, o := range small.Observables {
		x := o.Exact
		if x == nil {
			t.Errorf("%s has no exact values", o.Name)
			continue
		}
		for what, d := range map[string]*float64{"mean": x.MeanDeviation, "variance": x.VarianceDeviation, "tau_initial": x.TauInitialDeviation, "tau_int": x.TauIntDeviation} {
			if d == nil {
				t.Errorf("%s: no deviation of the %s", o.Name, what)
			} else if !(math.Abs(*d) <= 4) {
				t.Errorf("%s: the %s is %.2g standard errors off", o.Name, what, *d)
			}
		}
		if want := (*o.TauInt - *x.TauInt) / *o.TauIntErr; math.Abs(want-*x.TauIntDeviation) > 1e-9 {
			t.Errorf("%s: tau_int deviates by %v, not %v", o.Name, want, *x.TauIntDeviation)
		}
	}
	if large.Exact == nil || !strings.Contains(large.Exact.Reason, "65536 states") || large.Observables[0].Exact != nil {
		t.Errorf("the ring of 16: %+v", large.Exact)
	}
	_, text, _ := sojourn("fit", "study", "--against-exact")
	for _, what := range []string{"Against exact values", "2.97652", "not compared: the lattice has 65536 states", "8 deviations"} {
		if !strings.Contains(text, what) {
			t.Errorf("the print lacks %q:\n%s", what, text)
		}
	}
	if _, text, _ = sojourn("fit", "study"); strings.Contains(text, "exact values") {
		t.Error("exact values are printed without being asked for")
	}
}
