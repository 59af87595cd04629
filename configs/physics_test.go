package configs

import (
	"slices"
	"testing"

	"sojourn/kinetic"
)

// only returns the single point of a study.
func only(t *testing.T, text string) Point {
	t.Helper()
	s := decoded(t, text)
	if len(s.Points) != 1 {
		t.Fatalf("%d points", len(s.Points))
	}
	return s.Points[0]
}

// toric is the toric code spelt out under other names, with one family moved by
// a cell and the families listed the other way round.
const toric = `[lattice]
size = [8, 8]
[hamiltonian]
model = "custom"
sites_per_cell = 2
[[hamiltonian.family]]
name = "corner"
x = ["x^2*y^-3 + x*y^-3", "x^2*y^-3 + x^2*y^-4"]
[[hamiltonian.family]]
name = "face"
z = ["1 + y", "1 + x"]
[bath]
beta = 0.4
[trajectory]
settle = 10.0
span = 100.0
step = 0.5
[[observable]]
kind = "energy"
`

func TestStreamDependsOnPhysicsAlone(t *testing.T) {
	builtin := swap(base, `"ising"`, `"toric-code"`) + "[[observable]]\nkind = \"energy\"\n"
	want := only(t, builtin)
	for name, text := range map[string]string{
		"spelt out":                          toric,
		"title":                              swap(builtin, "Coldest", "Warmest"),
		"couplings in other words":           swap(builtin, "[bath]", "coupling = 2.0\nstar = 1\nplaquette = 1.0e0\n[bath]"),
		"a family without coupling":          swap(toric, "[bath]", "[[hamiltonian.family]]\nname = \"none\"\ncoupling = 0\nx = [\"1 + y\", \"0\"]\n[bath]"),
		"tracked operators":                  swap(toric, "[bath]", "[[hamiltonian.tracked]]\nname = \"loop\"\nz = [\"line x\", \"0\"]\n[bath]"),
		"the default boundary":               swap(builtin, "size = [8, 8]", "size = [8, 8]\nboundary = [\"periodic\", \"periodic\"]"),
		"couples written as a table":         swap(builtin, "[trajectory]", "[[bath.operator]]\non = \"X\"\n[trajectory]"),
		"all sites by number":                swap(builtin, "[trajectory]", "[[bath.operator]]\non = \"X\"\nsites = [1, 0]\n[trajectory]"),
		"the engine that auto stands for":    swap(builtin, "[trajectory]", "[trajectory]\nengine = \"lanes\""),
		"count":                              swap(builtin, "[trajectory]", "[trajectory]\ncount = 99"),
		"a declaration for the fit":          builtin + "single = true\n",
		"the same beta in other digits":      swap(builtin, "beta = 0.4", "beta = 4.0e-1"),
		"negative zero as a rate of nothing": swap(builtin, "settle = 10.0", "settle = 10"),
	} {
		got := only(t, text)
		if got.Stream != want.Stream {
			t.Errorf("%s changes the stream", name)
		}
		if got.Key != want.Key {
			t.Errorf("%s changes the key", name)
		}
	}
}

