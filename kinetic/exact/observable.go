package exact

import (
	"fmt"
	"math"

	"sojourn/kinetic/lattice"
)

// Observable is a function of the state, or several whose products are summed
// and divided by Norm, as recorded observables are (observables.Observable).
type Observable struct {
	Name       string
	Components []Component
	Norm       float64
}

// Component is a sum over instances.
type Component []Part

// Part is what one instance adds, by its level.
type Part struct {
	Instance int
	Value    []float64
}

// eigenvalues returns the real part of w^s times a factor: for q = 2 factor
// and -factor.
func (s *System) eigenvalues(factor float64) []float64 {
	v := make([]float64, s.Spec.Levels)
	for l := range v {
		v[l] = factor * math.Cos(2*math.Pi*float64(l)/float64(len(v)))
	}
	if len(v) == 2 {
		v[0], v[1] = factor, -factor
	}
	return v
}

// family returns the kind of a family (as counted by kinetic.Generator).
func (s *System) family(f int) (Kind, error) {
	for _, k := range s.Kinds {
		if !k.Line && k.Index == f {
			return k, nil
		}
	}
	return Kind{}, fmt.Errorf("no family %d", f)
}

// Energy returns the total energy.
func (s *System) Energy() Observable {
	var c Component
	for _, k := range s.Kinds {
		if k.Energy == nil {
			continue
		}
		for i := k.First; i < k.First+k.Count; i++ {
			c = append(c, Part{i, k.Energy})
		}
	}
	return Observable{Name: "energy", Components: []Component{c}, Norm: 1}
}

// Magnetization returns the sum of the spins: the tracked operators marked as
// order parameter. It fails if there are none.
func (s *System) Magnetization() (Observable, error) {
	var families []int
	for _, k := range s.Kinds {
		if k.Order && !k.Line {
			families = append(families, k.Index)
		}
	}
	if families == nil {
		return Observable{}, fmt.Errorf("no tracked operator is marked as the order parameter")
	}
	o, err := s.Terms(families...)
	o.Name = "magnetization"
	return o, err
}

// Terms returns the sum of the eigenvalues of families.
func (s *System) Terms(families ...int) (Observable, error) {
	o := Observable{Name: "terms", Components: make([]Component, 1), Norm: 1}
	for _, f := range families {
		k, err := s.family(f)
		if err != nil {
			return o, err
		}
		for i := k.First; i < k.First+k.Count; i++ {
			o.Components[0] = append(o.Components[0], Part{i, s.eigenvalues(1)})
		}
	}
	return o, nil
}

// Local returns the single terms of families, averaged over the lattice.
func (s *System) Local(families ...int) (Observable, error) {
	o := Observable{Name: "local"}
	for _, f := range families {
		k, err := s.family(f)
		if err != nil {
			return o, err
		}
		o.each(s, k)
	}
	if o.Norm == 0 {
		return o, fmt.Errorf("the families have no terms on this lattice")
	}
	return o, nil
}

// Line returns a tracked operator with an extent, averaged over its transverse
// positions.
func (s *System) Line(line int) (Observable, error) {
	o := Observable{Name: "operator"}
	for _, k := range s.Kinds {
		if k.Line && k.Index == line {
			o.each(s, k)
			if o.Norm == 0 {
				return o, fmt.Errorf("%s does not exist on this lattice", k.Name)
			}
			return o, nil
		}
	}
	return o, fmt.Errorf("no line %d", line)
}

// each adds the instances of a kind as components.
func (o *Observable) each(s *System, k Kind) {
	for i := k.First; i < k.First+k.Count; i++ {
		o.Components = append(o.Components, Component{{i, s.eigenvalues(1)}})
	}
	o.Norm += float64(k.Count)
}

// Fourier returns the Fourier amplitude sum_r exp(i k r) s_r of families at the
// wavevector k = 2 pi n/L along each axis: its real and its imaginary part.
func (s *System) Fourier(n lattice.Offset, families ...int) (Observable, error) {
	o := Observable{Name: "fourier", Components: make([]Component, 2), Norm: 1}
	for _, f := range families {
		kind, err := s.family(f)
		if err != nil {
			return o, err
		}
		for i := kind.First; i < kind.First+kind.Count; i++ {
			phase := 0.0
			for a, x := range s.cell(i) {
				l := s.Spec.Lattice.Size[a]
				phase += 2 * math.Pi * float64(mod(n[a]*x, l)) / float64(l)
			}
			sin, cos := math.Sincos(phase)
			o.Components[0] = append(o.Components[0], Part{i, s.eigenvalues(cos)})
			o.Components[1] = append(o.Components[1], Part{i, s.eigenvalues(sin)})
		}
	}
	return o, nil
}

// Value returns a component's value in the state with the given levels.
func (c Component) Value(levels []uint8) float64 {
	sum := 0.0
	for _, p := range c {
		sum += p.Value[levels[p.Instance]]
	}
	return sum
}

// Values fills dst, which has Len entries, with a component's values on all
// states.
func (st *States) Values(c Component, dst []float64) {
	if len(dst) != st.Len() {
		panic("exact: vector of the wrong length")
	}
	for i := range dst {
		w := st.state(i)
		sum := 0.0
		for _, p := range c {
			sum += p.Value[st.code.get(w, p.Instance)]
		}
		dst[i] = sum
	}
}
