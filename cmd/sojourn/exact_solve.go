package main

import (
	"fmt"
	"math"
	"math/big"
	"slices"

	"sojourn/kinetic/exact"
	"sojourn/kinetic/lattice"
	"sojourn/observables"
)

// roundOff is the error of a computed rate against the largest exit rate.
const roundOff = 1e-14

// solve computes the exact values of a point; say tells of progress.
func (q *prepared) solve(r *route, say func(format string, a ...any)) (exactPointJSON, error) {
	size := q.generator.Lattice.Lengths()
	out := exactPointJSON{
		Key: q.config.Key, Model: q.config.Model, Beta: q.config.Spec.Beta, Length: size[0], Size: size,
		Observables: []exactObservableJSON{}, Warnings: []warningJSON{},
	}
	q.countClasses(r, &out)
	for _, k := range observables.Lags(q.plan.Samples()) {
		out.Lags = append(out.Lags, float64(k)*q.plan.Step)
	}
	if r.sector {
		return out, q.solveSectors(r, &out, say)
	}
	say("listing %s states", r.total)
	states, err := r.system.Explore(r.limit)
	if err != nil {
		return out, tooMany(err)
	}
	out.States = uint64(states.Len())
	out.rounding = roundOff * slices.Max(states.Matrix().Exit)
	relax, err := out.spectrum(states, say)
	if err != nil {
		return out, err
	}
	if out.Gap > 0 && out.rounding > 1e-4*out.Gap {
		out.warn("rounding", "rates carry rounding errors of about %s, which is %s of the gap: slow times are no better than that", plain(out.rounding), shareText(out.rounding/out.Gap))
	}
	for _, o := range q.observables {
		x, err := exactObservable(r.system, o)
		if err != nil {
			return out, err
		}
		if x = r.system.Inequivalent(x); len(x.Components) > 1 && len(x.Components)*states.Len() > solved {
			out.warn("not_solved", "%s: its %s are not translates of each other, too many to solve one by one on %d states", o.Name, plural(len(x.Components), "component"), states.Len())
			continue
		}
		say("relaxation of %s", o.Name)
		relaxation, err := relax(x)
		if err != nil {
			out.warn("not_converged", "%s: %v", o.Name, err)
			continue
		}
		out.add(o.Name, relaxation)
	}
	if err := q.covariances(states, &out); err != nil {
		return out, err
	}
	return out, nil
}

// spectrum fills the lowest eigenvalues and returns what decomposes an
// observable: by the full spectrum where there are few states.
func (p *exactPointJSON) spectrum(states *exact.States, say func(format string, a ...any)) (func(exact.Observable) (exact.Relaxation, error), error) {
	if states.Len() <= diagonalised {
		spectrum, err := states.Spectrum()
		if err != nil {
			return nil, err
		}
		levels := spectrum.Levels()[1:]
		p.levels(levels[:min(len(levels), shownLevels)])
		return func(o exact.Observable) (exact.Relaxation, error) { return spectrum.Relaxation(o), nil }, nil
	}
	say("lowest eigenvalues")
	levels, err := states.Lowest(shownLevels)
	if err != nil {
		p.warn("not_converged", "eigenvalues: %v", err)
	}
	p.levels(levels)
	return states.Relaxation, nil
}

// levels fills in distinct eigenvalues above 0, and the gap.
func (p *exactPointJSON) levels(levels []exact.Level) {
	p.Levels, p.Eigenvalues = []exactLevelJSON{}, []float64{0}
	if len(levels) > 0 && levels[0].Rate < 10*p.rounding {
		p.warn("rounding", "the lowest eigenvalues are lost in rounding: the gap is below %s", plain(10*p.rounding))
		return
	}
	for _, l := range levels {
		p.Levels = append(p.Levels, exactLevelJSON{l.Rate, l.Multiplicity, l.AtLeast})
		for range l.Multiplicity {
			p.Eigenvalues = append(p.Eigenvalues, l.Rate)
		}
	}
	if len(levels) > 0 {
		p.Gap, p.GapTime = levels[0].Rate, 1/levels[0].Rate
	}
}

func (p *exactPointJSON) warn(code, format string, a ...any) {
	p.Warnings = append(p.Warnings, warningJSON{code, fmt.Sprintf(format, a...)})
}

// add puts down what there is to know of one observable.
func (p *exactPointJSON) add(name string, r exact.Relaxation) {
	j := exactObservableJSON{
		Name: name, Mean: rounded(r.Mean, r.Variance), Variance: r.Variance, Dirichlet: r.Dirichlet, TauInitial: r.TauInitial(), TauInt: r.TauInt,
		TauSlowest: r.TauSlowest(0), Tau1: r.TauSlowest(0.01), Tau20: r.TauSlowest(0.2),
	}
	if j.TauSlowest*10*p.rounding > 1 {
		j.TauInt, j.TauSlowest, j.Tau1, j.Tau20 = 0, 0, 0, 0
		p.warn("rounding", "%s: a relaxation time beyond %s is lost in rounding", name, plain(0.1/p.rounding))
	}
	for _, t := range p.Lags {
		j.Covariance = append(j.Covariance, r.Covariance(t))
	}
	for _, l := range p.Levels {
		share := 0.0
		for _, m := range r.Modes {
			if math.Abs(m.Rate-l.Rate) <= 1e-7*l.Rate+p.rounding && r.Variance > 0 {
				share += m.Weight / r.Variance
			}
		}
		j.Shares = append(j.Shares, share)
	}
	p.Observables = append(p.Observables, j)
}

