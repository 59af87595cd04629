package main

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"sojourn/kinetic/models"
)

// The help shows every verb, flag and exit status that there is.
func TestHelpNamesEverything(t *testing.T) {
	_, top, _ := sojourn("--help")
	for i := range verbs {
		v := &verbs[i]
		if !strings.Contains(top, v.name) || !strings.Contains(top, v.summary) {
			t.Errorf("the help lacks the verb %s", v.name)
		}
		for _, args := range [][]string{{"help", v.name}, {v.name, "--help"}, {v.name, "-h"}} {
			status, text, stderr := sojourn(args...)
			if status != exitDone || stderr != "" {
				t.Errorf("%v: status %d, %s", args, status, stderr)
			}
			for _, name := range append([]string{"help"}, v.flags...) {
				if !strings.Contains(text, "--"+name) {
					t.Errorf("%v does not explain --%s", args, name)
				}
			}
			for _, line := range strings.Split(text, "\n") {
				if len(line) > 100 {
					t.Errorf("%v: a line of %d characters: %s", args, len(line), line)
				}
			}
		}
		for _, e := range v.examples {
			if fields := strings.Fields(e.command); fields[0] != "sojourn" || fields[1] != v.name {
				t.Errorf("the example %q is not one of %s", e.command, v.name)
			}
		}
	}
	for _, e := range exits {
		if !strings.Contains(top, e.means) {
			t.Errorf("the help lacks exit status %s", e.status)
		}
	}
}

// Every verb refuses a flag that it does not have, also where another verb has
// it, and says so as JSON if asked.
func TestForeignFlagsAreRefused(t *testing.T) {
	t.Chdir(t.TempDir())
	for i := range verbs {
		v := &verbs[i]
		own := map[string]bool{}
		for _, name := range v.flags {
			own[name] = true
		}
		for _, f := range append([]option{{name: "colour"}}, flags...) {
			if own[f.name] {
				continue
			}
			status, stdout, stderr := sojourn(v.name, "--json", "--"+f.name)
			var e struct{ Error struct{ Message string } }
			if err := json.Unmarshal([]byte(stdout), &e); err != nil {
				t.Errorf("%s --%s: %v in %q", v.name, f.name, err, stdout)
			}
			if status != exitBadRequest || !strings.Contains(e.Error.Message, f.name) || !strings.Contains(stderr, f.name) {
				t.Errorf("%s --%s: status %d, %s", v.name, f.name, status, stderr)
			}
		}
	}
}

// Every built-in Hamiltonian is listed, and described with its parameters and
// its source.
func TestModelsAreDescribed(t *testing.T) {
	_, all, _ := sojourn("models")
	for _, m := range models.All() {
		status, text, _ := sojourn("models", m.Name)
		if status != exitDone || !strings.Contains(all, text) {
			t.Errorf("%s: status %d, or the list says something else", m.Name, status)
		}
		flat := strings.Join(strings.Fields(text), " ")
		for _, what := range []string{m.Name, m.Summary, m.Formula, m.Ground, m.Paper} {
			if !strings.Contains(flat, strings.Join(strings.Fields(what), " ")) {
				t.Errorf("%s: %q is not said", m.Name, what)
			}
		}
		for _, p := range m.Parameters {
			if !strings.Contains(flat, p.Name+" = ") {
				t.Errorf("%s: the parameter %s is not described", m.Name, p.Name)
			}
		}
		for _, line := range strings.Split(text, "\n") {
			if len(line) > 100 {
				t.Errorf("%s: a line of %d characters: %s", m.Name, len(line), line)
			}
		}
	}
	status, _, stderr := sojourn("models", "no-such-model")
	if status != exitBadRequest || !strings.Contains(stderr, models.All()[0].Name) {
		t.Errorf("an unknown model: status %d, %s", status, stderr)
	}
}

