package kinetic

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"sojourn/kinetic/lattice"
)

// AutoEngine asks Choose to choose.
const AutoEngine = "auto"

// Use says what is made of trajectories, as far as it matters to which engine
// serves best.
type Use struct {
	// OneByOne says that autocorrelations of single terms or of lines are wanted,
	// averaged over the lattice, beside those of sums.
	OneByOne bool
	// Step is the time between samples; 0 leaves their cost out.
	Step float64
}

// Estimate is what an engine is expected to cost. Times are those of the machine
// on which the constants of the model were measured: ratios carry over to
// others, the numbers less so. They decide which engine a point gets, so they
// are a function of the generator alone.
type Estimate struct {
	Engine string
	Err    error // why it cannot run the generator; there is no cost then
	Lanes  int   // trajectories in a unit
	// PerTime is the cost of a unit of time of a unit, all lanes together, in
	// nanoseconds.
	PerTime float64
	// Effect is by how much a mean over the lanes of a unit varies more than one
	// over as many independent trajectories.
	Effect float64
	Bytes  int64 // of one engine
}

// Cost is the cost in nanoseconds of what one trajectory says in a unit of time.
func (e Estimate) Cost() float64 { return e.PerTime * e.Effect / float64(e.Lanes) }

// Choose returns the engine that ask names, or for AutoEngine the one that costs
// least for what it says, with the reason in words. It depends on the generator
// and on use only, never on how long anything takes or on how many trajectories
// are wanted. An engine that cannot run the generator is an error.
func Choose(g *Generator, ask string, use Use) (engine, why string, err error) {
	list := Estimates(g, use)
	if ask != AutoEngine {
		for _, e := range list {
			if e.Engine == ask {
				return ask, "as asked for", e.Err
			}
		}
		return "", "", fmt.Errorf("there is no engine %q", ask)
	}
	best := -1
	for i, e := range list {
		if e.Err == nil && (best < 0 || e.Cost() < list[best].Cost()) {
			best = i
		}
	}
	if best < 0 {
		var all []error
		for _, e := range list {
			all = append(all, fmt.Errorf("%s: %w", e.Engine, e.Err))
		}
		return "", "", errors.Join(all...)
	}
	return list[best].Engine, reason(list, best), nil
}

// reason compares the best engine with the next.
func reason(list []Estimate, best int) string {
	next := -1
	for i, e := range list {
		if i != best && e.Err == nil && (next < 0 || e.Cost() < list[next].Cost()) {
			next = i
		}
	}
	if next < 0 {
		return "the only engine that runs this generator"
	}
	a, b := list[best], list[next]
	return fmt.Sprintf("a trajectory costs %.2g times less than with %s, what lanes share counted in", b.Cost()/a.Cost(), b.Engine)
}

// Estimates returns what each engine is expected to cost, in a fixed order.
func Estimates(g *Generator, use Use) []Estimate {
	a := pilot(g)
	return []Estimate{classEstimate(g, a), laneEstimate(g, a, use), tileEstimate(g, a), compositionEstimate(g, a)}
}

// pilot returns the mean rate of jumps of a seat in equilibrium, its activity,
// from a short run with fixed seed that begins at the reference state, on a
// lattice cut down to a few thousand sites: near neighbours decide most of it.
func pilot(g *Generator) float64 {
	small, err := g.cutDown(pilotSites)
	if err != nil {
		small = g
	}
	var e Engine
	for _, make := range []func(*Generator, [32]byte, int, Start) (Engine, error){NewLanes, NewClasses, NewComposition} {
		if e, err = make(small, [32]byte{}, 0, StartReference); err == nil {
			break
		}
	}
	fastest := small.MaxRate()
	if err != nil || fastest == 0 {
		return 0
	}
	const settle, span = 10, 10
	e.Advance(settle / fastest)
	before := e.Jumps()
	e.Advance((settle + span) / fastest)
	return float64(e.Jumps()-before) / float64(e.Lanes()) / float64(small.Addresses()) * fastest / span
}