// countClasses counts the closed classes among all values that terms and tracked
// operators can have together, and weighs them where there are few states.
func (q *prepared) countClasses(r *route, out *exactPointJSON) {
	all := r.system.TotalSize()
	if !r.system.Frozen() {
		// Every class has as many states as the moves connect.
		if n := new(big.Int).Div(all, r.total); n.IsInt64() && n.Int64() < math.MaxInt32 {
			count := int(n.Int64())
			out.Closed = &count
		}
	}
	if out.Closed != nil && *out.Closed == 1 {
		return
	}
	classes, err := r.system.ClosedClasses(exact.Everything, countable)
	if err != nil {
		if out.Closed == nil {
			out.warn("too_many_states", "closed classes are not counted: %v", err)
		}
		return
	}
	count := len(classes)
	out.Closed = &count
	if count == 1 {
		return
	}
	for _, c := range classes[:min(count, shownClasses)] {
		out.Classes = append(out.Classes, exactClassJSON{c.States, c.Weight})
	}
}

// covariances fills in the covariances in space that the study asks for, family
// by family.
func (q *prepared) covariances(states *exact.States, out *exactPointJSON) error {
	c := q.config.Covariance
	if c == nil {
		return nil
	}
	families, err := observables.FamiliesOf(q.generator, c.Of)
	if err != nil {
		return err
	}
	for _, f := range families {
		j := exactCovarianceJSON{Of: q.generator.Families[f].Name, Planes: [][]float64{}}
		local, err := states.System.Local(f)
		if err != nil {
			return err
		}
		if n := len(local.Components); float64(n)*float64(n)*float64(states.Len()) > 1e10 || n*states.Len() > 1<<26 {
			out.warn("not_solved", "covariance of %s: %s on %d states are too many", j.Of, plural(n, "term"), states.Len())
			continue
		}
		k, err := states.Covariance(local)
		if err != nil {
			return err
		}
		l := q.generator.Lattice
		for a := range l.Axes {
			var axis []float64
			for r := range min(l.Size[a]-1, c.Limit) + 1 {
				d := lattice.Offset{}
				d[a] = r
				axis = append(axis, k.At(d))
			}
			j.Axes = append(j.Axes, axis)
			j.Planes = append(j.Planes, k.Planes(a))
		}
		out.Covariance = append(out.Covariance, j)
	}
	return nil
}

// solveSectors computes each observable among the functions that share its
// symmetries.
func (q *prepared) solveSectors(r *route, out *exactPointJSON, say func(format string, a ...any)) error {
	if r.total.IsUint64() {
		out.States = r.total.Uint64()
	}
	out.warn("sector_only", "the states are too many to list one by one; each observable is exact, from the functions that share its symmetries under translations and flips. The slowest of these modes bounds 1/gap from below; modes of other symmetry were not looked at")
	list := make([]exact.Observable, len(q.observables))
	done := make([]*exact.Relaxation, len(list))
	failed := make([]error, len(list))
	for i, o := range q.observables {
		x, err := exactObservable(r.system, o)
		if err != nil {
			return err
		}
		list[i] = x
	}
	for i := range list {
		if done[i] != nil {
			continue
		}
		orbits, err := r.system.SectorSize(list[i])
		if err != nil {
			failed[i] = err
			continue
		}
		if orbits.Cmp(big.NewInt(int64(r.limit))) > 0 {
			failed[i] = fmt.Errorf("its symmetries leave %s orbits of states, more than the limit of %d", orbits, r.limit)
			continue
		}
		say("listing the sector of %s, at least %s orbits of %s states", q.observables[i].Name, orbits, r.total)
		sector, err := r.system.Sector(r.limit, list[i])
		if err != nil {
			failed[i] = err
			continue
		}
		for k := i; k < len(list); k++ {
			if done[k] != nil {
				continue
			}
			// An observable of another sector is refused, and comes later.
			relaxation, err := sector.Relaxation(list[k])
			if err == nil {
				done[k] = &relaxation
				say("%s is done", q.observables[k].Name)
			} else if k == i {
				failed[k] = err
			}
		}
	}
	for i, o := range q.observables {
		if done[i] == nil {
			out.warn("not_solved", "%s: %v", o.Name, failed[i])
			continue
		}
		out.add(o.Name, *done[i])
		out.GapBound = math.Max(out.GapBound, done[i].TauSlowest(0))
	}
	if q.config.Covariance != nil {
		out.warn("not_solved", "the covariance in space needs all states one by one")
	}
	return nil
}
