package configs

import (
	"math"
	"slices"
	"strings"
	"testing"

	"sojourn/kinetic"
)

// glass is a right study of two samples of a spin glass.
const glass = `[lattice]
size = [8, 8]
[hamiltonian]
model = "ising"
[hamiltonian.disorder]
kind = "gaussian"
mean = 0.0
sd = 1.0
samples = 2
seed = 7
[bath]
beta = 0.4
[trajectory]
settle = 10.0
span = 100.0
step = 0.5
`

// couplings draws those of a family of the first point with the given sample.
func couplings(t *testing.T, text string, sample, family int) []float64 {
	t.Helper()
	for _, p := range decoded(t, text).Points {
		if p.Sample == sample {
			f := p.Draw().Families[family]
			if f.Couplings != nil {
				return f.Couplings
			}
			var out []float64
			for _, s := range f.Signs {
				out = append(out, f.Coupling*(1-2*float64(s)))
			}
			return out
		}
	}
	t.Fatalf("there is no sample %d", sample)
	return nil
}

func TestSamplesAreTheOutermostScan(t *testing.T) {
	s := decoded(t, glass)
	if !slices.Equal(s.Scanned, []string{"hamiltonian.disorder.sample"}) || scans(s) != "0; 1" {
		t.Errorf("scanned %v: %s", s.Scanned, scans(s))
	}
	s = decoded(t, glass+"[[case]]\nbeta = [0.3, 0.5]\nsize = [4, 6]\n[[case]]\nbeta = 1.0\n\"hamiltonian.disorder.sd\" = 0.5\n")
	if !slices.Equal(s.Scanned, []string{"hamiltonian.disorder.sample", "bath.beta", "lattice.size", "hamiltonian.disorder.sd"}) {
		t.Errorf("scanned %v", s.Scanned)
	}
	if got, want := scans(s), "0 0.3 [4, 4] 1; 0 0.3 [6, 6] 1; 0 0.5 [4, 4] 1; 0 0.5 [6, 6] 1; 0 1 [8, 8] 0.5; "+
		"1 0.3 [4, 4] 1; 1 0.3 [6, 6] 1; 1 0.5 [4, 4] 1; 1 0.5 [6, 6] 1; 1 1 [8, 8] 0.5"; got != want {
		t.Errorf("points %s, want %s", got, want)
	}
	keys := map[string]bool{}
	for _, p := range s.Points {
		keys[p.Key] = true
	}
	if len(keys) != 10 {
		t.Errorf("%d keys for 10 points", len(keys))
	}
	// More samples leave those that are there as they are.
	first, more := decoded(t, glass), decoded(t, swap(glass, "samples = 2", "samples = 9"))
	for i := range 2 {
		if first.Points[i].Key != more.Points[i].Key {
			t.Errorf("sample %d has another key among more samples", i)
		}
	}
	if one := decoded(t, swap(glass, "samples = 2\n", "")); len(one.Points) != 1 || one.Points[0].Key != first.Points[0].Key {
		t.Error("one sample is not the first of several")
	}
}

