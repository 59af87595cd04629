package configs

import (
	"fmt"
	"reflect"
	"slices"
	"strings"
	"testing"
)

// decoded reads a study that is right.
func decoded(t *testing.T, text string) *Study {
	t.Helper()
	s, err := Decode("shelf", "shelf.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// scans writes the scanned values of every point.
func scans(s *Study) string {
	var out []string
	for _, p := range s.Points {
		var words []string
		for _, x := range p.Scan {
			words = append(words, x.Value)
		}
		out = append(out, strings.Join(words, " "))
	}
	return strings.Join(out, "; ")
}

func TestScanUnfolds(t *testing.T) {
	for _, c := range []struct {
		name, from, old, new string
		scanned              []string
		want                 string
	}{
		{"one point", base, "beta = 0.4", "beta = 0.4", nil, ""},
		{"first key slowest", base, "[trajectory]", "[scan]\nbeta = [0.3, 0.4]\nsize = [4, [4, 6]]\n[trajectory]",
			[]string{"bath.beta", "lattice.size"}, "0.3 [4, 4]; 0.3 [4, 6]; 0.4 [4, 4]; 0.4 [4, 6]"},
		{"every short name", base, "[trajectory]", "[scan]\nsize = [4]\nbeta = [1]\nspan = [64.0]\nsettle = [1]\nstep = [0.25]\ncount = [3]\n[trajectory]",
			[]string{"lattice.size", "bath.beta", "trajectory.span", "trajectory.settle", "trajectory.step", "trajectory.count"}, "[4, 4] 1 64 1 0.25 3"},
		{"dotted names, quoted or not", base, "[trajectory]", "[scan]\n\"hamiltonian.field\" = [0.0, 0.1]\nbath.rate = [1.0, 2.0]\n[trajectory]",
			[]string{"hamiltonian.field", "bath.rate"}, "0 1; 0 2; 0.1 1; 0.1 2"},
		{"a parameter that follows another", swap(base, `"ising"`, `"toric-code"`), "[trajectory]", "[[case]]\n\"hamiltonian.coupling\" = [1.0, 2.0]\n[[case]]\n\"hamiltonian.star\" = 3.0\n[trajectory]",
			[]string{"hamiltonian.coupling", "hamiltonian.star"}, "1 1; 2 2; 1 3"},
		{"cases fill in from the tables", base, "[trajectory]", "[[case]]\nbeta = [0.3, 0.4]\nsize = [4, 6]\nspan = 64.0\n[[case]]\nbeta = 0.5\n[trajectory]",
			[]string{"bath.beta", "lattice.size", "trajectory.span"}, "0.3 [4, 4] 64; 0.3 [6, 6] 64; 0.4 [4, 4] 64; 0.4 [6, 6] 64; 0.5 [8, 8] 100"},
		{"families by name", spelt, "beta = 0.4", "beta = 0.4\n[scan]\nhamiltonian.family.star.coupling = [1.0, 0.0, -2.0]",
			[]string{"hamiltonian.family.star.coupling"}, "1; 0; -2"},
		{"bath operators by name", base, "beta = 0.4", "beta = 0.4\nrate = 3\n[[bath.operator]]\non = \"X\"\n[[case]]\n\"bath.operator.X.rate\" = [1.0, 2.0]\n[[case]]\nbeta = 0.2",
			[]string{"bath.operator.X.rate", "bath.beta"}, "1 0.4; 2 0.4; 3 0.2"},
		{"sizes without a size", swap(base, "size = [8, 8]", `boundary = ["open", "periodic"]`), "[trajectory]", "[scan]\nsize = [4, 5]\n[trajectory]",
			[]string{"lattice.size"}, "[4, 4]; [5, 5]"},
		{"limits and seeds", base, "[trajectory]", "[covariance]\nof = \"spin\"\n[scan]\n\"covariance.limit\" = [2, 3]\n\"trajectory.seed\" = [0, 9223372036854775807]\n[trajectory]",
			[]string{"covariance.limit", "trajectory.seed"}, "2 0; 2 9223372036854775807; 3 0; 3 9223372036854775807"},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := decoded(t, wrong{from: c.from, old: c.old, new: c.new}.text(t))
			if !slices.Equal(s.Scanned, c.scanned) {
				t.Errorf("scanned %v, want %v", s.Scanned, c.scanned)
			}
			if got := scans(s); got != c.want {
				t.Errorf("got  %s\nwant %s", got, c.want)
			}
		})
	}
}

func TestScannedValuesReachThePoint(t *testing.T) {
	s := decoded(t, swap(base, "[trajectory]", `[covariance]
of = "spin"
[scan]
size = [[4, 6]]
beta = [0.25]
"hamiltonian.coupling" = [2.0]
"hamiltonian.field" = [0.5]
"bath.rate" = [3.0]
"covariance.every" = [2.0]
"covariance.limit" = [5]
count = [7]
span = [70.0]
settle = [3.0]
step = [0.25]
"trajectory.seed" = [11]
[trajectory]`))
	p := s.Points[0]
	got := fmt.Sprint(p.Spec.Lattice.Lengths(), p.Spec.Beta, p.Spec.Families[0].Coupling,
		p.Spec.Bath[0].Law.Rate, *p.Covariance, p.Trajectory.Count, p.Trajectory.Span, p.Trajectory.Settle, p.Trajectory.Step, p.Trajectory.Seed)
	if want := "[4 6] 0.25 2 3 {spin 2 5} 7 70 3 0.25 11"; got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
	if want := []float64{4, 6}; !reflect.DeepEqual(p.Scan[0].Numbers, want) {
		t.Errorf("size in numbers: %v", p.Scan[0].Numbers)
	}
}

func TestColumnName(t *testing.T) {
	for in, want := range map[string]string{
		"bath.beta":                          "bath_beta",
		"hamiltonian.family.bond-x.coupling": "hamiltonian_family_bond_x_coupling",
	} {
		if got := ColumnName(in); got != want {
			t.Errorf("%s: %s, want %s", in, got, want)
		}
	}
}
