package main

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"sojourn/kinetic"
)

// hotObservable is a product of operators, or a sum of such, that each of some
// bath operators turns over.
type hotObservable struct {
	keys   string // of its [[observable]]
	name   string
	size   float64 // C(0)
	rate   float64 // 2 G(0) m, m bath operators
	single bool    // single terms or lines, averaged over their places
}

// At infinite temperature every bath operator fires at G(0) in every state, so
// that a product operator that m of them flip decays as exp(-2 G(0) m t): for
// every model and size, under each law that has a G(0) there (elementary). G(0) is
// Gamma/2 for heat-bath rates, Gamma for metropolis and symmetric.
func TestOutsideInfiniteTemperature(t *testing.T) {
	local := func(family string, rate float64) hotObservable {
		return hotObservable{fmt.Sprintf("kind = \"local\"\nfamily = %q", family), "local-" + family, 1, rate, true}
	}
	line := func(tracked string, rate float64) hotObservable {
		return hotObservable{fmt.Sprintf("kind = \"operator\"\ntracked = %q", tracked), "operator-" + tracked, 1, rate, true}
	}
	terms := func(family string, number, rate float64) hotObservable {
		return hotObservable{fmt.Sprintf("kind = \"terms\"\nfamily = %q", family), "terms-" + family, number, rate, false}
	}
	wave := func(number, rate float64) hotObservable {
		return hotObservable{"kind = \"fourier\"\nfamily = \"spin\"\nwavevector = [1, 0]", "fourier-spin-1-0", number, rate, false}
	}
	magnetization := func(number, rate float64) hotObservable {
		return hotObservable{"kind = \"magnetization\"", "magnetization", number, rate, false}
	}
	energy := func(number, rate float64) hotObservable {
		return hotObservable{"kind = \"energy\"", "energy", number, rate, false}
	}
	for _, c := range []struct {
		model, size, boundary string
		bath                  string
		observables           []hotObservable
	}{
		// Spins are flipped by one X each, bonds by two.
		{"ising", "[24]", `"periodic"`, "law = \"heat-bath\"\nrate = 1.5",
			[]hotObservable{local("spin", 1.5), magnetization(24, 1.5), energy(24, 3), local("bond", 3)}},
		{"ising", "[6, 5]", `"periodic"`, "law = \"metropolis\"\nrate = 0.75",
			[]hotObservable{local("spin", 1.5), wave(30, 1.5), terms("bond", 60, 3)}},
		{"ising", "[3, 4, 3]", `"open"`, "law = \"symmetric\"\nrate = 1.25",
			[]hotObservable{magnetization(36, 2.5), energy(75, 5)}},
		// X and Y flip a spin, Z does not.
		{"ising", "[12, 4]", `["periodic", "open"]`, "law = \"heat-bath\"\ncouples = [\"X\", \"Y\", \"Z\"]",
			[]hotObservable{local("spin", 2), energy(84, 4)}},
		// Four edges around a face and at a corner, as many on a line as it is long.
		{"toric-code", "[5, 4]", `"periodic"`, "law = \"heat-bath\"\ncouples = [\"X\", \"Z\"]",
			[]hotObservable{local("plaquette", 4), local("star", 4), line("loop-x", 5), line("dual-loop-y", 4)}},
		{"toric-code", "[6, 6]", `"periodic"`, "law = \"metropolis\"\ncouples = [\"X\", \"Y\", \"Z\"]\nrate = 0.5",
			[]hotObservable{terms("plaquette", 36, 8), terms("star", 36, 8), line("loop-y", 12)}},
		{"toric-code", "[4, 4]", `"periodic"`,
			"\n\n[[bath.operator]]\non = \"X\"\nlaw = \"heat-bath\"\nrate = 0.5\n\n[[bath.operator]]\non = \"Z\"\nlaw = \"symmetric\"\nrate = 0.25",
			[]hotObservable{local("plaquette", 2), local("star", 2), line("loop-x", 2), line("dual-loop-x", 2)}},
		// In three dimensions six edges meet at a corner, and a membrane crosses nine.
		{"toric-code", "[3, 3, 3]", `"periodic"`, "law = \"symmetric\"\ncouples = [\"X\", \"Z\"]\nrate = 0.5",
			[]hotObservable{local("plaquette", 4), local("star", 6), line("loop-z", 3), line("membrane-xy", 9)}},
		{"ising-gauge", "[3, 3, 3]", `"periodic"`, "law = \"heat-bath\"",
			[]hotObservable{local("plaquette", 4), line("loop-x", 3)}},
		{"triangular-plaquette", "[6, 5]", `"periodic"`, "law = \"metropolis\"",
			[]hotObservable{local("plaquette", 6), magnetization(30, 2)}},
		{"square-plaquette", "[5, 4]", `"open"`, "law = \"heat-bath\"",
			[]hotObservable{energy(12, 4), magnetization(20, 1)}},
		{"colour-code", "[2, 3]", `"periodic"`, "law = \"heat-bath\"\ncouples = [\"X\", \"Z\"]",
			[]hotObservable{local("z-red", 6), local("x-blue", 6), terms("z", 18, 6)}},
		// Twelve edges around a cube, four in a cross.
		{"x-cube", "[3, 3, 4]", `"periodic"`, "law = \"heat-bath\"\ncouples = [\"X\", \"Z\"]",
			[]hotObservable{local("cube", 12), local("cross-yz", 4)}},
		{"cubic-code", "[3, 3, 3]", `"periodic"`, "law = \"metropolis\"\ncouples = [\"X\", \"Z\"]\nrate = 0.5",
			[]hotObservable{local("z", 8), local("x", 8)}},
		// A term of the cluster state holds an X, which Y and Z flip, and two Z,
		// which X and Y flip.
		{"cluster", "[24]", `"periodic"`, "law = \"heat-bath\"\ncouples = [\"X\", \"Y\", \"Z\"]",
			[]hotObservable{local("cluster", 6), energy(24, 6)}},
	} {
		for _, engine := range []string{kinetic.ClassEngine, kinetic.LaneEngine} {
			var list []hotObservable
			for _, o := range c.observables {
				if o.single == (engine == kinetic.ClassEngine) {
					list = append(list, o)
				}
			}
			if list == nil {
				continue
			}
			m := measure(t, engine, hotText(c.size, c.boundary, c.model, c.bath, engine, list))[0]
			for _, o := range list {
				m.holdCurve(t, o.name, func(t float64) float64 { return o.size * math.Exp(-o.rate*t) })
				m.hold(t, "tau_int of "+o.name, m.observable(t, o.name).Integrated, 1/o.rate, threePercent)
			}
		}
	}
}

