package main

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"
)

// exactValues runs the verb on a study and returns what it says to programs.
func exactValues(t *testing.T, study string) exactJSON {
	t.Helper()
	t.Chdir(t.TempDir())
	if err := os.WriteFile("study.toml", []byte(study), 0o666); err != nil {
		t.Fatal(err)
	}
	status, stdout, stderr := sojourn("exact", "study.toml", "--json", "--quiet")
	if status != exitDone || stderr != "" {
		t.Fatalf("status %d: %s", status, stderr)
	}
	var out exactJSON
	if err := json.Unmarshal([]byte(stdout), &out); err != nil {
		t.Fatal(err)
	}
	return out
}

const exactRing = `
[lattice]
size = [4]
[hamiltonian]
model = "ising"
[scan]
beta = [%v]
size = [%s]
[[observable]]
kind = "magnetization"
[[observable]]
kind = "energy"
[[observable]]
kind = "local"
family = "spin"
[covariance]
of = "spin"
every = 10.0
`

// The ring's gap is 1 - tanh(2 beta) for every length (R. J. Glauber, J. Math.
// Phys. 4, 294 (1963), eq. 33; heat-bath at rate 1), by full spectra (up to 9
// spins) and by Lanczos. Covariances follow from the transfer matrix, u =
// tanh(beta): <s_0 s_r> = (u^r + u^(N-r))/(1 + u^N) (textbook).
func TestExactRing(t *testing.T) {
	const beta = 0.4
	out := exactValues(t, fmt.Sprintf(exactRing, beta, "4, 5, 6, 7, 8, 10, 11"))
	for _, p := range out.Points {
		n := float64(p.Length)
		near := func(what string, got, want float64) {
			t.Helper()
			if !(math.Abs(got-want) <= 1e-9*(1+math.Abs(want))) {
				t.Errorf("N = %d: %s %.15g, want %.15g", p.Length, what, got, want)
			}
		}
		gap := 1 - math.Tanh(2*beta)
		near("gap", p.Gap, gap)
		near("1/gap", p.GapTime, 1/gap)
		near("states", float64(p.States), math.Pow(2, n))
		if p.Closed == nil || *p.Closed != 1 || len(p.Levels) != shownLevels || len(p.Warnings) != 0 {
			t.Errorf("N = %d: closed classes %v, levels %v, warnings %v", p.Length, p.Closed, p.Levels, p.Warnings)
		}
		// One spin wave after another: 1 - tanh(2 beta) cos(2 pi/N), twice.
		near("second level", p.Levels[1].Rate, 1-math.Tanh(2*beta)*math.Cos(2*math.Pi/n))
		if p.Levels[1].Multiplicity != 2 || p.Levels[0].Multiplicity != 1 {
			t.Errorf("N = %d: levels %+v", p.Length, p.Levels)
		}
		u := math.Tanh(beta)
		pair := func(r float64) float64 { return (math.Pow(u, r) + math.Pow(u, n-r)) / (1 + math.Pow(u, n)) }
		sum := 0.0
		for r := range p.Length {
			if r == 0 {
				sum++
			} else {
				sum += pair(float64(r))
			}
		}
		m, energy, local := p.Observables[0], p.Observables[1], p.Observables[2]
		near("variance of the magnetization", m.Variance, n*sum)
		near("tau_int of the magnetization", m.TauInt, 1/gap)
		near("share of the slowest mode", m.Shares[0], 1)
		near("energy", energy.Mean, -n*pair(1))
		near("variance of a spin", local.Variance, 1)
		near("share of the slowest mode in a spin", local.Shares[0], sum/n)
		for i, lag := range p.Lags {
			near("C(t) of the magnetization", m.Covariance[i], m.Variance*math.Exp(-gap*lag))
		}
		for r, k := range p.Covariance[0].Axes[0] {
			if r > 0 {
				near("covariance in space", k, pair(float64(r)))
			}
		}
	}
}

const exactTorus = `
[lattice]
size = [%d, %d]
[hamiltonian]
model = "ising"
[bath]
beta = 0.44068679350977147
`

// The second eigenvalue 1 - gap/L^2 of one random single-site update of the
// critical torus: M. P. Nightingale, H. W. J. Bloete, Phys. Rev. Lett. 76, 4548
// (1996), from memory.
func TestExactCriticalTorus(t *testing.T) {
	for l, want := range map[int]float64{2: 0.985702260395516, 3: 0.997409385126011} {
		p := exactValues(t, fmt.Sprintf(exactTorus, l, l)).Points[0]
		if got := 1 - p.Gap/float64(l*l); math.Abs(got-want) > 1e-12 {
			t.Errorf("L = %d: %.15f, want %.15f", l, got, want)
		}
	}
}

