package configs

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"sojourn/kinetic/bath"
)

// TestDefaults holds everything that is filled in for the shortest study. The
// largest heat-bath rate at beta = 0.4 on the square lattice is that of a spin
// against four neighbours, 1/(1 + exp(-3.2)) = 0.96083.
func TestDefaults(t *testing.T) {
	s := decoded(t, "[lattice]\nsize = [8, 8]\n[hamiltonian]\nmodel = \"ising\"\n[bath]\nbeta = 0.4\n[covariance]\nof = \"spin\"\n")
	var lines []string
	for _, d := range s.Defaults {
		lines = append(lines, d.Name+" = "+d.Value)
	}
	// A model may gain parameters.
	lines = slices.DeleteFunc(lines, func(line string) bool {
		return strings.HasPrefix(line, "hamiltonian.") && line != "hamiltonian.coupling = 1" && line != "hamiltonian.field = 0"
	})
	want := `lattice.boundary = "periodic"
hamiltonian.coupling = 1
hamiltonian.field = 0
bath.law = "heat-bath"
bath.rate = 1
bath.couples = ["X"]
trajectory.count = 16
trajectory.start = "random"
trajectory.seed = 1
trajectory.engine = "auto"
covariance.limit = 8
observable = energy, magnetization
trajectory.settle = 104.1
trajectory.span = 4163
trajectory.step = 0.2602
covariance.every = 10.41`
	if got := strings.Join(lines, "\n"); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	p := s.Points[0]
	if g := 1 / (1 + math.Exp(-3.2)); math.Abs(p.MaxRate/g-1) > 1e-12 {
		t.Errorf("largest rate %v, want %v", p.MaxRate, g)
	}
	if got := fmt.Sprint(p.Trajectory, p.Pairs); got != "{16 random 104.1 4163 0.2602 1 auto lanes} [[0 0] [0 1] [1 1]]" {
		t.Errorf("trajectory and pairs: %s", got)
	}
}

func TestDefaultsThatDifferFromPointToPoint(t *testing.T) {
	s := decoded(t, swap(base, "span = 100.0\nstep = 0.5", "")+"[scan]\nbeta = [0.0, 0.4, 0.2]\n")
	for _, d := range s.Defaults {
		// G = 1/2 at beta = 0.
		if d.Name == "trajectory.step" && d.Value != "0.2602 to 0.5" {
			t.Errorf("step: %s", d.Value)
		}
	}
	if len(s.Points) != 3 || s.Points[0].Trajectory.Span != 8000 {
		t.Errorf("span at beta = 0: %v", s.Points[0].Trajectory.Span)
	}
}

func TestObservablesByDefault(t *testing.T) {
	for _, c := range []struct{ name, text, want string }{
		{"spins", base, "energy magnetization"},
		{"loops that X changes", swap(base, `"ising"`, `"toric-code"`), "energy operator-loop-x operator-loop-y"},
		{"loops that Z changes", swap(swap(base, `"ising"`, `"toric-code"`), "beta = 0.4", "beta = 0.4\ncouples = [\"Z\"]"), "energy operator-dual-loop-x operator-dual-loop-y"},
		{"no tracked operators", strings.Split(spelt, "[[hamiltonian.tracked]]")[0] + "[bath]\nbeta = 1\n", "energy"},
	} {
		s := decoded(t, c.text)
		var names []string
		for _, o := range s.Points[0].Observables {
			names = append(names, o.Name)
		}
		if got := strings.Join(names, " "); got != c.want {
			t.Errorf("%s: %s, want %s", c.name, got, c.want)
		}
	}
}

func TestLabelsAndPairs(t *testing.T) {
	const observables = `[[observable]]
kind = "energy"
[[observable]]
kind = "fourier"
family = "spin"
wavevector = [1, -2]
single = true
[[observable]]
kind = "terms"
family = "bond-x"
[[observable]]
kind = "local"
family = "bond"
[[observable]]
kind = "magnetization"
name = "majority"
`
	s := decoded(t, base+observables)
	p := s.Points[0]
	var names []string
	for _, o := range p.Observables {
		names = append(names, o.Name)
	}
	if got := strings.Join(names, " "); got != "energy fourier-spin-1--2 terms-bond-x local-bond majority" {
		t.Errorf("labels %s", got)
	}
	if got := fmt.Sprint(p.Observables[1].Wavevector, p.Observables[1].Single, p.Observables[0].Single); got != "[1 -2 0 0] true false" {
		t.Errorf("wavevector and declaration: %s", got)
	}
	if got := fmt.Sprint(p.Pairs); got != "[[0 0] [0 2] [0 4] [1 1] [2 2] [2 4] [3 3] [4 4]]" {
		t.Errorf("all pairs of scalars: %s", got)
	}
	s = decoded(t, base+observables+"[[pair]]\nof = [\"majority\", \"energy\"]\n")
	if got := fmt.Sprint(s.Points[0].Pairs); got != "[[0 0] [0 4] [1 1] [2 2] [3 3] [4 4]]" {
		t.Errorf("one pair: %s", got)
	}
}

