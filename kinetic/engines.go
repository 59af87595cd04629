package kinetic

import (
	"fmt"
	"math"
	"strings"
)

// engineKind is an engine as it is chosen by name.
type engineKind struct {
	name  string
	lanes int
	make  func(g *Generator, seed [32]byte, unit int, start Start) (Engine, error)
	check func(g *Generator) error // whether it runs a generator
	bytes func(g *Generator) int64 // of memory, for one that it runs
}

var engineKinds = []engineKind{
	{ClassEngine, 1, NewClasses, checkClasses, ClassBytes},
	{TileEngine, 1, NewTiles, checkTiles, TileBytes},
	{CompositionEngine, 1, NewComposition, checkComposition, CompositionBytes},
	{LaneEngine, lanesPerWord, NewLanes, checkLanes, laneBytes},
}

// EngineNames lists the engines.
func EngineNames() []string {
	var out []string
	for _, k := range engineKinds {
		out = append(out, k.name)
	}
	return out
}

// engineOf panics if there is no engine of that name.
func engineOf(name string) *engineKind {
	for i := range engineKinds {
		if engineKinds[i].name == name {
			return &engineKinds[i]
		}
	}
	panic(fmt.Sprintf("kinetic: there is no engine %q; there are %s", name, strings.Join(EngineNames(), ", ")))
}

// NewEngine returns the engine of that name at time 0, for the given unit of the
// stream that seed identifies. It panics if there is no engine of that name.
func NewEngine(name string, g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	return engineOf(name).make(g, seed, unit, start)
}

// CheckEngine says why an engine cannot run a generator; nil if it can. It
// panics if there is no engine of that name.
func CheckEngine(name string, g *Generator) error { return engineOf(name).check(g) }

// EngineBytes estimates the memory of one engine, which CheckEngine accepts, in
// bytes. It panics if there is no engine of that name.
func EngineBytes(name string, g *Generator) int64 { return engineOf(name).bytes(g) }

// EngineLanes is the number of trajectories that one engine of that name runs
// at once. It panics if there is no engine of that name.
func EngineLanes(name string) int { return engineOf(name).lanes }

// checkSize refuses lattices whose addresses do not fit 31 bits.
func checkSize(g *Generator) error {
	if g.Addresses() > math.MaxInt32 {
		return fmt.Errorf("the lattice has %d sites; this engine runs at most %d", g.Addresses(), math.MaxInt32)
	}
	return nil
}

func checkClasses(g *Generator) error {
	if g.Couplings != nil {
		return errVaryingCouplings
	}
	if g.Wide != nil {
		return errWidePatterns
	}
	return checkSize(g)
}

func checkTiles(g *Generator) error {
	if g.Levels != 2 {
		return fmt.Errorf("the tile engine runs 2 levels, not %d; use engine = \"classes\"", g.Levels)
	}
	return checkClasses(g)
}

func checkComposition(g *Generator) error {
	if g.Couplings == nil && g.Wide == nil {
		return fmt.Errorf("the composition engine is for couplings that vary in size; use engine = \"classes\"")
	}
	return checkSize(g)
}

func checkLanes(g *Generator) error {
	_, err := newLanePlan(g)
	return err
}

func laneBytes(g *Generator) int64 {
	n, err := LaneBytes(g)
	if err != nil {
		panic("kinetic: " + err.Error())
	}
	return n
}
