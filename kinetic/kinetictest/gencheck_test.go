package kinetictest

import (
	"errors"
	"strings"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/exact"
)

// The compiler against the enumeration: models with known tables first, then
// random ones. Only models that say why they do not fit the tables may fail to
// compile.
func TestCompiledTables(t *testing.T) {
	check := func(name string, s kinetic.Spec) (compiled bool) {
		sys, err := exact.NewSystem(s)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		g, err := kinetic.Compile(s)
		var terms *kinetic.TooManyTerms
		if errors.As(err, &terms) {
			return false
		}
		if err != nil {
			t.Fatalf("%s: %v\n%+v", name, err, s)
		}
		if err := CheckGenerator(g, sys); err != nil {
			t.Errorf("%s: %v\n%+v", name, err, s)
		}
		return true
	}
	for _, size := range [][]int{{1}, {2}, {3}, {9}, {1, 2}, {2, 2}, {3, 3}, {4, 7}, {1, 2, 3}, {3, 4, 5}, {2, 2, 3, 2}} {
		check("ising", Ising(Lattice(size...), 0.5, HeatBath))
	}
	for _, size := range [][]int{{1, 1}, {1, 3}, {2, 2}, {2, 3}, {3, 3}, {6, 5}} {
		for _, which := range []string{"X", "Y", "XZ", "XYZ"} {
			check("toric code", ToricCode(Lattice(size...), 0.5, which, HeatBath, "zx"))
		}
	}
	compiled := 0
	const models = 400
	for seed := range uint64(models) {
		size := Enumerable
		if seed%3 == 2 {
			size = Larger
		}
		if check("random", RandomSpec(seed, size)) {
			compiled++
		}
	}
	for seed := range uint64(60) {
		check("random signs", RandomSigns(seed, Enumerable))
		check("random couplings", RandomCouplings(seed, Enumerable))
	}
	if compiled < models*9/10 {
		t.Errorf("only %d of %d random models compiled", compiled, models)
	}
}

// The same for more than two levels, and for edges that lack sites.
func TestCompiledLevelsAndEdges(t *testing.T) {
	check := func(name string, s kinetic.Spec) {
		sys, err := exact.NewSystem(s)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		g, err := kinetic.Compile(s)
		var terms *kinetic.TooManyTerms
		if errors.As(err, &terms) {
			return
		}
		if err != nil {
			t.Fatalf("%s: %v\n%+v", name, err, s)
		}
		if err := CheckGenerator(g, sys); err != nil {
			t.Errorf("%s: %v\n%+v", name, err, s)
		}
	}
	for _, q := range []int{3, 4, 5, 8} {
		for _, size := range [][]int{{1}, {2}, {5}, {1, 2}, {2, 3}, {4, 3}} {
			check("potts", Potts(q, Lattice(size...), 0.5, HeatBath))
		}
	}
	for _, size := range [][2]int{{1, 1}, {1, 3}, {2, 1}, {2, 2}, {3, 2}, {2, 4}, {7, 8}} {
		for _, which := range []string{"X", "XYZ"} {
			check("planar code", PlanarCode(size[0], size[1], 0.5, which, HeatBath))
		}
	}
	for seed := range uint64(120) {
		size := Enumerable
		if seed%3 == 2 {
			size = Larger
		}
		check("levels", RandomLevels(seed, 3+int(seed/3)%3, size))
		check("edges", RandomEdges(seed, size))
	}
}

