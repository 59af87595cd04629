package main

import (
	"errors"
	"fmt"
	"io"
	"math"
	"strings"

	"sojourn/configs"
	"sojourn/kinetic/exact"
	"sojourn/observables"
)

type exactJSON struct {
	Points []exactPointJSON `json:"points"`
}

type exactPointJSON struct {
	Point       int                   `json:"point"`
	Key         string                `json:"key"`
	Model       string                `json:"model"`
	Beta        float64               `json:"beta"`
	Length      int                   `json:"length"`
	Size        []int                 `json:"size"`
	States      int                   `json:"states"`
	Closed      *int                  `json:"closed_classes,omitempty"`
	Gap         float64               `json:"gap"`
	Eigenvalues []float64             `json:"eigenvalues"` // lowest first, as often as they occur
	Observables []exactObservableJSON `json:"observables"`
}

type exactObservableJSON struct {
	Name       string  `json:"name"`
	Mean       float64 `json:"mean"`
	Variance   float64 `json:"variance"`
	TauInitial float64 `json:"tau_initial"`
	TauInt     float64 `json:"tau_int"`
	TauSlowest float64 `json:"tau_slowest"`    // of any weight
	Tau1       float64 `json:"tau_slowest_1"`  // carrying 1 % of the variance with all slower ones
	Tau20      float64 `json:"tau_slowest_20"` // carrying 20 %
}

// diagonalised is the largest number of states whose full spectrum is computed:
// a few seconds.
const diagonalised = 1 << 10

// shownEigenvalues is how many of the lowest eigenvalues are reported.
const shownEigenvalues = 16

// exact computes without sampling what run and fit estimate.
func (c *console) exact(o *options, args []string) error {
	study, err := configs.Load(args[0])
	if err != nil {
		return err
	}
	c.notes(study)
	points, err := prepareAll(study, memory())
	if err != nil {
		return err
	}
	out := exactJSON{}
	var faults []error
	for i, q := range points {
		p, err := q.exactly()
		if err != nil {
			faults = append(faults, fmt.Errorf("%s: %w", pointText(q.config), err))
			continue
		}
		p.Point = i
		out.Points = append(out.Points, p)
	}
	if len(faults) > 0 {
		return &failure{exitBadRequest, errors.Join(faults...)}
	}
	if o.json {
		return c.writeJSON(out)
	}
	_, err = io.WriteString(c.stdout, exactText(study, points, &out))
	return err
}

// exactly diagonalises the generator of a point.
func (q *prepared) exactly() (exactPointJSON, error) {
	size := q.generator.Lattice.Lengths()
	out := exactPointJSON{Key: q.config.Key, Model: q.config.Model, Beta: q.config.Spec.Beta, Length: size[0], Size: size}
	system, err := exact.NewSystem(q.generator.Spec)
	if err != nil {
		return out, err
	}
	states, err := system.Explore(diagonalised)
	if err != nil {
		return out, err
	}
	spectrum, err := states.Spectrum()
	if err != nil {
		return out, err
	}
	out.States, out.Gap = states.Len(), spectrum.Gap()
	out.Closed, _ = q.closedClasses()
	out.Eigenvalues = spectrum.Rates[:min(len(spectrum.Rates), shownEigenvalues)]
	for _, o := range q.observables {
		x, err := exactObservable(system, o)
		if err != nil {
			return out, err
		}
		r := spectrum.Relaxation(x)
		out.Observables = append(out.Observables, exactObservableJSON{
			Name: o.Name, Mean: r.Mean, Variance: r.Variance, TauInitial: r.TauInitial(), TauInt: r.TauInt,
			TauSlowest: r.TauSlowest(0), Tau1: r.TauSlowest(0.01), Tau20: r.TauSlowest(0.2),
		})
	}
	return out, nil
}

// exactObservable is a recorded observable as a function of enumerated states.
func exactObservable(s *exact.System, o observables.Observable) (exact.Observable, error) {
	switch o.Kind {
	case observables.Energy:
		return s.Energy(), nil
	case observables.Magnetization:
		return s.Magnetization()
	case observables.Terms:
		return s.Terms(o.Families...)
	case observables.Local:
		return s.Local(o.Families...)
	case observables.Fourier:
		return s.Fourier(o.Wavevector, o.Families...)
	case observables.Operator:
		return s.Line(o.Line)
	}
	return exact.Observable{}, fmt.Errorf("no exact values for observables of kind %s", o.Kind)
}

func exactText(s *configs.Study, points []*prepared, x *exactJSON) string {
	var b strings.Builder
	b.WriteString(s.Name)
	if s.Title != "" {
		b.WriteString(": " + s.Title)
	}
	b.WriteString("\nexact values, in the class of the reference state\n")
	for i := range x.Points {
		p := &x.Points[i]
		head := pointText(points[i].config)
		tail := fmt.Sprintf("point %d", i)
		fmt.Fprintf(&b, "\n%s%s%s\n", head, strings.Repeat(" ", max(2, pageWidth-len(head)-len(tail))), tail)
		line := plural(p.States, "state")
		if p.Gap > 0 {
			line += fmt.Sprintf(", gap %s, 1/gap %s", plain(p.Gap), plain(1/p.Gap))
		}
		if p.Closed != nil && *p.Closed > 1 {
			line += fmt.Sprintf(", one of %d closed classes", *p.Closed)
		}
		fmt.Fprintf(&b, "  %s\n", line)
		t := newSheet("observable", "mean", "variance", "tau_initial", "tau_int", "tau_slowest", "of 1 %", "of 20 %")
		for _, o := range p.Observables {
			t.add(o.Name, plain(rounded(o.Mean, o.Variance)), plain(o.Variance), timeText(o.TauInitial), timeText(o.TauInt), timeText(o.TauSlowest), timeText(o.Tau1), timeText(o.Tau20))
		}
		t.write(&b, "  ")
	}
	b.WriteString("\ntau_slowest is the slowest mode of any weight in the observable; beside it, the time beyond which slower\n" +
		"modes together carry less than that share of its variance. 1/gap is that of the commuting observables.\n")
	return b.String()
}

// rounded is a mean, or 0 where it differs from it by rounding errors only.
func rounded(mean, variance float64) float64 {
	if math.Abs(mean) < 1e-12*math.Sqrt(variance) {
		return 0
	}
	return mean
}

// timeText prints a relaxation time, which an observable without variance lacks.
func timeText(x float64) string {
	if x == 0 {
		return "-"
	}
	return plain(x)
}