// A scan with one lattice too large is refused before anything is computed, with
// the number of states.
func TestExactRefusesLargeLattices(t *testing.T) {
	t.Chdir(t.TempDir())
	for size, states := range map[int]string{6: "68719476736 states", 8: "2^64 states", 20: "400 sites"} {
		if err := os.WriteFile("study.toml", []byte(fmt.Sprintf(exactTorus, size, size)), 0o666); err != nil {
			t.Fatal(err)
		}
		status, stdout, stderr := sojourn("exact", "study.toml")
		if status != exitBadRequest || stdout != "" || !strings.Contains(stderr, states) || !strings.Contains(stderr, "smaller lattice") {
			t.Errorf("%d x %d: status %d: %s", size, size, status, stderr)
		}
	}
}

// The four classes of logical states of a toric code under X only: star terms
// stay what they are. Every class has the same weight where the stars do not
// move with it.
func TestExactClosedClasses(t *testing.T) {
	p := exactValues(t, `
[lattice]
size = [2, 2]
[hamiltonian]
model = "toric-code"
[bath]
beta = 0.5
`).Points[0]
	if p.Closed == nil || *p.Closed < 2 || len(p.Classes) == 0 {
		t.Fatalf("closed classes %v, %v", p.Closed, p.Classes)
	}
	if uint64(p.Classes[0].States) != p.States {
		t.Errorf("%d states in the class of the reference state, %d listed", p.Classes[0].States, p.States)
	}
	sum := 0.0
	for _, c := range p.Classes {
		sum += c.Weight
	}
	if len(p.Classes) == *p.Closed && math.Abs(sum-1) > 1e-12 || sum > 1+1e-12 {
		t.Errorf("the weights of %d classes add up to %v", len(p.Classes), sum)
	}
}

// Where the states are too many but not their orbits, observables are exact one
// by one and the gap is bounded. Exact values of the same torus as a whole.
func TestExactBySectors(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("study.toml", []byte(fmt.Sprintf(exactTorus, 3, 3)), 0o666); err != nil {
		t.Fatal(err)
	}
	q := preparedPoint(t, "study.toml")
	whole, err := q.exactly()
	if err != nil {
		t.Fatal(err)
	}
	r, err := q.route(100)
	if err != nil || !r.sector {
		t.Fatalf("route %+v, %v", r, err)
	}
	x, err := q.solve(r, func(string, ...any) {})
	if err != nil {
		t.Fatal(err)
	}
	if x.Gap != 0 || math.Abs(x.GapBound*whole.Gap-1) > 1e-9 || x.States != whole.States {
		t.Errorf("gap %v, bound %v, states %d; as a whole %v, %d", x.Gap, x.GapBound, x.States, whole.Gap, whole.States)
	}
	for i, o := range x.Observables {
		w := whole.Observables[i]
		if o.Name != w.Name || math.Abs(o.TauInt-w.TauInt) > 1e-8*w.TauInt || math.Abs(o.Variance-w.Variance) > 1e-8*w.Variance {
			t.Errorf("%+v, as a whole %+v", o, w)
		}
	}
	if len(x.Observables) != len(whole.Observables) {
		t.Errorf("%d observables, warnings %v", len(x.Observables), x.Warnings)
	}
}

// In the cold the gap lies many digits below the fastest rate: the slowest mode
// is still the magnetization's, and the print says how far to trust it.
func TestExactCold(t *testing.T) {
	p := exactValues(t, strings.Replace(fmt.Sprintf(exactTorus, 3, 4), "0.44068679350977147", "1.6", 1)).Points[0]
	m := p.Observables[1]
	if m.Name != "magnetization" || len(m.Shares) == 0 || math.Abs(m.Shares[0]-1) > 1e-3 || math.Abs(m.TauInt*p.Gap-1) > 1e-2 {
		t.Errorf("gap %v, %+v", p.Gap, m)
	}
	if len(p.Warnings) != 1 || p.Warnings[0].Code != "rounding" {
		t.Errorf("warnings %v", p.Warnings)
	}
	p = exactValues(t, strings.Replace(fmt.Sprintf(exactTorus, 3, 4), "0.44068679350977147", "3.0", 1)).Points[0]
	m = p.Observables[1]
	if p.Gap != 0 || len(p.Levels) != 0 || m.TauInt != 0 || m.TauInitial < 1e6 || len(p.Warnings) != 2 {
		t.Errorf("a gap lost in rounding: %v, %v, %+v, %v", p.Gap, p.Levels, m, p.Warnings)
	}
}
