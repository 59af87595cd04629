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

// values returns what an instance is worth by its level s: for two levels the
// eigenvalue (-1)^s, for more the energy over -J if it has one, else the
// eigenvalue exp(2 pi i s/q), whose imaginary part is nil where it vanishes.
func (s *System) values(k Kind) (re, im []float64) {
	q := s.Spec.Levels
	switch {
	case q == 2:
		return []float64{1, -1}, nil
	case k.Energy != nil:
		return k.shape, nil
	}
	for l := range q {
		sin, cos := math.Sincos(2 * math.Pi * float64(l) / float64(q))
		re, im = append(re, cos), append(im, sin)
	}
	return re, im
}

// combine returns a x + b y.
func combine(a float64, x []float64, b float64, y []float64) []float64 {
	out := make([]float64, len(x))
	for i := range x {
		out[i] = a * x[i]
		if y != nil {
			out[i] += b * y[i]
		}
	}
	return out
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
			c = append(c, Part{i, s.Instances[i].Energy})
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

// Terms returns the sum of the values of families: (-1)^s for two levels, else
// -E/J of terms with energy and exp(2 pi i s/q) of tracked operators. If there
// are complex ones, real and imaginary part are two components.
func (s *System) Terms(families ...int) (Observable, error) {
	o := Observable{Name: "terms", Components: make([]Component, 1), Norm: 1}
	for _, f := range families {
		k, err := s.family(f)
		if err != nil {
			return o, err
		}
		re, im := s.values(k)
		if im != nil && len(o.Components) == 1 {
			o.Components = append(o.Components, nil)
		}
		for i := k.First; i < k.First+k.Count; i++ {
			o.Components[0] = append(o.Components[0], Part{i, re})
			if im != nil {
				o.Components[1] = append(o.Components[1], Part{i, im})
			}
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

// each adds the instances of a kind as components, two for each if they are
// complex.
func (o *Observable) each(s *System, k Kind) {
	re, im := s.values(k)
	for i := k.First; i < k.First+k.Count; i++ {
		o.Components = append(o.Components, Component{{i, re}})
		if im != nil {
			o.Components = append(o.Components, Component{{i, im}})
		}
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
			re, im := s.values(kind)
			o.Components[0] = append(o.Components[0], Part{i, combine(cos, re, -sin, im)})
			o.Components[1] = append(o.Components[1], Part{i, combine(sin, re, cos, im)})
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
