package observables

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// Request asks for an observable by name.
type Request struct {
	Name       string // the label of its rows
	Kind       Kind
	Family     string // Terms, Local, Fourier: a family, a group of families, or a local tracked operator
	Tracked    string // Operator: a tracked operator with an extent
	Wavevector lattice.Offset
}

// Bind resolves requests against a compiled generator, in their order. A family
// is named by its own name, or by its group to mean all families of the group;
// the magnetization is the tracked operator that is marked as the order. The
// error joins every request that cannot be met and says what exists.
func Bind(g *kinetic.Generator, requests []Request) ([]Observable, error) {
	var faults []error
	seen := make(map[string]bool)
	out := make([]Observable, 0, len(requests))
	for _, r := range requests {
		o, err := bind(g, r)
		switch {
		case err != nil:
			faults = append(faults, fmt.Errorf("observable %q: %w", r.Name, err))
		case r.Name == "":
			faults = append(faults, fmt.Errorf("an observable of kind %s has no name", r.Kind))
		case seen[r.Name]:
			faults = append(faults, fmt.Errorf("two observables are named %q", r.Name))
		}
		seen[r.Name] = true
		out = append(out, o)
	}
	if len(faults) > 0 {
		return nil, errors.Join(faults...)
	}
	return out, nil
}

func bind(g *kinetic.Generator, r Request) (Observable, error) {
	o := Observable{Name: r.Name, Kind: r.Kind}
	var err error
	switch r.Kind {
	case Energy:
	case Magnetization:
		for f := range g.Families {
			if g.Families[f].Order && g.Families[f].Terms > 0 {
				o.Families = append(o.Families, f)
			}
		}
		if o.Families == nil {
			err = fmt.Errorf("this Hamiltonian has no magnetization; it has %s", inventory(g))
		}
	case Terms:
		o.Families, err = FamiliesOf(g, r.Family)
	case Local:
		o.Families, err = FamiliesOf(g, r.Family)
		if err == nil {
			err = equivalent(g, r.Family, o.Families)
		}
		if err == nil && disordered(g, o.Families) {
			err = fmt.Errorf("the couplings of family %q differ from term to term, and so do the means of its terms; use kind terms", r.Family)
		}
		if err == nil && !g.Lattice.Periodic() && len(sublattice(g, o.Families, MaxLocal)) == 0 {
			err = fmt.Errorf("family %q has no term in the middle of the lattice, where single terms are read if there are edges", r.Family)
		}
	case Fourier:
		o.Families, err = FamiliesOf(g, r.Family)
		o.Wavevector = r.Wavevector
		for a := g.Lattice.Axes; a < lattice.MaxAxes; a++ {
			if r.Wavevector[a] != 0 && err == nil {
				err = fmt.Errorf("the wavevector has a component along axis %d; the lattice has %d axes", a, g.Lattice.Axes)
			}
		}
	case Operator:
		o.Line, err = lineOf(g, r.Tracked)
	default:
		err = fmt.Errorf("unknown kind %q; there are energy, magnetization, terms, local, fourier, operator", r.Kind)
	}
	if err == nil {
		err = o.findComplex(g)
	}
	return o, err
}

// findComplex notes whether the observable is made of tracked operators of more
// than two levels, and refuses those that cannot be recorded.
func (o *Observable) findComplex(g *kinetic.Generator) error {
	if g.Levels == 2 {
		return nil
	}
	if o.Kind == Operator {
		o.Complex = true
		return complexMean(g, g.Lines[o.Line].Name)
	}
	for _, f := range o.Families {
		if g.Families[f].Energy == nil {
			o.Complex = true
			if err := complexMean(g, g.Families[f].Name); err != nil {
				return err
			}
		}
	}
	return nil
}