// A sample is the same at every temperature, under every bath, at every strength
// and beside whatever else there is; another seed, sample or family has other
// couplings.
func TestSampleIsTheSameEverywhere(t *testing.T) {
	want := couplings(t, glass, 1, 0)
	for name, text := range map[string]string{
		"beta":         swap(glass, "beta = 0.4", "beta = 4.0"),
		"law":          swap(glass, "beta = 0.4", "beta = 0.4\nlaw = \"metropolis\""),
		"a field":      swap(glass, `"ising"`, "\"ising\"\nfield = 0.3"),
		"random field": swap(glass, "[hamiltonian.disorder]", "[[hamiltonian.disorder]]\nof = \"field\"\nkind = \"gaussian\"\nmean = 0\nsd = 2\n[[hamiltonian.disorder]]\nof = \"bond\""),
		"seed of runs": swap(glass, "[trajectory]", "[trajectory]\nseed = 99"),
		"start":        swap(glass, "[trajectory]", "[trajectory]\nstart = \"up\""),
	} {
		if got := couplings(t, text, 1, 0); !slices.Equal(got, want) {
			t.Errorf("%s changes the sample: %v, was %v", name, got[:3], want[:3])
		}
	}
	wide := couplings(t, swap(glass, "sd = 1.0", "sd = 2.0"), 1, 0)
	for c := range want {
		if math.Abs(wide[c]-2*want[c]) > 1e-6 {
			t.Fatalf("with twice the spread coupling %d is %v, was %v", c, wide[c], want[c])
		}
	}
	if large := couplings(t, swap(glass, "[8, 8]", "[16, 8]"), 1, 0); !slices.Equal(large[:64], want) {
		t.Error("a larger lattice begins with other couplings")
	}
	if same := couplings(t, glass, 1, 1); slices.Equal(same, want) {
		t.Error("bonds along y have the couplings of those along x")
	}
	if same := couplings(t, glass, 0, 0); slices.Equal(same, want) {
		t.Error("the two samples are one")
	}
	if same := couplings(t, swap(glass, "seed = 7", "seed = 8"), 1, 0); slices.Equal(same, want) {
		t.Error("another seed gives the same couplings")
	}
}

func TestDisorderChangesTheStream(t *testing.T) {
	seen := map[[32]byte]string{}
	spin := "[hamiltonian.disorder]"
	pm := swap(swap(glass, `"gaussian"`, `"plus-minus"`), "mean = 0.0\nsd = 1.0", "probability = 0.5")
	for _, c := range []struct{ name, text string }{
		{"gaussian", glass},
		{"no disorder", base},
		{"mean", swap(glass, "mean = 0.0", "mean = 0.1")},
		{"sd", swap(glass, "sd = 1.0", "sd = 1.1")},
		{"seed", swap(glass, "seed = 7", "seed = 8")},
		{"plus-minus", pm},
		{"probability", swap(pm, "0.5", "0.25")},
		{"probability 0", swap(pm, "0.5", "0.0")},
		{"bonds along x", swap(glass, spin, spin+"\nof = \"bond-x\"")},
		{"fields", swap(glass, spin, spin+"\nof = \"field\"")},
	} {
		for _, p := range decoded(t, c.text).Points {
			if other, ok := seen[p.Stream]; ok {
				t.Errorf("%s, sample %d has the stream of %s", c.name, p.Sample, other)
			}
			seen[p.Stream] = c.name
		}
	}
	if a, b := decoded(t, glass), decoded(t, swap(glass, spin, spin+"\nof = \"bond\"")); a.Points[1].Key != b.Points[1].Key {
		t.Error("naming the bonds, which are meant anyway, changes the key")
	}
}

