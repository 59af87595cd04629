package models

import (
	"fmt"

	"sojourn/kinetic/lattice"
)

// All returns the built-in Hamiltonians in the order in which they are listed.
func All() []Model {
	list := []Model{ising, squarePlaquette, trianglePlaquette, isingGauge, toricCode, colourCode, xCube, cubicCode, cluster}
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
	for _, q := range m.Parameters {
		if _, given := p[q.Name]; given && q.Axes > l.Axes {
			return Hamiltonian{}, fmt.Errorf("%s means nothing on a lattice of %d axes; it needs %d", q.Name, l.Axes, q.Axes)
		}
	}
	return m.Build(l, m.Resolve(p))
}

// Names lists the families and tracked operators of the model on a periodic
// lattice of n axes.
func (m Model) Names(n int) (families, tracked []string) {
	l, err := lattice.New([]int{3, 3, 3, 3}[:n], nil)
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