const pilotSites = 4096

// cutDown compiles the generator on a lattice of at most the given number of
// sites, cutting the longest axes and keeping parities.
func (g *Generator) cutDown(sites int) (*Generator, error) {
	s := g.Spec
	for s.Lattice.Cells()*s.Sites > sites {
		longest := 0
		for a, n := range s.Lattice.Size {
			if n > s.Lattice.Size[longest] {
				longest = a
			}
		}
		n := &s.Lattice.Size[longest]
		if *n < 8 {
			break
		}
		*n -= 2
	}
	if s.Lattice == g.Spec.Lattice {
		return g, nil
	}
	s.Families = slices.Clone(s.Families)
	for f := range s.Families {
		s.Families[f].Signs = cropped(s.Families[f].Signs, g.Lattice, s.Lattice)
		s.Families[f].Couplings = cropped(s.Families[f].Couplings, g.Lattice, s.Lattice)
	}
	return Compile(s)
}

// cropped takes what belongs to the cells of a smaller lattice; nil stays nil.
func cropped[T any](all []T, from, to lattice.Lattice) []T {
	if all == nil {
		return nil
	}
	out := make([]T, to.Cells())
	for c := range out {
		out[c] = all[from.Index(to.Coord(c))]
	}
	return out
}

// The model of costs. Constants are nanoseconds, fitted to BenchmarkEngines on a
// machine with 2 MiB of second-level cache.

// outOfCache is how far, from 0 to 1, accesses to so many bytes have moved from
// the cache to memory.
func outOfCache(bytes int64) float64 {
	octaves := math.Log2(float64(bytes) / (1.5 * (1 << 20)))
	return min(max((octaves-1.5)/4, 0), 1)
}

// classEstimate counts what a jump costs and how many events are null: each
// class is drawn from as if it had a few seats more than it has.
func classEstimate(g *Generator, activity float64) Estimate {
	e := Estimate{Engine: ClassEngine, Lanes: 1, Effect: 1, Bytes: ClassBytes(g)}
	if e.Err = g.oneByOne(); e.Err != nil {
		return e
	}
	touches := g.meanTouches()
	jump := 15 + 6.5*touches + 35*touches*outOfCache(e.Bytes)
	null := 0.0
	for _, r := range g.Rates {
		null += 2 * r
	}
	e.PerTime = jump*activity*float64(g.Addresses()) + 25*null
	return e
}

// tileEstimate is for lattices with so many tiles that every octave has many.
func tileEstimate(g *Generator, activity float64) Estimate {
	e := Estimate{Engine: TileEngine, Lanes: 1, Effect: 1, Bytes: TileBytes(g)}
	if e.Err = g.oneByOne(); e.Err == nil && g.Levels != 2 {
		e.Err = fmt.Errorf("the tile engine runs 2 levels, not %d", g.Levels)
	}
	if e.Err != nil {
		return e
	}
	touches := g.meanTouches()
	jump := 45 + 8*touches + 120*outOfCache(e.Bytes)
	// Octaves without tiles are drawn from as if they had two.
	null := 0.0
	for _, r := range g.Rates {
		null = math.Max(null, 4*tileSeats*r)
	}
	e.PerTime = jump*activity*float64(g.Addresses()) + 25*null
	return e
}

// compositionEstimate is the only one for couplings that vary.
func compositionEstimate(g *Generator, activity float64) Estimate {
	e := Estimate{Engine: CompositionEngine, Lanes: 1, Effect: 1}
	if g.Couplings == nil && g.Wide == nil {
		e.Err = errors.New("the composition engine is for couplings that vary in size")
		return e
	}
	touches := g.meanTouches()
	if g.Wide != nil {
		e.Bytes = wideBytes(g)
		moves := float64(len(g.Moves)) / float64(max(1, len(g.Places)))
		e.PerTime = (40 + touches*(20+15*moves)) * activity * float64(g.Addresses())
		return e
	}
	e.Bytes = int64(g.Addresses()) * int64(21+4*g.Bits)
	e.PerTime = (40 + 20*touches + 70*touches*outOfCache(e.Bytes)) * activity * float64(g.Addresses())
	return e
}

