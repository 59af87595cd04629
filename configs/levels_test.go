package configs

import (
	"strings"
	"testing"

	"sojourn/kinetic"
)

// pottsSpelt is the Potts model spelt out.
const pottsSpelt = `[lattice]
size = [8, 8]
[hamiltonian]
model = "custom"
levels = 3
[[hamiltonian.family]]
name = "row"
z = ["1 - x"]
energies = "potts"
[[hamiltonian.family]]
name = "column"
z = ["1 + 2*y"]
energies = [-1.0, 0.0, 0]
[[hamiltonian.tracked]]
name = "colour"
z = ["1"]
order = true
[bath]
beta = 0.4
powers = [1, 2]
[trajectory]
settle = 10.0
span = 100.0
step = 0.5
[[observable]]
kind = "energy"
`

const planarSpelt = `[lattice]
size = [4, 5]
boundary = "open"
[hamiltonian]
model = "custom"
sites_per_cell = 2
[[hamiltonian.family]]
name = "plaquette"
z = ["1 + y", "1 + x"]
cut = ["truncate", "drop"]
[[hamiltonian.family]]
name = "star"
x = ["1 + x^-1", "1 + y^-1"]
cut = ["drop", "truncate"]
[[hamiltonian.absent]]
site = 1
axis = "y"
end = "last"
[[hamiltonian.absent]]
site = 1
axis = "x"
end = "first"
[bath]
beta = 0.4
couples = ["X", "Z"]
[trajectory]
settle = 10.0
span = 100.0
step = 0.5
[[observable]]
kind = "energy"
`

// Models of more levels, and with absent sites, give the same streams when spelt
// out.
func TestSpeltOutModels(t *testing.T) {
	head := "[trajectory]\nsettle = 10.0\nspan = 100.0\nstep = 0.5\n[[observable]]\nkind = \"energy\"\n"
	for _, c := range []struct{ name, spelt, builtin string }{
		{"potts", pottsSpelt, "[lattice]\nsize = [8, 8]\n[hamiltonian]\nmodel = \"potts\"\n[bath]\nbeta = 0.4\n" + head},
		{"potts, inverse power added", swap(pottsSpelt, "[1, 2]", "[2]"), "[lattice]\nsize = [8, 8]\n[hamiltonian]\nmodel = \"potts\"\nlevels = 3\n[bath]\nbeta = 0.4\n" + head},
		{"clock", swap(swap(swap(swap(pottsSpelt, "energies = \"potts\"\n", ""), "energies = [-1.0, 0.0, 0]", "energies = \"clock\""), "levels = 3", "levels = 5"), "powers = [1, 2]\n", "powers = [1]\n"),
			"[lattice]\nsize = [8, 8]\n[hamiltonian]\nmodel = \"clock\"\nlevels = 5\n[bath]\nbeta = 0.4\n" + head},
		{"planar code", planarSpelt, "[lattice]\nsize = [4, 5]\n[hamiltonian]\nmodel = \"planar-code\"\n[bath]\nbeta = 0.4\ncouples = [\"X\", \"Z\"]\n" + head},
		{"toric code", swap(swap(swap(toric, "sites_per_cell = 2", "sites_per_cell = 2\nlevels = 4"), "x^2*y^-3 + x*y^-3\", \"x^2*y^-3 + x^2*y^-4", "1 - x^-1\", \"1 - y^-1"), "1 + y\", \"1 + x", "1 - y\", \"-1 + x"),
			"[lattice]\nsize = [8, 8]\n[hamiltonian]\nmodel = \"toric-code\"\nlevels = 4\n[bath]\nbeta = 0.4\n" + head},
	} {
		spelt, builtin := only(t, swap(c.spelt, "column\"\nz = [\"1 + 2*y\"]", "column\"\nz = [\"1 - y\"]")), only(t, c.builtin)
		if spelt.Stream != builtin.Stream {
			t.Errorf("%s: another stream when spelt out", c.name)
		}
		if spelt.Key != builtin.Key {
			t.Errorf("%s: another key when spelt out", c.name)
		}
	}
	if a, b := only(t, pottsSpelt), only(t, swap(pottsSpelt, "[-1.0, 0.0, 0]", "[-1.0, 0.1, 0]")); a.Stream == b.Stream {
		t.Error("the energies of levels do not enter the stream")
	}
	if a, b := only(t, planarSpelt), only(t, swap(planarSpelt, "\"first\"", "\"last\"")); a.Stream == b.Stream {
		t.Error("absent sites do not enter the stream")
	}
}

// What the bath operators of a model stand for.
func TestBathPowers(t *testing.T) {
	base := "[lattice]\nsize = [4, 4]\n[hamiltonian]\nmodel = %\nlevels = 5\n[bath]\nbeta = 0.4\ncouples = [\"X\"]\n"
	for _, c := range []struct{ name, text, want string }{
		{"potts", swap(base, "%", `"potts"`), "X X^-1 X^2 X^-2"},
		{"clock", swap(base, "%", `"clock"`), "X X^-1"},
		{"clock, double steps", swap(base, "%", `"clock"`) + "powers = [2]\n", "X^2 X^-2"},
		{"toric code", swap(swap(base, "%", `"toric-code"`), `"X"`, `"X", "Z"`), "X X^-1 Z Z^-1"},
		{"one by one", swap(swap(base, "%", `"toric-code"`), "couples = [\"X\"]\n", "") + "powers = [2]\n[[bath.operator]]\non = \"Y\"\n[[bath.operator]]\non = \"Z\"\npowers = [4, 1]\n", "Y^2 Y^-2 Z^-1 Z"},
		{"two levels", swap(swap(base, "%", `"potts"`), "levels = 5", "levels = 2"), "X"},
	} {
		p := only(t, c.text)
		var names []string
		for _, b := range p.Spec.Bath {
			names = append(names, b.Name)
		}
		if got := strings.Join(names, " "); got != c.want {
			t.Errorf("%s: %s, want %s", c.name, got, c.want)
		}
	}
}

