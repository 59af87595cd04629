package models

import (
	"fmt"
	"math"

	"sojourn/kinetic/lattice"
)

// All returns the built-in Hamiltonians in the order in which they are listed.
func All() []Model {
	list := []Model{ising, potts, clock, squarePlaquette, trianglePlaquette, isingGauge, toricCode, planarCode, colourCode, xCube, cubicCode, cluster}
	for i := range list {
		list[i].Build = list[i].checked
	}
	return list
}

// Find returns the model of the given name.
func Find(name string) (Model, bool) {
	for _, m := range All() {
		if m.Name == name {
			return m, true
		}
	}
	return Model{}, false
}

// checked is Build with parameters filled in and the lattice looked at.
func (m Model) checked(l lattice.Lattice, p Values) (Hamiltonian, error) {
	if l.Axes < m.MinAxes || l.Axes > m.MaxAxes {
		want := fmt.Sprintf("%d to %d axes", m.MinAxes, m.MaxAxes)
		if m.MinAxes == m.MaxAxes {
			want = fmt.Sprintf("%d axes", m.MinAxes)
		}
		return Hamiltonian{}, fmt.Errorf("the %s model needs a lattice of %s, not %d", m.Name, want, l.Axes)
	}
	for a := range l.Axes {
		if m.Open && !l.Open[a] {
			return Hamiltonian{}, fmt.Errorf("the %s model has edges: every axis must be open", m.Name)
		}
	}
	for _, q := range m.Parameters {
		x, given := p[q.Name]
		if given && q.Axes > l.Axes {
			return Hamiltonian{}, fmt.Errorf("%s means nothing on a lattice of %d axes; it needs %d", q.Name, l.Axes, q.Axes)
		}
		if given && q.Whole && (x != math.Trunc(x) || x < float64(q.Min) || x > float64(q.Max)) {
			return Hamiltonian{}, fmt.Errorf("%s is %v; it must be a whole number from %d to %d", q.Name, x, q.Min, q.Max)
		}
	}
	return m.Build(l, m.Resolve(p))
}

// Names lists the families and tracked operators of the model on a lattice of n
// axes, periodic unless the model is open.
func (m Model) Names(n int) (families, tracked []string) {
	open := make([]bool, n)
	for a := range open {
		open[a] = m.Open
	}
	l, err := lattice.New([]int{3, 3, 3, 3}[:n], open)
	if err != nil {
		panic(fmt.Sprintf("models: %v", err))
	}
	h, err := m.Build(l, nil)
	if err != nil {
		panic(fmt.Sprintf("models: %v", err))
	}
	for _, f := range h.Families {
		families = append(families, f.Name)
	}
	for _, t := range h.Tracked {
		tracked = append(tracked, t.Name)
	}
	return families, tracked
}