func TestDisorderIsDrawn(t *testing.T) {
	s := decoded(t, swap(swap(glass, "[hamiltonian.disorder]\nkind = \"gaussian\"\nmean = 0.0\nsd = 1.0",
		"[[hamiltonian.disorder]]\nof = \"bond-x\"\nkind = \"plus-minus\"\nprobability = 0.5\n[[hamiltonian.disorder]]\nof = \"field\"\nkind = \"gaussian\"\nmean = 0\nsd = 0.3"), "beta = 0.4", "beta = 0.4"))
	p := &s.Points[1]
	if p.Spec.Families[0].Signs != nil || p.Trajectory.EngineName != kinetic.CompositionEngine {
		t.Errorf("before it is drawn: engine %s", p.Trajectory.EngineName)
	}
	drawn := p.Draw()
	if f := drawn.Families[0]; len(f.Signs) != 64 || f.Couplings != nil || !slices.Contains(f.Signs, 0) || !slices.Contains(f.Signs, 1) {
		t.Errorf("bonds along x: %+v", f)
	}
	if f := drawn.Families[1]; f.Signs != nil || f.Couplings != nil {
		t.Errorf("bonds along y: %+v", f)
	}
	if f := drawn.Families[len(drawn.Families)-1]; f.Name != "field" || len(f.Couplings) != 64 || f.Coupling == 0 {
		t.Errorf("fields: %+v", f)
	}
	if _, err := p.Generator(); err != nil {
		t.Error(err)
	}
	var words []string
	for _, x := range p.Parameters {
		words = append(words, x.Name+" "+x.Value)
	}
	for _, want := range []string{"disorder.bond-x plus-minus, probability 0.5, seed 1", "disorder.field gaussian, mean 0, sd 0.3, seed 7"} {
		if !slices.Contains(words, want) {
			t.Errorf("parameters %v lack %q", words, want)
		}
	}
	if e := decoded(t, swap(glass, "[trajectory]", "[trajectory]\nengine = \"composition\"")).Points[0]; e.Key != decoded(t, glass).Points[0].Key {
		t.Error("the engine that auto stands for changes the key")
	}
	// Times that are filled in are the same for all samples.
	for _, x := range decoded(t, strings.Split(glass, "[trajectory]")[0]).Defaults {
		if strings.Contains(x.Value, " to ") {
			t.Errorf("%s = %s", x.Name, x.Value)
		}
	}
}

// Averages over places need means that are equal at all places: those of
// operators whose sign a symmetry turns.
func TestPlacesThatDiffer(t *testing.T) {
	local := "[[observable]]\nkind = \"local\"\nfamily = "
	field := swap(glass, "model = \"ising\"", "model = \"ising\"\nfield = 0.1")
	plaquette := swap(glass, `"ising"`, `"square-plaquette"`)
	toric := swap(swap(glass, `"ising"`, `"toric-code"`), "beta = 0.4", "beta = 0.4\ncouples = [\"X\", \"Z\"]")
	for _, c := range []struct {
		name, text string
		ok         bool
	}{
		{"spins of a glass", glass + local + "\"spin\"\n", true},
		{"spins of an open glass", swap(glass, "size = [8, 8]", "size = [8, 8]\nboundary = \"open\"") + local + "\"spin\"\n", true},
		{"spins in a field", field + local + "\"spin\"\n", false},
		{"bonds of a glass", glass + local + "\"bond-x\"\n", false},
		{"fourier of bonds", glass + "[[observable]]\nkind = \"fourier\"\nfamily = \"bond-x\"\nwavevector = [1, 0]\n", false},
		{"fourier of spins", glass + "[[observable]]\nkind = \"fourier\"\nfamily = \"spin\"\nwavevector = [1, 0]\n", true},
		{"terms of bonds", glass + "[[observable]]\nkind = \"terms\"\nfamily = \"bond-x\"\n", true},
		{"spins that lines turn", plaquette + local + "\"spin\"\n", true},
		{"loops of a toric code", toric, true},
		{"covariance of spins", glass + "[covariance]\nof = \"spin\"\n", true},
		{"covariance of spins in a field", field + "[covariance]\nof = \"spin\"\n", false},
		{"covariance of bonds", glass + "[covariance]\nof = \"bond-y\"\n", false},
	} {
		_, err := Decode("shelf", "shelf.toml", []byte(c.text))
		if (err == nil) != c.ok || err != nil && !strings.Contains(err.Error(), "mean at every place") {
			t.Errorf("%s: %v", c.name, err)
		}
	}
}