// keys of the JSON of each verb, which programs rely on; [] stands for the
// elements of a list, a trailing ? for a key that may be absent.
var contractKeys = map[string][]string{
	"plan": {"points[].point", "points[].key", "points[].beta", "points[].length", "points[].sites", "points[].terms",
		"points[].encoded_qubits?", "points[].engine", "points[].why", "points[].bytes", "points[].jumps", "points[].seconds"},
	"run": {"dir", "complete", "points[].point", "points[].key", "points[].beta", "points[].length", "points[].engine",
		"points[].units", "points[].trajectories", "points[].jumps", "points[].seconds"},
	"fit": {"dir", "points[].point", "points[].key", "points[].beta", "points[].length", "points[].size", "points[].equilibrated",
		"points[].observables[].name", "points[].observables[].mean", "points[].observables[].mean_err",
		"points[].observables[].variance", "points[].observables[].tau_initial", "points[].observables[].tau_initial_err",
		"points[].observables[].tau_int", "points[].observables[].tau_int_err", "points[].observables[].tau_int_low",
		"points[].observables[].tau_int_high", "points[].observables[].tau_slowest", "points[].observables[].tau_slowest_bound",
		"points[].observables[].tau_slowest_low", "points[].observables[].tau_slowest_high?", "points[].observables[].weight_floor",
		"points[].observables[].warnings", "points[].energy_per_site", "points[].energy_per_site_err",
		"points[].slow_mode.tau?", "points[].slow_mode.tau_err?", "points[].slow_mode.tau_bound?", "points[].slow_mode.confidence?",
		"points[].slow_mode.shares?", "points[].decay[].of", "points[].decay[].axis", "points[].decay[].xi",
		"points[].decay[].xi_err", "points[].decay[].xi_second_moment?", "points[].decay[].xi_second_moment_err?", "trends",
		"points[].exact.states", "points[].exact.gap", "points[].exact.tau_gap", "points[].exact.tau_bound_holds?", "points[].exact.reason?",
		"points[].observables[].exact.mean", "points[].observables[].exact.variance", "points[].observables[].exact.tau_initial",
		"points[].observables[].exact.tau_int", "points[].observables[].exact.tau_slowest", "points[].observables[].exact.mean_deviation",
		"points[].observables[].exact.variance_deviation", "points[].observables[].exact.tau_initial_deviation",
		"points[].observables[].exact.tau_int_deviation", "points[].observables[].exact.tau_slowest_bound_holds?"},
	"exact": {"points[].point", "points[].key", "points[].beta", "points[].length", "points[].size", "points[].states",
		"points[].closed_classes", "points[].gap", "points[].tau_gap", "points[].levels[].rate", "points[].levels[].multiplicity",
		"points[].eigenvalues", "points[].lags", "points[].warnings",
		"points[].observables[].name", "points[].observables[].mean", "points[].observables[].variance", "points[].observables[].dirichlet",
		"points[].observables[].tau_initial", "points[].observables[].tau_int", "points[].observables[].tau_slowest",
		"points[].observables[].tau_slowest_1", "points[].observables[].tau_slowest_20", "points[].observables[].shares",
		"points[].observables[].covariance_in_time", "points[].covariance[].of", "points[].covariance[].axes", "points[].covariance[].planes",
		"points[].classes?", "points[].tau_gap_bound?"},
	"models":  {"models[].name", "models[].parameters", "models[].paper"},
	"version": {"version", "go"},
}

const contractStudy = `
[lattice]
size = [8]

[hamiltonian]
model = "ising"

[bath]
beta = 0.4

[trajectory]
count  = 16
settle = 20.0
span   = 500.0

[covariance]
of = "spin"
every = 2.0
`

func TestJSONKeys(t *testing.T) {
	dir := t.TempDir()
	t.Chdir(dir)
	if err := os.WriteFile(filepath.Join(dir, "study.toml"), []byte(contractStudy), 0o666); err != nil {
		t.Fatal(err)
	}
	arguments := map[string][]string{"plan": {"study.toml"}, "run": {"study.toml", "--quiet"}, "fit": {"study", "--against-exact"}, "exact": {"study.toml"}}
	for i := range verbs { // run comes before fit
		name := verbs[i].name
		status, stdout, stderr := sojourn(append([]string{name, "--json"}, arguments[name]...)...)
		if status != exitDone {
			t.Fatalf("%s: status %d, %s", name, status, stderr)
		}
		var value any
		if err := json.Unmarshal([]byte(stdout), &value); err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if len(contractKeys[name]) == 0 {
			t.Errorf("no contract for the JSON of %s", name)
		}
		for _, path := range contractKeys[name] {
			if bare, ok := strings.CutSuffix(path, "?"); !ok && !has(value, strings.Split(bare, ".")) {
				t.Errorf("%s: the JSON lacks %s", name, path)
			}
		}
	}
}

// has reports whether every element along a path has the next key.
func has(value any, path []string) bool {
	if len(path) == 0 {
		return true
	}
	key, list := strings.CutSuffix(path[0], "[]")
	object, ok := value.(map[string]any)
	if !ok {
		return false
	}
	next, ok := object[key]
	if !ok {
		return false
	}
	if !list {
		return has(next, path[1:])
	}
	elements, ok := next.([]any)
	if !ok || len(elements) == 0 {
		return false
	}
	for _, e := range elements {
		if !has(e, path[1:]) {
			return false
		}
	}
	return true
}

// What a program's user sees of a defect: status 1, not Go's own 2.
func TestPanicsBecomeFailures(t *testing.T) {
	saved := verbs
	defer func() { verbs = saved }()
	verbs = []verb{{name: "break", do: func(*console, *options, []string) error { panic("broken") }}}
	status, _, stderr := sojourn("break")
	if status != exitFailed || !strings.Contains(stderr, "broken") {
		t.Errorf("status %d, %s", status, stderr)
	}
}