// A pair of scalars that anticommute is left out of the pairs that nobody asked
// for by name: on single sites X and Z have no joint values.
func TestAnticommutingPairsAreLeftOut(t *testing.T) {
	s := decoded(t, `[lattice]
size = [4]
[hamiltonian]
model = "custom"
sites_per_cell = 2
[[hamiltonian.family]]
name = "bond"
z = ["1 + x", "0"]
[[hamiltonian.tracked]]
name = "left"
x = ["0", "1"]
[[hamiltonian.tracked]]
name = "right"
z = ["0", "1"]
[bath]
beta = 1
couples = ["X", "Z"]
[[observable]]
kind = "terms"
family = "left"
[[observable]]
kind = "terms"
family = "right"
[[observable]]
kind = "terms"
family = "bond"
`)
	if got := fmt.Sprint(s.Points[0].Pairs); got != "[[0 0] [0 2] [1 1] [1 2] [2 2]]" {
		t.Errorf("pairs %s", got)
	}
	if len(s.Notes) != 1 || !strings.Contains(s.Notes[0].Message, "terms-left and terms-right anticommute") {
		t.Errorf("notes %v", s.Notes)
	}
}

func TestNotes(t *testing.T) {
	s := decoded(t, swap(swap(base, `"ising"`, `"toric-code"`), "beta = 0.4", "beta = 0.4\n[[observable]]\nkind = \"terms\"\nfamily = \"star\""))
	if len(s.Notes) != 1 || s.Notes[0].Line != 8 || !strings.Contains(s.Notes[0].Message, "terms-star is constant") {
		t.Errorf("notes %v", s.Notes)
	}
	s = decoded(t, swap(base, "beta = 0.4", "beta = 0.4\ncouples = [\"X\", \"Z\"]"))
	if len(s.Notes) != 1 || !strings.Contains(s.Notes[0].Message, "Z changes no term") {
		t.Errorf("notes %v", s.Notes)
	}
}

func TestLaws(t *testing.T) {
	for _, c := range []struct {
		text string
		want bath.Law
	}{
		{`law = "metropolis"`, bath.Law{Kind: bath.Metropolis, Rate: 1}},
		{"law = \"ohmic\"\nrate = 2\ncutoff = 5", bath.Law{Kind: bath.Power, Rate: 2, Exponent: 1, Cutoff: 5}},
		{"law = \"power\"\nexponent = 3", bath.Law{Kind: bath.Power, Rate: 1, Exponent: 3}},
		{`law = "symmetric"`, bath.Law{Kind: bath.Symmetric, Rate: 1}},
		{"law = \"table\"\nenergies = [0, 4, 8]\nrates = [1, 2, 3.5]", bath.Law{Kind: bath.Table, Energies: []float64{0, 4, 8}, Rates: []float64{1, 2, 3.5}}},
	} {
		s := decoded(t, swap(base, "beta = 0.4", "beta = 0.4\n"+c.text))
		if got := fmt.Sprint(s.Points[0].Spec.Bath[0].Law); got != fmt.Sprint(c.want) {
			t.Errorf("%s\ngot  %v\nwant %v", c.text, got, c.want)
		}
	}
}

func TestBathOperatorsTakeWhatTheyLackFromBath(t *testing.T) {
	s := decoded(t, spelt+`law = "power"
exponent = 2.0
rate = 0.5
[[bath.operator]]
on = "X"
[[bath.operator]]
on = "Y"
exponent = 3.0
sites = [1]
[[bath.operator]]
on = "Z"
law = "heat-bath"
rate = 4.0
`)
	var got []string
	for _, b := range s.Points[0].Spec.Bath {
		got = append(got, fmt.Sprint(b))
	}
	want := []string{
		"{X 1 0 [] {power 0.5 2 0 [] []}}",
		"{Y 1 1 [1] {power 0.5 3 0 [] []}}",
		"{Z 0 1 [] {heat-bath 4 0 0 [] []}}",
	}
	if strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}