// hotText writes a study that records the observables for long enough: the
// relaxation time of one number needs tens of thousands of relaxation times,
// which lanes run through, and terms and lines, of which lanes share what happens
// to them, on one lattice after the other, but with all their places.
func hotText(size, boundary, model, bath, engine string, list []hotObservable) string {
	fastest, slowest := 0.0, math.Inf(1)
	for _, o := range list {
		fastest, slowest = math.Max(fastest, o.rate), math.Min(slowest, o.rate)
	}
	span := 160 / slowest
	if engine == kinetic.ClassEngine {
		span = 640 / slowest
	}
	var b strings.Builder
	fmt.Fprintf(&b, hotStudy, size, boundary, model, 8/slowest, span, 0.2/fastest)
	table, operators, separate := strings.Cut(bath, "\n\n")
	fmt.Fprintf(&b, "\n[bath]\nbeta = 0.0\n%s\n", table)
	if separate {
		fmt.Fprintf(&b, "\n%s\n", operators)
	}
	for _, o := range list {
		fmt.Fprintf(&b, "\n[[observable]]\n%s\n", o.keys)
	}
	return b.String()
}

const hotStudy = `
[lattice]
size = %s
boundary = %s

[hamiltonian]
model = %q

[trajectory]
count  = 32
settle = %g
span   = %g
step   = %g
seed   = 4060
`
