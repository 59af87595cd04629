package main

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"runtime"
	"slices"

	"sojourn/configs"
	"sojourn/kinetic"
	"sojourn/kinetic/exact"
	"sojourn/observables"
	"sojourn/observables/archive"

	"sojourn/cmd/sojourn/internal/sharing"
)

// prepared is a point of a study, compiled and ready to run.
type prepared struct {
	config      *configs.Point
	generator   *kinetic.Generator
	observables []observables.Observable
	plan        observables.Plan
	lanes       int   // trajectories in a unit
	bytes       int64 // of memory, while one unit runs
	spins       bool  // whether there is a magnetization, so that starts up and down mean something
}

// siteFloor is what any engine needs at least, in bytes per site. It serves to
// refuse a lattice before anything of its size is allocated.
const siteFloor = 8

// prepare compiles one point. A point that does not fit the memory is refused
// before it is compiled; available is 0 if the memory is not known.
func prepare(p *configs.Point, available int64) (*prepared, error) {
	sites := 1.0
	for _, n := range p.Spec.Lattice.Lengths() {
		sites *= float64(n)
	}
	sites *= float64(max(p.Spec.Sites, 1))
	if need := sites*siteFloor + p.DrawnBytes(); available > 0 && need > float64(available) {
		return nil, tooLarge(p, need, available)
	}
	g, err := p.Generator()
	if err != nil {
		return nil, badRequest("%s: %w", pointText(p), err)
	}
	requests := make([]observables.Request, len(p.Observables))
	for i, o := range p.Observables {
		requests[i] = observables.Request{Name: o.Name, Kind: observables.Kind(o.Kind), Family: o.Family, Tracked: o.Tracked, Wavevector: o.Wavevector}
	}
	obs, err := observables.Bind(g, requests)
	if err != nil {
		return nil, badRequest("%s: %w", pointText(p), err)
	}
	q := &prepared{config: p, generator: g, observables: obs, plan: planOf(p)}
	if err := q.plan.Check(g); err != nil {
		return nil, badRequest("%s: %w", pointText(p), err)
	}
	for i := range g.Families {
		q.spins = q.spins || g.Families[i].Order && g.Families[i].Terms > 0
	}
	name := p.Trajectory.EngineName
	if err := kinetic.CheckEngine(name, g); err != nil {
		return nil, badRequest("%s: %w", pointText(p), err)
	}
	q.lanes = kinetic.EngineLanes(name)
	q.bytes = kinetic.EngineBytes(name, g) + observables.Bytes(g, q.observables, p.Pairs, q.plan, q.lanes)
	if available > 0 && q.bytes > available {
		return nil, tooLarge(p, float64(q.bytes), available)
	}
	return q, nil
}

// prepareAll compiles every point of a study and reports all that fail.
func prepareAll(s *configs.Study, available int64) ([]*prepared, error) {
	drawn := 0.0
	for i := range s.Points {
		drawn += s.Points[i].DrawnBytes()
	}
	if available > 0 && drawn > float64(available) {
		return nil, badRequest("%s: the random couplings of %s would need %s of memory together, and there are %s; use fewer samples, a smaller lattice, or several studies",
			s.Name, plural(len(s.Points), "point"), bytesOf(int64(math.Min(drawn, math.MaxInt64/2))), bytesOf(available))
	}
	points := make([]*prepared, len(s.Points))
	faults := make([]error, len(s.Points))
	inTurns(len(points), runtime.GOMAXPROCS(0), func(i int) {
		points[i], faults[i] = prepare(&s.Points[i], available)
	})
	var placed configs.Faults
	for _, err := range faults {
		var f configs.Faults
		if errors.As(err, &f) && !slices.Contains(placed, f[0]) {
			placed = append(placed, f...)
		}
	}
	if placed != nil {
		return nil, placed
	}
	return points, errors.Join(faults...)
}

func tooLarge(p *configs.Point, need float64, available int64) error {
	f := p.SizeAt
	f.Message = fmt.Sprintf("one trajectory on %s sites would need %s of memory, and there are %s; use a smaller lattice or a larger machine",
		sizeText(p.Spec.Lattice.Lengths()), bytesOf(int64(math.Min(need, math.MaxInt64/2))), bytesOf(available))
	return configs.Faults{f}
}

// pointText names a point for a message.
func pointText(p *configs.Point) string {
	s := fmt.Sprintf("%s %s at beta %s", p.Model, sizeText(p.Spec.Lattice.Lengths()), shortest(p.Spec.Beta))
	for _, x := range p.Scan {
		if furtherPhysics(x.Name) {
			s += ", " + setting{x.Name, x.Value}.String()
		}
	}
	return s
}

func planOf(p *configs.Point) observables.Plan {
	plan := observables.Plan{Settle: p.Trajectory.Settle, Span: p.Trajectory.Span, Step: p.Trajectory.Step}
	if c := p.Covariance; c != nil {
		plan.Covariance, plan.Every, plan.Limit = c.Of, c.Every, c.Limit
	}
	return plan
}

// start is the state in which a unit begins. With `both` even units start up and
// odd ones down, or where there are no spins from the reference and at random.
func (q *prepared) start(unit int) kinetic.Start {
	if q.config.Trajectory.Start != "both" {
		return kinetic.Start(q.config.Trajectory.Start)
	}
	even, odd := kinetic.StartReference, kinetic.StartRandom
	if q.spins {
		even, odd = kinetic.StartUp, kinetic.StartDown
	}
	if unit%2 == 0 {
		return even
	}
	return odd
}