// The planar code is open without being told.
func TestOpenModel(t *testing.T) {
	p := only(t, "[lattice]\nsize = [4, 3]\n[hamiltonian]\nmodel = \"planar-code\"\n[bath]\nbeta = 1\n")
	if p.Spec.Lattice.Open != [4]bool{true, true} || len(p.Spec.Absent) != 2 || p.Spec.SiteCount() != 4*3+3*2 {
		t.Errorf("open %v, absent %v", p.Spec.Lattice.Open, p.Spec.Absent)
	}
	if _, err := kinetic.Compile(p.Spec); err != nil {
		t.Error(err)
	}
}

// Sums of tracked operators of more than two levels are complex: they have no
// cross-covariances.
func TestComplexSums(t *testing.T) {
	p := only(t, "[lattice]\nsize = [4]\n[hamiltonian]\nmodel = \"potts\"\n[bath]\nbeta = 1\n[[observable]]\nkind = \"energy\"\n[[observable]]\nkind = \"terms\"\nfamily = \"bond\"\n[[observable]]\nkind = \"magnetization\"\n")
	if len(p.Pairs) != 4 {
		t.Errorf("pairs %v", p.Pairs)
	}
}

var wrongLevels = []wrong{
	{name: "levels of a model", old: `model = "ising"`, new: "model = \"potts\"\nlevels = ▸2.5", want: []string{"hamiltonian.levels: takes an integer, not 2.5"}},
	{name: "more levels than any", old: `model = "ising"`, new: "model = \"clock\"\nlevels = ▸17", want: []string{"hamiltonian.levels: 17 is out of range; it must be from 2 to 16"}},
	{name: "more levels than any, scanned", from: swap(base, `"ising"`, `"potts"`), old: "beta = 0.4", new: "beta = 0.4\n[scan]\n\"hamiltonian.levels\" = [3, ▸19]", want: []string{"scan.hamiltonian.levels: 19 is out of range; it must be from 2 to 16"}},
	{name: "power beyond levels", from: pottsSpelt, old: "[1, 2]", new: "[1, ▸3]", want: []string{"bath.powers: 3 is not below the number of levels, 3"}},
	{name: "power twice", from: pottsSpelt, old: "[1, 2]", new: "[1, ▸1]", want: []string{"bath.powers: names 1 twice"}},
	{name: "powers of a bit", old: "beta = 0.4", new: "beta = 0.4\n▸powers = [1]", want: []string{"bath.powers: are for more than 2 levels"}},
	{name: "energies of other levels", from: pottsSpelt, old: "[-1.0, 0.0, 0]", new: "▸[-1.0, 0.0]", want: []string{"hamiltonian.family.energies: has 2 numbers for 3 levels"}},
	{name: "unknown energies", from: pottsSpelt, old: `"potts"`, new: `▸"pots"`, want: []string{"hamiltonian.family.energies: \"pots\" is not known: write \"potts\""}},
	{name: "energies of another type", from: pottsSpelt, old: `"potts"`, new: `▸3`, want: []string{"hamiltonian.family.energies: takes a word, not 3"}},
	{name: "cuts for other axes", from: planarSpelt, old: `["truncate", "drop"]`, new: `▸["truncate"]`, want: []string{"hamiltonian.family.cut: has 1 word for 2 axes"}},
	{name: "absent site that is not there", from: planarSpelt, old: "site = 1\naxis = \"y\"", new: "site = ▸2\naxis = \"y\"", want: []string{"hamiltonian.absent.site: the cell has no site 2; its sites are 0 to 1"}},
	{name: "absent at an axis that is not there", from: planarSpelt, old: `axis = "y"`, new: `axis = ▸"z"`, want: []string{"hamiltonian.absent.axis: the lattice has no axis z"}},
	{name: "absent twice", from: planarSpelt, old: "[bath]", new: "[[▸hamiltonian.absent]]\nsite = 1\naxis = \"x\"\nend = \"first\"\n[bath]", want: []string{"hamiltonian.absent: says again that site 1 is absent at the first x"}},
	{name: "absent without an end", from: planarSpelt, old: "[[hamiltonian.absent]]\nsite = 1\naxis = \"y\"\nend = \"last\"\n", new: "[[▸hamiltonian.absent]]\nsite = 1\naxis = \"y\"\n", want: []string{"hamiltonian.absent.end: is missing: cells with the first coordinate along it, or the last"}},
	{name: "absent at no edge", from: swap(planarSpelt, `boundary = "open"`, `boundary = ["open", "periodic"]`), old: `axis = "y"`, new: `axis = ▸"y"`, want: []string{"hamiltonian.absent.axis: y has no end: it is periodic"}},
	{name: "planar code on a torus", old: "size = [8, 8]\n[hamiltonian]\nmodel = \"ising\"", new: "size = [8, 8]\nboundary = ▸\"periodic\"\n[hamiltonian]\nmodel = \"planar-code\"", want: []string{"lattice.boundary: the model planar-code has edges: every axis is open"}},
	{name: "cross-covariance of a complex sum", from: pottsSpelt, old: "kind = \"energy\"\n", new: "kind = \"energy\"\n[[observable]]\nkind = \"magnetization\"\n[[pair]]\nof = [\"energy\", ▸\"magnetization\"]\n", want: []string{"pair.of: magnetization has several components: with more than two levels"}},
}