func TestPhysicsChangesTheStream(t *testing.T) {
	builtin := swap(base, `"ising"`, `"toric-code"`)
	seen := map[[32]byte]string{}
	for _, c := range []struct{ name, text string }{
		{"as it is", builtin},
		{"size", swap(builtin, "[8, 8]", "[8, 9]")},
		{"axes the other way round", swap(builtin, "[8, 8]", "[9, 8]")},
		{"boundary", swap(builtin, "[8, 8]", "[8, 8]\nboundary = \"open\"")},
		{"boundary of one axis", swap(builtin, "[8, 8]", "[8, 8]\nboundary = [\"open\", \"periodic\"]")},
		{"boundary of the other axis", swap(builtin, "[8, 8]", "[8, 8]\nboundary = [\"periodic\", \"open\"]")},
		{"coupling", swap(builtin, "[bath]", "coupling = 1.5\n[bath]")},
		{"coupling of stars", swap(builtin, "[bath]", "star = 1.5\n[bath]")},
		{"coupling of plaquettes", swap(builtin, "[bath]", "plaquette = 1.5\n[bath]")},
		{"sign", swap(builtin, "[bath]", "plaquette = -1.0\n[bath]")},
		{"beta", swap(builtin, "0.4", "0.41")},
		{"bath operator", swap(builtin, "0.4", "0.4\ncouples = [\"Z\"]")},
		{"one more bath operator", swap(builtin, "0.4", "0.4\ncouples = [\"X\", \"Z\"]")},
		{"law", swap(builtin, "0.4", "0.4\nlaw = \"metropolis\"")},
		{"ohmic", swap(builtin, "0.4", "0.4\nlaw = \"ohmic\"")},
		{"cutoff", swap(builtin, "0.4", "0.4\nlaw = \"ohmic\"\ncutoff = 9")},
		{"exponent", swap(builtin, "0.4", "0.4\nlaw = \"power\"\nexponent = 2")},
		{"table", swap(builtin, "0.4", "0.4\nlaw = \"table\"\nenergies = [0, 4]\nrates = [1, 2]")},
		{"rate in a table", swap(builtin, "0.4", "0.4\nlaw = \"table\"\nenergies = [0, 4]\nrates = [1, 3]")},
		{"rate", swap(builtin, "0.4", "0.4\nrate = 2")},
		{"sites", swap(builtin, "[trajectory]", "[[bath.operator]]\non = \"X\"\nsites = [0]\n[trajectory]")},
		{"start", swap(builtin, "[trajectory]", "[trajectory]\nstart = \"reference\"")},
		{"both starts", swap(builtin, "[trajectory]", "[trajectory]\nstart = \"both\"")},
		{"seed", swap(builtin, "[trajectory]", "[trajectory]\nseed = 2")},
		{"another model", base},
	} {
		p := only(t, c.text)
		if other, ok := seen[p.Stream]; ok {
			t.Errorf("%q and %q have one stream", c.name, other)
		}
		seen[p.Stream] = c.name
	}
}

func TestWhatIsRecordedChangesTheKey(t *testing.T) {
	full := base + "[covariance]\nof = \"spin\"\nevery = 5.0\n[[observable]]\nkind = \"energy\"\n[[observable]]\nkind = \"fourier\"\nfamily = \"spin\"\nwavevector = [1, 0]\n[[observable]]\nkind = \"terms\"\nfamily = \"bond\"\n"
	want := only(t, full)
	seen := map[string]string{want.Key: "as it is"}
	for _, c := range []struct{ name, text string }{
		{"settle", swap(full, "settle = 10.0", "settle = 11.0")},
		{"span", swap(full, "span = 100.0", "span = 101.0")},
		{"step", swap(full, "step = 0.5", "step = 0.25")},
		{"one observable less", swap(full, "[[observable]]\nkind = \"energy\"\n", "")},
		{"wavevector", swap(full, "[1, 0]", "[0, 1]")},
		{"family", swap(full, `family = "bond"`, `family = "bond-x"`)},
		{"family under the same label", swap(full, `family = "bond"`, "family = \"bond-x\"\nname = \"terms-bond\"")},
		{"kind under the same label", swap(full, `kind = "energy"`, "kind = \"magnetization\"\nname = \"energy\"")},
		{"label", swap(full, `kind = "energy"`, "kind = \"energy\"\nname = \"heat\"")},
		{"pairs", full + "[[pair]]\nof = [\"energy\", \"terms-bond\"]\n" + "[[observable]]\nkind = \"magnetization\"\n"},
		{"all pairs", full + "[[observable]]\nkind = \"magnetization\"\n"},
		{"snapshots", swap(full, "every = 5.0", "every = 6.0")},
		{"what is covariant", swap(full, `of = "spin"`, `of = "bond"`)},
		{"limit", swap(full, "every = 5.0", "every = 5.0\nlimit = 3")},
		{"no covariance", swap(full, "[covariance]\nof = \"spin\"\nevery = 5.0\n", "")},
	} {
		p := only(t, c.text)
		if p.Stream != want.Stream {
			t.Errorf("%s changes the stream", c.name)
		}
		if other, ok := seen[p.Key]; ok {
			t.Errorf("%q and %q have one key", c.name, other)
		}
		seen[p.Key] = c.name
	}
}