// begin returns the engine at the start of a unit.
func (q *prepared) begin(unit int) (kinetic.Engine, error) {
	return kinetic.NewEngine(q.config.Trajectory.EngineName, q.generator, q.config.Stream, unit, q.start(unit))
}

// siteRate is the largest total rate of one site, or where couplings vary in
// size about that, the same for all samples.
func (q *prepared) siteRate() float64 {
	if q.generator.Couplings != nil {
		return q.config.MaxRate * float64(len(q.config.Spec.Bath))
	}
	r := q.generator.Rates
	return r[len(r)-1]
}

func (q *prepared) sites() int { return q.config.Spec.SiteCount() }

func (q *prepared) cost() sharing.Cost {
	t := &q.config.Trajectory
	return sharing.Cost{
		Sites: float64(q.sites()), Rate: q.siteRate(), Time: t.Settle + t.Span,
		Samples: float64(q.plan.Samples()), Lanes: float64(q.lanes),
	}
}

// manifest is the study as the results directory remembers it.
func manifest(s *configs.Study, points []*prepared) (archive.Manifest, error) {
	m := archive.Manifest{Tool: release, Study: s.Name, Title: s.Title, Scanned: append([]string{}, s.Scanned...)}
	for _, q := range points {
		facts, err := q.facts()
		if err != nil {
			return m, badRequest("%s: %w", pointText(q.config), err)
		}
		p := archive.Point{
			Key: q.config.Key, Count: q.config.Trajectory.Count, Extent: sharing.Extent(q.cost()), Facts: facts,
			Parameters: []archive.Parameter{}, Scan: []archive.Parameter{},
		}
		for _, x := range q.config.Parameters {
			p.Parameters = append(p.Parameters, archive.Parameter{Name: x.Name, Value: x.Value})
		}
		for _, x := range q.config.Scan {
			p.Scan = append(p.Scan, archive.Parameter{Name: x.Name, Value: x.Value, Numbers: x.Numbers})
		}
		m.Points = append(m.Points, p)
	}
	return m, nil
}

// facts is what fit needs to know about a point besides its tables.
func (q *prepared) facts() (archive.Facts, error) {
	c, g := q.config, q.generator
	f := archive.Facts{
		Model: c.Model, Beta: c.Spec.Beta, Size: g.Lattice.Lengths(),
		Sites: q.sites(), Levels: g.Levels, Engine: c.Trajectory.EngineName, Lanes: q.lanes, Start: c.Trajectory.Start,
		Seed: c.Trajectory.Seed, Settle: c.Trajectory.Settle, Span: c.Trajectory.Span, Step: c.Trajectory.Step,
		Lags: observables.Lags(q.plan.Samples()), MaxRate: c.MaxRate, Pairs: c.Pairs,
		Families: []archive.Family{}, Bath: []archive.BathFact{}, Observables: []archive.Observable{},
	}
	for a := range g.Lattice.Axes {
		f.Open = append(f.Open, g.Lattice.Open[a])
	}
	for i := range g.Families {
		x := &g.Families[i]
		f.Families = append(f.Families, archive.Family{Name: x.Name, Group: x.Group, Terms: x.Terms})
	}
	f.EnergyLow, f.EnergyHigh = g.EnergyRange()
	largest := g.MaxRates()
	for i, b := range c.Spec.Bath {
		// A table law that does not list w = 0 has no G(0) to tell.
		zero, err := b.Law.At(new(big.Rat), c.Spec.Beta)
		if err != nil {
			zero = 0
		}
		f.Bath = append(f.Bath, archive.BathFact{Name: b.Name, Law: string(b.Law.Kind), RateZero: zero, MaxRate: largest[i]})
	}
	for i, o := range q.observables {
		f.Observables = append(f.Observables, archive.Observable{Name: o.Name, Kind: string(o.Kind), Scalar: o.Scalar(), Single: c.Observables[i].Single})
	}
	if c.Covariance != nil {
		f.Covariance = &archive.Covariance{Of: c.Covariance.Of, Every: c.Covariance.Every, Limit: c.Covariance.Limit}
	}
	ground, err := kinetic.GroundStates(g.Spec)
	if err != nil {
		return f, err
	}
	if n := int(math.Round(ground.Encoded)); ground.Known && float64(n) == ground.Encoded {
		f.EncodedQubits = &n
	}
	f.LnStates = q.lnStates()
	f.ClosedClasses, _ = q.closedClasses()
	return f, nil
}

// enumerated is the largest number of sites for which the class of the reference
// state is counted, which takes the cube of it.
const enumerated = 256

// lnStates is ln of the number of states in the class of the reference state, if
// no jump is frozen; nil where it was not counted.
func (q *prepared) lnStates() *float64 {
	if q.sites() > enumerated {
		return nil
	}
	system, err := exact.NewSystem(q.generator.Spec)
	if err != nil || system.Frozen() {
		return nil
	}
	n := new(big.Float).SetInt(system.OrbitSize())
	var mantissa big.Float
	exponent := n.MantExp(&mantissa)
	m, _ := mantissa.Float64()
	ln := math.Log(m) + float64(exponent)*math.Ln2
	return &ln
}