// oneByOne says why the engines that keep classes of seats cannot run.
func (g *Generator) oneByOne() error {
	if g.Couplings != nil {
		return errVaryingCouplings
	}
	if g.Wide != nil {
		return errWidePatterns
	}
	if g.Addresses() > math.MaxInt32 {
		return fmt.Errorf("the lattice has %d sites; at most %d are possible", g.Addresses(), math.MaxInt32)
	}
	return nil
}

// meanTouches is how many seats a jump changes, averaged over places and moves.
func (g *Generator) meanTouches() float64 {
	n := 0.0
	for _, m := range g.Moves {
		n += float64(m.Last-m.First) / float64(len(g.Moves))
	}
	return n
}

// laneEstimate counts attempts, whose cost does not depend on how many lanes
// accept, and the sums of each sample.
func laneEstimate(g *Generator, activity float64, use Use) Estimate {
	p, err := newLanePlan(g)
	if err != nil {
		return Estimate{Engine: LaneEngine, Err: err, Lanes: lanesPerWord, Effect: 1}
	}
	e := Estimate{Engine: LaneEngine, Lanes: lanesPerWord, Effect: scalarEffect, Bytes: p.bytes()}
	e.PerTime = p.attemptCost() * p.clock
	if use.Step > 0 {
		e.PerTime += 0.75 * float64(g.Cells()*len(g.Families)) / use.Step
	}
	if use.OneByOne && p.clock > 0 {
		e.Effect = sharedEffect(activity * float64(g.Addresses()) / p.clock)
	}
	return e
}

// scalarEffect is the design effect of the autocorrelation of a sum over the
// lattice: it varies mostly by pairs of distant terms, which lanes do not share.
const scalarEffect = 1.1

// sharedEffect is the design effect of the autocorrelation of single terms,
// averaged over the lattice, in 64 lanes that accept a share a of the attempts.
//
// Let an attempt turn a term with probability a, independently of the past. After
// n attempts s(0) s(t) has the mean (1-2a)^n, given the attempts that all lanes
// share; n being Poisson of mean m, the variance of this mean over n is
// exp(-4a(1-a)m) - exp(-4am), and the whole variance of s(0) s(t) is
// 1 - exp(-4am). At the relaxation time 2am = 1 their ratio, the correlation
// between lanes, is (exp(2a) - 1)/(exp(2) - 1). Where neighbours decide whether
// an attempt is accepted lanes share less, so this errs on the side of caution.
func sharedEffect(a float64) float64 {
	return 1 + (lanesPerWord-1)*math.Expm1(2*a)/math.Expm1(2)
}

// attemptCost is the cost of one attempt of all lanes.
func (p *lanePlan) attemptCost() float64 {
	cost := 18.0
	direct, turned := 0.0, 0.0
	for _, s := range p.sets {
		direct = math.Max(direct, float64(len(s.direct)))
		turned = math.Max(turned, float64(s.turned))
	}
	cost += 1.5*direct + 0.35*turned
	if len(p.moves) > 1 {
		cost += 2.5
	}
	if p.hits > 0 {
		cost += 6 + 3*float64(p.hits)
	}
	lines := 0.0
	words, picks := 0.0, 0.0
	for z := range p.zoned {
		mv := &p.zoned[z]
		lines += float64(mv.near.last-mv.near.first) / float64(len(p.zoned))
		n := 0
		for _, t := range p.terms[mv.firstTerm:mv.lastTerm] {
			n += int(t.last - t.first)
		}
		words = math.Max(words, float64(n))
		picks = math.Max(picks, float64(mv.combos))
	}
	switch p.kernel {
	case kernelFlips8, kernelLevels8:
		cost += 9
	case kernelAny:
		cost += 1.5*words + 1*picks
	}
	return cost + 21*lines*outOfCache(8*int64(p.layout.size))
}