var wrongDisorder = []wrong{
	{name: "no kind", old: "[hamiltonian.disorder]\nkind = \"gaussian\"\n", new: "[▸hamiltonian.disorder]\n", want: []string{"hamiltonian.disorder.kind: is missing"}},
	{name: "another kind", old: `"gaussian"`, new: `▸"gausian"`, want: []string{`hamiltonian.disorder.kind: write "gaussian"`}},
	{name: "no mean", old: "[hamiltonian.disorder]\nkind = \"gaussian\"\nmean = 0.0\n", new: "[▸hamiltonian.disorder]\nkind = \"gaussian\"\n", want: []string{"hamiltonian.disorder.mean: is missing"}},
	{name: "no sd", old: "[hamiltonian.disorder]\nkind = \"gaussian\"\nmean = 0.0\nsd = 1.0\n", new: "[▸hamiltonian.disorder]\nkind = \"gaussian\"\nmean = 0.0\n", want: []string{"hamiltonian.disorder.sd: is missing"}},
	{name: "sd 0", old: "sd = 1.0", new: "sd = ▸0.0", want: []string{"hamiltonian.disorder.sd: 0.0 is out of range; it must be above 0"}},
	{name: "of the other kind", old: "sd = 1.0", new: "sd = 1.0\n▸probability = 0.5", want: []string{"hamiltonian.disorder.probability: is not a key of the kind gaussian"}},
	{name: "probability above 1", old: "kind = \"gaussian\"\nmean = 0.0\nsd = 1.0", new: "kind = \"plus-minus\"\nprobability = ▸1.5", want: []string{"hamiltonian.disorder.probability: 1.5 is out of range"}},
	{name: "samples 0", old: "samples = 2", new: "samples = ▸0", want: []string{"hamiltonian.disorder.samples: 0 is out of range"}},
	{name: "too many points", old: "samples = 2", new: "samples = ▸6000", from: strings.Replace(glass, "[bath]", "[scan]\nsize = [4, 8]\n[bath]", 1), want: []string{"hamiltonian.disorder.samples: more than 10000 points"}},
	{name: "of nothing", old: "kind = \"gaussian\"", new: "of = ▸\"bonds\"\nkind = \"gaussian\"", want: []string{`hamiltonian.disorder.of: there is no "bonds"; did you mean "bond-x"?`}},
	{name: "of a tracked operator", old: "kind = \"gaussian\"", new: "of = ▸\"spin\"\nkind = \"gaussian\"", want: []string{`hamiltonian.disorder.of: "spin" is a tracked operator, which has no coupling`}},
	{name: "signs of no coupling", old: "kind = \"gaussian\"\nmean = 0.0\nsd = 1.0", new: "of = ▸\"field\"\nkind = \"plus-minus\"\nprobability = 0.5", want: []string{"hamiltonian.disorder.of: field has coupling 0 here"}},
	{name: "twice", old: "[hamiltonian.disorder]", new: "[[hamiltonian.disorder]]\nof = \"bond-x\"\nkind = \"plus-minus\"\nprobability = 0.5\n[[hamiltonian.disorder]]\nof = ▸\"bond\"",
		want: []string{"hamiltonian.disorder.of: bond-x has its couplings drawn in line 5 already"}},
	{name: "several without of", old: "[hamiltonian.disorder]", new: "[[hamiltonian.disorder]]\nof = \"field\"\nkind = \"gaussian\"\nmean = 0.0\nsd = 0.5\n[[▸hamiltonian.disorder]]",
		want: []string{"hamiltonian.disorder.of: is missing"}},
	{name: "two numbers of samples", old: "[hamiltonian.disorder]", new: "[[hamiltonian.disorder]]\nof = \"field\"\nkind = \"gaussian\"\nmean = 0.0\nsd = 0.5\nsamples = 3\n[[hamiltonian.disorder]]\nof = \"bond\"\nsamples = ▸4\n",
		want: []string{"hamiltonian.disorder.samples: is 4 here and 3 in line 10"}, from: strings.Replace(glass, "samples = 2\n", "", 1)},
	{name: "unknown key", old: "sd = 1.0", new: "sd = 1.0\n▸width = 1.0", want: []string{"hamiltonian.disorder.width: is not a key of [hamiltonian.disorder]"}},
	{name: "levels", old: "model = \"ising\"\n[hamiltonian.disorder]", new: "model = \"potts\"\n[▸hamiltonian.disorder]", want: []string{"hamiltonian.disorder: random couplings need 2 levels; this Hamiltonian has 3"}},
	{name: "listed rates", from: strings.Replace(glass, "beta = 0.4", "beta = 0.4\nlaw = \"table\"\nenergies = [0, 4, 8]\nrates = [1, 1, 1]", 1), old: "\"gaussian\"", new: "▸\"gaussian\"", want: []string{"hamiltonian.disorder.kind: more energies than a table of rates"}},
	{name: "engine of equal couplings", old: "[trajectory]", new: "[trajectory]\nengine = ▸\"classes\"", want: []string{"trajectory.engine: classes cannot run this"}},
	{name: "lanes of equal couplings", old: "[trajectory]", new: "[trajectory]\nengine = ▸\"lanes\"", want: []string{"trajectory.engine: lanes cannot run this"}},
	{name: "engine of unequal couplings", from: base, old: "[trajectory]", new: "[trajectory]\nengine = ▸\"composition\"", want: []string{"trajectory.engine: composition cannot run this"}},
	{name: "sample as a scan", old: "[trajectory]", new: "[scan]\n▸\"hamiltonian.disorder.sample\" = [1, 3]\n[trajectory]", want: []string{"scan.hamiltonian.disorder.sample: is scanned as it is"}},
	{name: "samples as a scan", old: "[trajectory]", new: "[scan]\n▸\"hamiltonian.disorder.samples\" = [1, 3]\n[trajectory]", want: []string{"scan.hamiltonian.disorder.samples: cannot be scanned"}},
	{name: "scan of nothing", from: base, old: "[trajectory]", new: "[scan]\n▸\"hamiltonian.disorder.sd\" = [1, 3]\n[trajectory]", want: []string{"scan.hamiltonian.disorder.sd: needs [hamiltonian.disorder]"}},
	{name: "scan of either", old: "[hamiltonian.disorder]", new: "[scan]\nhamiltonian.disorder.▸sd = [0.5, 1.0]\n[[hamiltonian.disorder]]\nof = \"field\"\nkind = \"gaussian\"\nmean = 0.0\nsd = 0.5\n[[hamiltonian.disorder]]\nof = \"bond\"",
		want: []string{"scan.hamiltonian.disorder.sd: could be of 2 tables"}},
	{name: "custom of several families", old: "[bath]", new: "[▸hamiltonian.disorder]\nkind = \"plus-minus\"\nprobability = 0.5\n[bath]", from: spelt,
		want: []string{"hamiltonian.disorder.of: is missing: name the family or group whose couplings are random"}},
}

// Scans of one table among several go by what it is of.
func TestScanOfDisorder(t *testing.T) {
	s := decoded(t, swap(glass, "[hamiltonian.disorder]", "[[hamiltonian.disorder]]\nof = \"field\"\nkind = \"gaussian\"\nmean = 0.0\nsd = 0.5\n[[hamiltonian.disorder]]\nof = \"bond\"")+
		"[scan]\n\"hamiltonian.disorder.field.sd\" = [0.1, 0.2]\n")
	if got := scans(s); got != "0 0.1; 0 0.2; 1 0.1; 1 0.2" {
		t.Error(got)
	}
	if d := s.Points[3].Disorder[0]; d.Of != "field" || d.SD != 0.2 {
		t.Errorf("%+v", d)
	}
	s = decoded(t, glass+"[scan]\nhamiltonian.disorder.sd = [0.1, 0.2]\n")
	if got := scans(s); got != "0 0.1; 0 0.2; 1 0.1; 1 0.2" {
		t.Error(got)
	}
}

func TestWrongDisorder(t *testing.T) {
	for _, w := range wrongDisorder {
		if w.from == "" {
			w.from = glass
		}
		t.Run(w.name, func(t *testing.T) { w.check(t) })
	}
}