// FamiliesOf returns the families (indices into g.Families) that a name stands
// for: the family of that name, else all of the group of that name.
func FamiliesOf(g *kinetic.Generator, name string) ([]int, error) {
	var out []int
	for f := range g.Families {
		if g.Families[f].Name == name {
			out = []int{f}
			break
		}
		if name != "" && g.Families[f].Group == name {
			out = append(out, f)
		}
	}
	if out == nil {
		for _, l := range g.Lines {
			if l.Name == name {
				return nil, fmt.Errorf("%q runs across the lattice: its kind is operator, with tracked = %q", name, name)
			}
		}
		return nil, fmt.Errorf("no family is named %q; there are %s", name, inventory(g))
	}
	present := out[:0]
	for _, f := range out {
		if g.Families[f].Terms > 0 {
			present = append(present, f)
		}
	}
	if len(present) == 0 {
		return nil, fmt.Errorf("family %q has no term on this lattice", name)
	}
	return present, nil
}

func lineOf(g *kinetic.Generator, name string) (int, error) {
	for l := range g.Lines {
		if g.Lines[l].Name != name {
			continue
		}
		if positions(g.Lines[l]) == 0 {
			return 0, fmt.Errorf("tracked operator %q has no position on this lattice", name)
		}
		return l, nil
	}
	for f := range g.Families {
		if g.Families[f].Name == name {
			return 0, fmt.Errorf("%q is one term per cell: its kind is terms, local or fourier, with family = %q", name, name)
		}
	}
	return 0, fmt.Errorf("no tracked operator is named %q; there are %s", name, inventory(g))
}

// equivalent refuses the single terms of a group whose families cannot be
// images of each other under a symmetry of the lattice: their means would
// differ, and the mean over the lattice of single-term covariances could not be
// had from the mean of the terms.
func equivalent(g *kinetic.Generator, name string, families []int) error {
	if len(families) < 2 {
		return nil
	}
	ok := true
	for a := 1; a < g.Lattice.Axes; a++ {
		ok = ok && g.Lattice.Size[a] == g.Lattice.Size[0] && g.Lattice.Open[a] == g.Lattice.Open[0]
	}
	var names []string
	for _, f := range families {
		names = append(names, g.Families[f].Name)
		for s, e := range g.Families[f].Energy {
			ok = ok && len(g.Families[families[0]].Energy) > s && g.Families[families[0]].Energy[s] == e
		}
		ok = ok && slices.Equal(valuesOf(g, f), valuesOf(g, families[0]))
	}
	if ok {
		return nil
	}
	return fmt.Errorf("the families of group %q may have different means on this lattice; ask for one of them: %s",
		name, strings.Join(names, ", "))
}

// disordered reports whether the energies of a family differ from term to term.
func disordered(g *kinetic.Generator, families []int) bool {
	for _, f := range families {
		if f >= len(g.Spec.Families) {
			continue // tracked
		}
		if s := &g.Spec.Families[f]; s.Signs != nil || s.Couplings != nil {
			return true
		}
	}
	return false
}

// inventory lists what can be observed, in words.
func inventory(g *kinetic.Generator) string {
	var families, local, groups, lines []string
	listed := make(map[string]bool)
	for _, f := range g.Families {
		if f.Energy == nil {
			local = append(local, f.Name)
		} else {
			families = append(families, f.Name)
		}
		if f.Group != "" && f.Group != f.Name && !listed[f.Group] {
			listed[f.Group] = true
			groups = append(groups, f.Group)
		}
	}
	for _, l := range g.Lines {
		lines = append(lines, l.Name)
	}
	var parts []string
	for _, p := range []struct {
		what  string
		names []string
	}{
		{"families ", families}, {"groups ", groups},
		{"local tracked operators ", local}, {"tracked operators across the lattice ", lines},
	} {
		if len(p.names) > 0 {
			parts = append(parts, p.what+strings.Join(p.names, ", "))
		}
	}
	if len(parts) == 0 {
		return "nothing to observe"
	}
	return strings.Join(parts, "; ")
}