// Each fault put into the tables must be found.
func TestCheckGeneratorFinds(t *testing.T) {
	spec := ToricCode(Lattice(3, 4), 0.5, "XYZ", HeatBath, "zx")
	sys, err := exact.NewSystem(spec)
	if err != nil {
		t.Fatal(err)
	}
	for name, fault := range map[string]func(g *kinetic.Generator){
		"lost touch":     func(g *kinetic.Generator) { g.Moves[4].Last-- },
		"wrong wrap":     func(g *kinetic.Generator) { g.Touch[7].Delta += 2 },
		"wrong table":    func(g *kinetic.Generator) { g.Touch[7].Table = g.Touch[0].Table },
		"wrong entry":    func(g *kinetic.Generator) { g.Tables[9] ^= 2 },
		"wrong class":    func(g *kinetic.Generator) { g.Tables[9] ^= 1 << 24 },
		"wrong rate":     func(g *kinetic.Generator) { g.Shapes[0].Rate[1][3] *= 1 + 1e-15 },
		"wrong delta":    func(g *kinetic.Generator) { g.Shapes[1].Delta[5]++ },
		"wrong share":    func(g *kinetic.Generator) { g.Shapes[0].Split[1] += 1 << 50 },
		"lost hit":       func(g *kinetic.Generator) { g.Moves[0].LastHit = g.Moves[0].FirstHit },
		"wrong position": func(g *kinetic.Generator) { g.Hits[0].Row[1] ^= 1 },
		"wrong slot":     func(g *kinetic.Generator) { g.Seats[0].Slots[0].Offset[0]++ },
		"wrong count":    func(g *kinetic.Generator) { g.Families[0].Terms-- },
		"wrong energy":   func(g *kinetic.Generator) { g.Families[1].Energy[0] = 1 },
		"wrong class rate": func(g *kinetic.Generator) {
			g.Rates[1] *= 1 + 1e-14
		},
		"wrong reference": func(g *kinetic.Generator) {
			g.Reference = [][]uint8{make([]uint8, g.Cells()), nil}
			g.Reference[0][5] = 1
		},
		"wrong column": func(g *kinetic.Generator) { g.Shapes[0].Present ^= 1 },
	} {
		g, err := kinetic.Compile(spec)
		if err != nil {
			t.Fatal(err)
		}
		fault(g)
		if err := CheckGenerator(g, sys); err == nil {
			t.Errorf("%s was not found", name)
		}
	}
}

// The random models cover what they are meant to cover.
func TestRandomSpec(t *testing.T) {
	count := map[string]int{}
	for seed := range uint64(300) {
		s := RandomSpec(seed, Enumerable)
		again := RandomSpec(seed, Enumerable)
		sys, err := exact.NewSystem(s)
		if err != nil {
			t.Fatal(err)
		}
		if sys2, err := exact.NewSystem(again); err != nil || sys2.OrbitSize().Cmp(sys.OrbitSize()) != 0 {
			t.Fatalf("seed %d gives two models", seed)
		}
		note := func(what string, is bool) {
			if is {
				count[what]++
			}
		}
		note("open", !s.Lattice.Periodic())
		note("length 1", s.Lattice.Size[0] == 1)
		note("four axes", s.Lattice.Axes == 4)
		note("frozen", sys.Frozen())
		note("several bath operators", len(s.Bath) > 1)
		for _, f := range s.Families {
			note("truncated", f.Cut == kinetic.Truncate && !s.Lattice.Periodic())
			note("antiferromagnetic", f.Coupling < 0)
			note("dropped family", f.Coupling == 0)
			note("mixed", len(f.Operator.X) > 0 && len(f.Operator.Z) > 0)
		}
		for _, k := range sys.Kinds {
			note("line", k.Line)
			note("order", k.Order)
			for _, l := range sys.Reference[k.First : k.First+k.Count] {
				note("frustrated", l != 0)
			}
		}
		for _, b := range s.Bath {
			note(string(b.Law.Kind), true)
			note("part of the sites", b.Sites != nil)
		}
	}
	for _, what := range strings.Split("open,length 1,four axes,frozen,several bath operators,truncated,antiferromagnetic,"+
		"dropped family,mixed,line,order,frustrated,heat-bath,metropolis,symmetric,power,table,part of the sites", ",") {
		if count[what] < 5 {
			t.Errorf("only %d of 300 random models with: %s", count[what], what)
		}
	}
}
