package main

import (
	"fmt"
	"io"

	"sojourn/configs"
	"sojourn/kinetic"
	"sojourn/kinetic/exact"
	"sojourn/observables"

	"sojourn/cmd/sojourn/internal/sharing"
)

// planned is a point with what plan finds out about it.
type planned struct {
	*prepared
	ground          kinetic.Ground
	closed, reached *int // see closedClasses
	load            load
}

// plan checks a study and says what it would do.
func (c *console) plan(o *options, args []string) error {
	study, err := configs.Load(args[0])
	if err != nil {
		return err
	}
	c.notes(study)
	points, err := prepareAll(study, memory())
	if err != nil {
		return err
	}
	list := make([]planned, len(points))
	for i, q := range points {
		p := planned{prepared: q}
		p.closed, p.reached = q.closedClasses()
		if p.ground, err = kinetic.GroundStates(q.generator.Spec); err != nil {
			return badRequest("%s: %w", pointText(q.config), err)
		}
		if p.load, err = q.calibrate(); err != nil {
			return fmt.Errorf("%s: %w", pointText(q.config), err)
		}
		list[i] = p
	}
	if o.json {
		return c.writeJSON(jsonOfPlan(study, list))
	}
	_, err = io.WriteString(c.stdout, planText(study, list, sharing.Workers(c.getenv)))
	return err
}

// countable is the largest number of states that plan lists to count closed
// classes.
const countable = 1 << 16

// closedClasses counts the sets of states that no jump leaves: among all values
// that terms and tracked operators can have together, and among those that the
// bath operators reach from the reference state. Nil where the lattice is too
// large to enumerate.
func (q *prepared) closedClasses() (all, reached *int) {
	if q.sites() > enumerated {
		return nil, nil
	}
	system, err := exact.NewSystem(q.generator.Spec)
	if err != nil {
		return nil, nil
	}
	number := func(scope exact.Scope) *int {
		classes, err := system.ClosedClasses(scope, countable)
		if err != nil {
			return nil
		}
		n := len(classes)
		return &n
	}
	return number(exact.Everything), number(exact.Moved)
}

// why says how the point came by its engine.
func (q *prepared) why() string {
	t := &q.config.Trajectory
	rates := plural(len(q.generator.Rates)-1, "distinct rate")
	if q.generator.Couplings != nil {
		rates = "couplings of many sizes"
	}
	if q.generator.Wide != nil {
		rates = "more levels than tables hold"
	}
	if t.Engine != kinetic.AutoEngine {
		return rates + "; as asked for"
	}
	use := kinetic.Use{Step: t.Step}
	for _, o := range q.observables {
		use.OneByOne = use.OneByOne || o.Kind == observables.Local || o.Kind == observables.Operator
	}
	if name, why, err := kinetic.Choose(q.generator, t.Engine, use); err == nil && name == t.EngineName {
		return rates + "; " + why
	}
	return rates + "; chosen for every point unless asked otherwise"
}

// diskBytes is roughly what the tables of all trajectories take.
func (q *prepared) diskBytes() int64 {
	const perRow = 8 // bytes, compressed, as found on the bundled studies
	lags := len(observables.Lags(q.plan.Samples()))
	rows := len(q.observables)*observables.MomentSegments + len(q.config.Pairs)*observables.PairSegments*(lags+1) +
		len(q.observables)*len(observables.TransientTimes(q.plan.Settle, q.plan.Span, q.plan.Step)) + 1
	if q.plan.Covariance != "" {
		displacements := 1
		for _, n := range q.generator.Lattice.Lengths() {
			displacements *= min(n, 2*q.plan.Limit+1)
			rows += n/2 + 1
		}
		rows += displacements/2 + 1
	}
	return int64(rows) * perRow * int64(q.config.Trajectory.Count)
}
