package kinetictest

import (
	"fmt"
	"math/big"
	"math/rand/v2"
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// Size bounds the states of a random generator.
type Size struct {
	MinStates, MaxStates int64
	MaxCells             int
}

// Enumerable is small enough to list every state.
var Enumerable = Size{MinStates: 4, MaxStates: 1 << 9, MaxCells: 10}

// Larger is beyond listing states but not beyond comparing tables.
var Larger = Size{MinStates: 1 << 12, MaxStates: 1 << 40, MaxCells: 60}

// RandomSpec returns a random commuting generator with two levels per site,
// always the same for the same seed: classical, of commuting pairs of X and Z
// families, or of families that mix X and Z; on 1 to 4 axes with lengths 1, 2
// and more, periodic or open, dropped or truncated; with random couplings among
// which sums coincide (0.1 + 0.2 and 0.3), laws, strengths and tracked
// operators.
func RandomSpec(seed uint64, size Size) kinetic.Spec {
	r := &random{rand.New(rand.NewPCG(seed, 0x5eed))}
	for {
		s := r.spec(size)
		sys, err := exact.NewSystem(s)
		if err != nil || len(sys.Moves) == 0 {
			continue
		}
		if n := sys.OrbitSize(); n.Cmp(big.NewInt(size.MinStates)) < 0 || n.Cmp(big.NewInt(size.MaxStates)) > 0 {
			continue
		}
		r.tabulate(&s, sys)
		return s
	}
}

type random struct{ *rand.Rand }

func (r *random) spec(size Size) kinetic.Spec {
	s := kinetic.Spec{Levels: 2, Lattice: r.lattice(size.MaxCells), Sites: 1 + r.IntN(2)}
	s.Beta = []float64{0, 0.2, 0.5, 0.5, 0.8, 1.1}[r.IntN(6)]
	switch r.IntN(4) {
	case 0, 1:
		r.classical(&s)
	case 2:
		r.pair(&s)
	default:
		r.mixed(&s)
	}
	for i := range s.Families {
		s.Families[i].Name = fmt.Sprint("family-", i)
		s.Families[i].Coupling = r.coupling()
		if !s.Lattice.Periodic() && r.IntN(3) == 0 {
			s.Families[i].Cut = kinetic.Truncate
		}
	}
	if r.IntN(2) == 0 {
		r.track(&s)
	}
	r.bath(&s)
	return s
}

func (r *random) lattice(maxCells int) lattice.Lattice {
	for {
		axes := 1 + r.IntN(4)
		size, open := make([]int, axes), make([]bool, axes)
		cells := 1
		for a := range size {
			size[a] = []int{1, 2, 2, 3, 3, 4, 5, 7}[r.IntN(8)]
			open[a] = r.IntN(4) == 0
			cells *= size[a]
		}
		if cells > maxCells {
			continue
		}
		l, err := lattice.New(size, open)
		if err != nil {
			panic("kinetictest: " + err.Error())
		}
		return l
	}
}

// polynomial returns a random polynomial of 0 to 3 monomials, with coefficients
// 1; some reach two cells far.
func (r *random) polynomial(axes, atLeast int) pauli.Polynomial {
	seen := map[lattice.Offset]bool{}
	var p pauli.Polynomial
	for range max(atLeast, r.IntN(4)) {
		var e lattice.Offset
		for a := range axes {
			e[a] = r.IntN(3) - 1
			if r.IntN(12) == 0 {
				e[a] *= 2
			}
			if r.IntN(2) == 0 {
				e[a] = 0
			}
		}
		if !seen[e] {
			seen[e] = true
			p = append(p, pauli.Monomial{Exp: e, Coeff: 1})
		}
	}
	return canonical(p)
}

func canonical(p pauli.Polynomial) pauli.Polynomial {
	slices.SortFunc(p, func(a, b pauli.Monomial) int {
		if a.Exp.Less(b.Exp) {
			return -1
		}
		return 1
	})
	return p
}

func conjugate(p pauli.Polynomial) pauli.Polynomial {
	var q pauli.Polynomial
	for _, m := range p {
		q = append(q, pauli.Monomial{Exp: m.Exp.Neg(), Coeff: m.Coeff})
	}
	return canonical(q)
}

// multiply returns a b over Z_q.
func multiply(a, b pauli.Polynomial, q int) pauli.Polynomial {
	count := map[lattice.Offset]int{}
	for _, m := range a {
		for _, n := range b {
			count[m.Exp.Add(n.Exp)] += m.Coeff * n.Coeff
		}
	}
	var p pauli.Polynomial
	for e, n := range count {
		if n %= q; n != 0 {
			p = append(p, pauli.Monomial{Exp: e, Coeff: n})
		}
	}
	return canonical(p)
}

// classical adds families of Z alone.
func (r *random) classical(s *kinetic.Spec) {
	for range 1 + r.IntN(3) {
		z := make([]pauli.Polynomial, s.Sites)
		for i := range z {
			z[i] = r.polynomial(s.Lattice.Axes, 0)
		}
		if r.IntN(3) == 0 { // a field
			z = make([]pauli.Polynomial, s.Sites)
			z[r.IntN(s.Sites)] = pauli.Polynomial{{Coeff: 1}}
		}
		s.Families = append(s.Families, kinetic.FamilySpec{Operator: pauli.Operator{Z: z}})
	}
}

// pair adds X: (f, g) and Z: (-conj g, conj f), whose commutator is g f - f g.
func (r *random) pair(s *kinetic.Spec) {
	s.Sites = 2
	f, g := r.polynomial(s.Lattice.Axes, 1), r.polynomial(s.Lattice.Axes, 1)
	s.Families = append(s.Families,
		kinetic.FamilySpec{Operator: pauli.Operator{X: []pauli.Polynomial{f, g}}},
		kinetic.FamilySpec{Operator: pauli.Operator{Z: []pauli.Polynomial{conjugate(g).Scale(-1, s.Levels), conjugate(f)}}})
}

// mixed adds families X: p, Z: p s with one symmetric s = conj s, which all
// commute, or the three XX, YY, ZZ on two sites, whose product is -1.
func (r *random) mixed(s *kinetic.Spec) {
	if r.IntN(4) == 0 {
		s.Sites = 2
		one := []pauli.Polynomial{{{Coeff: 1}}, {{Coeff: 1}}}
		s.Families = append(s.Families,
			kinetic.FamilySpec{Operator: pauli.Operator{X: one}},
			kinetic.FamilySpec{Operator: pauli.Operator{Z: one}},
			kinetic.FamilySpec{Operator: pauli.Operator{X: one, Z: one}})
		return
	}
	s.Sites = 1
	half := r.polynomial(s.Lattice.Axes, 0)
	var symmetric pauli.Polynomial
	seen := map[lattice.Offset]bool{}
	for _, m := range append(half, conjugate(half)...) {
		if !seen[m.Exp] {
			seen[m.Exp] = true
			symmetric = append(symmetric, m)
		}
	}
	canonical(symmetric)
	for range 1 + r.IntN(2) {
		p := r.polynomial(s.Lattice.Axes, 1)
		s.Families = append(s.Families, kinetic.FamilySpec{Operator: pauli.Operator{
			X: []pauli.Polynomial{p}, Z: []pauli.Polynomial{multiply(p, symmetric, s.Levels)},
		}})
	}
}

func (r *random) coupling() float64 {
	return []float64{1, 1, -1, 0.1, 0.2, 0.3, 0.3, -0.3, 0.7, 1.3, -0.25, 0}[r.IntN(12)]
}

// track adds tracked operators that commute with the families: single Z (the
// order parameter) if everything is classical, products of Z or X, lines.
func (r *random) track(s *kinetic.Spec) {
	try := func(t kinetic.TrackedSpec) {
		with := *s
		with.Bath = nil
		with.Tracked = append(slices.Clip(s.Tracked), t)
		if _, err := exact.NewSystem(with); err == nil {
			t.Name = fmt.Sprint("tracked-", len(s.Tracked))
			s.Tracked = append(s.Tracked, t)
		}
	}
	one := func() []pauli.Polynomial {
		p := make([]pauli.Polynomial, s.Sites)
		p[r.IntN(s.Sites)] = pauli.Polynomial{{Coeff: 1}}
		return p
	}
	if r.IntN(2) == 0 {
		try(kinetic.TrackedSpec{Order: true, Operator: pauli.Operator{Z: one()}})
	}
	if r.IntN(2) == 0 {
		z := one()
		z[0] = r.polynomial(s.Lattice.Axes, 1)
		try(kinetic.TrackedSpec{Operator: pauli.Operator{Z: z}})
	}
	for range 3 {
		o := pauli.Operator{Z: one()}
		if r.IntN(2) == 0 {
			o = pauli.Operator{X: one()}
		}
		for a := range s.Lattice.Axes {
			o.Extent[a] = r.IntN(2) == 0
		}
		if r.IntN(3) == 0 {
			// A wider cross-section.
			for _, p := range append(o.X, o.Z...) {
				if p != nil {
					p[0].Exp[r.IntN(s.Lattice.Axes)] = 1
				}
			}
		}
		if o.Extended() {
			try(kinetic.TrackedSpec{Operator: o})
		}
	}
}

// bath adds one to three bath operators with laws and strengths of their own.
func (r *random) bath(s *kinetic.Spec) {
	which := []string{"X", "X", "X", "Y", "Z", "XY", "XZ", "XYZ", "XYZ"}[r.IntN(9)]
	s.Bath = Paulis(which, bath.Law{})
	law := r.law(s.Beta)
	for i := range s.Bath {
		if r.IntN(3) == 0 {
			law = r.law(s.Beta)
		}
		s.Bath[i].Law = law
		s.Bath[i].Law.Rate = []float64{1, 1, 0.5, 2.25}[r.IntN(4)]
		if s.Sites == 2 && r.IntN(6) == 0 {
			s.Bath[i].Sites = []int{r.IntN(2)}
		}
	}
}

func (r *random) law(beta float64) bath.Law {
	n := r.IntN(6)
	if beta == 0 && n >= 3 {
		n = 0 // power laws diverge there
	}
	switch n {
	case 1:
		return bath.Law{Kind: bath.Metropolis}
	case 2:
		return bath.Law{Kind: bath.Symmetric}
	case 3:
		return bath.Law{Kind: bath.Power, Exponent: 1}
	case 4:
		return bath.Law{Kind: bath.Power, Exponent: 1, Cutoff: 2.5}
	case 5:
		return bath.Law{Kind: bath.Power, Exponent: 3}
	}
	return bath.Law{Kind: bath.HeatBath}
}

// tabulate replaces some laws by a table of random rates, a few of them 0, at
// the energies that occur.
func (r *random) tabulate(s *kinetic.Spec, sys *exact.System) {
	for b := range s.Bath {
		if r.IntN(6) > 0 {
			continue
		}
		law := bath.Law{Kind: bath.Table}
		for _, w := range sys.Energies(b) {
			if w.Sign() < 0 {
				continue
			}
			x, _ := w.Float64()
			g := 0.2 + 2*r.Float64()
			if len(law.Rates) > 0 && r.IntN(8) == 0 {
				g = 0
			}
			law.Energies = append(law.Energies, x)
			law.Rates = append(law.Rates, g)
		}
		if len(law.Rates) > 0 {
			s.Bath[b].Law = law
		}
	}
}