// On an open lattice the cell of a term decides which terms exist, so that
// translates are different physics there.
func TestOpenLatticesKnowWhereTermsStand(t *testing.T) {
	at := func(boundary, polynomial string) [32]byte {
		return only(t, "[lattice]\nsize = [8]\nboundary = \""+boundary+"\"\n[hamiltonian]\nmodel = \"custom\"\n[[hamiltonian.family]]\nname = \"bond\"\nz = [\""+polynomial+"\"]\n[bath]\nbeta = 1\n").Stream
	}
	if at("periodic", "1 + x") != at("periodic", "x^2 + x^3") {
		t.Error("on a ring translates differ")
	}
	if at("open", "1 + x") == at("open", "x^2 + x^3") {
		t.Error("on a chain translates do not differ")
	}
}

// Two studies that call different families by one name record different things
// under one label.
func TestNamesDoNotHideWhatTheyStandFor(t *testing.T) {
	study := func(first, second string) Point {
		return only(t, swap(swap(spelt, `"plaquette"`, `"`+first+`"`), `"star"`, `"`+second+`"`)+
			"couples = [\"X\", \"Z\"]\n[[observable]]\nkind = \"terms\"\nfamily = \"a\"\n")
	}
	p, q := study("a", "b"), study("b", "a")
	if p.Stream != q.Stream {
		t.Error("names change the stream")
	}
	if p.Key == q.Key {
		t.Error("one key for two observables")
	}
}

// The key of a point is a promise: results of earlier runs are found by it. It
// changes with the form of the digests, with kinetic.StreamRevision, and, for auto,
// where the model of costs (kinetic.Choose) comes to choose another engine. The value is what this package computed when its form was fixed.
func TestKeyStaysAsItIs(t *testing.T) {
	if got, want := only(t, base).Key, "18a900a2d7b4a56e"; got != want || kinetic.StreamRevision != 1 {
		t.Errorf("revision %d has the key %s, want %s at revision 1", kinetic.StreamRevision, got, want)
	}
}

// What a Hamiltonian may have beyond terms that are the same everywhere enters
// the digest as well, and leaves it as it was where there is none of it.
func TestStreamOfIrregularHamiltonians(t *testing.T) {
	spec := func(change func(*kinetic.Spec)) string {
		p := only(t, swap(base, "size = [8, 8]", "size = [8, 8]\nboundary = [\"open\", \"periodic\"]"))
		s := p.Spec
		s.Families = slices.Clone(s.Families)
		change(&s)
		c := canonical{}
		c.hamiltonian(s)
		return string(c.text)
	}
	plain := spec(func(*kinetic.Spec) {})
	seen := map[string]string{plain: "plain"}
	for name, change := range map[string]func(*kinetic.Spec){
		"signs":         func(s *kinetic.Spec) { s.Families[0].Signs = make([]uint8, 64) },
		"couplings":     func(s *kinetic.Spec) { s.Families[0].Couplings = make([]float64, 64) },
		"cut":           func(s *kinetic.Spec) { s.Families[0].Cut = kinetic.Truncate },
		"absent, first": func(s *kinetic.Spec) { s.Absent = []kinetic.Absence{{Site: 0, Axis: 0}} },
		"absent, last":  func(s *kinetic.Spec) { s.Absent = []kinetic.Absence{{Site: 0, Axis: 0, Last: true}} },
		"absent, two": func(s *kinetic.Spec) {
			s.Absent = []kinetic.Absence{{Site: 0, Axis: 0, Last: true}, {Site: 0, Axis: 0}}
		},
		"shape of energies": func(s *kinetic.Spec) { s.Families[0].Shape = []float64{1, 0} },
	} {
		got := spec(change)
		if other, ok := seen[got]; ok {
			t.Errorf("%q and %q are the same", name, other)
		}
		seen[got] = name
	}
	for name, change := range map[string]func(*kinetic.Spec){
		"cut in words":             func(s *kinetic.Spec) { s.Families[0].Cut = kinetic.CutAlong(kinetic.Drop, kinetic.Truncate) },
		"absent where none can be": func(s *kinetic.Spec) { s.Absent = []kinetic.Absence{{Site: 0, Axis: 1}} },
	} {
		if spec(change) != plain {
			t.Errorf("%s changes the stream", name)
		}
	}
}
