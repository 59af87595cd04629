package kinetictest

import (
	"errors"
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

// RandomLevels returns a random commuting generator with q > 2 levels per site,
// always the same for the same seed: classical, of commuting pairs of X and Z
// families, or (for prime q) of families that mix X and Z; with energies of
// Potts or clock form or out of a table; every bath operator with its inverse.
// Lattices, cuts, couplings, laws and tracked operators are as in RandomSpec.
// Models that do not fit tables are passed over.
func RandomLevels(seed uint64, q int, size Size) kinetic.Spec {
	r := &random{rand.New(rand.NewPCG(seed, 0x5eed00+uint64(q)))}
	for {
		s := r.levels(q, size)
		sys, err := exact.NewSystem(s)
		if err != nil || len(sys.Moves) == 0 {
			continue
		}
		if n := sys.OrbitSize(); n.Cmp(big.NewInt(size.MinStates)) < 0 || n.Cmp(big.NewInt(size.MaxStates)) > 0 {
			continue
		}
		r.tabulateLevels(&s, sys)
		var terms *kinetic.TooManyTerms
		if g, err := kinetic.Compile(s); errors.As(err, &terms) || err == nil && g.Wide != nil {
			continue
		}
		return s
	}
}

func (r *random) levels(q int, size Size) kinetic.Spec {
	s := kinetic.Spec{Levels: q, Lattice: r.lattice(size.MaxCells), Sites: 1 + r.IntN(2)}
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
		f := &s.Families[i]
		f.Name = fmt.Sprint("family-", i)
		f.Coupling = r.coupling()
		f.Shape = r.shape(q)
		if !s.Lattice.Periodic() && r.IntN(3) == 0 {
			f.Cut = kinetic.Truncate
		}
	}
	if r.IntN(2) == 0 {
		r.track(&s)
	}
	r.recolour(&s)
	r.bathLevels(&s)
	return s
}

// recolour multiplies operators by random units, which keeps their commutation.
func (r *random) recolour(s *kinetic.Spec) {
	unit := func(o *pauli.Operator) {
		k := 1 + r.IntN(s.Levels-1)
		for _, part := range [2][]pauli.Polynomial{o.X, o.Z} {
			for i := range part {
				part[i] = part[i].Scale(k, s.Levels)
			}
		}
	}
	for i := range s.Families {
		unit(&s.Families[i].Operator)
	}
	for i := range s.Tracked {
		unit(&s.Tracked[i].Operator)
	}
}

// shape returns energies over levels, up to -J.
func (r *random) shape(q int) []float64 {
	switch r.IntN(3) {
	case 0:
		shape := make([]float64, q)
		shape[0] = 1
		return shape
	case 1:
		return kinetic.ClockShape(q)
	}
	shape := make([]float64, q)
	for l := range shape {
		shape[l] = []float64{1, 0, -1, 0.1, 0.3, 0.5}[r.IntN(6)]
	}
	return shape
}

// bathLevels adds one or two kinds of bath operators, in one or all powers, with
// their inverses.
func (r *random) bathLevels(s *kinetic.Spec) {
	which := []string{"X", "X", "X", "Y", "Z", "XZ"}[r.IntN(6)]
	law := r.law(s.Beta)
	for _, b := range Paulis(which, bath.Law{}) {
		if r.IntN(3) == 0 {
			law = r.law(s.Beta)
		}
		b.Law = law
		b.Law.Rate = []float64{1, 1, 0.5, 2.25}[r.IntN(4)]
		if s.Sites == 2 && r.IntN(6) == 0 {
			b.Sites = []int{r.IntN(2)}
		}
		powers := []int{1, s.Levels - 1}
		if r.IntN(2) == 0 {
			powers = nil
			for k := 1; k < s.Levels; k++ {
				powers = append(powers, k)
			}
		}
		for _, k := range powers {
			p := b
			p.Name = fmt.Sprintf("%s^%d", b.Name, k)
			p.X, p.Z = b.X*k, b.Z*k
			s.Bath = append(s.Bath, p)
		}
	}
}

// tabulateLevels is tabulate for bath operators that share a law with their
// inverses.
func (r *random) tabulateLevels(s *kinetic.Spec, sys *exact.System) {
	if r.IntN(6) > 0 {
		return
	}
	var energies []*big.Rat
	for b := range s.Bath {
		energies = append(energies, sys.Energies(b)...)
	}
	slices.SortFunc(energies, (*big.Rat).Cmp)
	energies = slices.CompactFunc(energies, func(a, b *big.Rat) bool { return a.Cmp(b) == 0 })
	law := bath.Law{Kind: bath.Table}
	for _, w := range energies {
		if x, _ := w.Float64(); w.Sign() >= 0 {
			law.Energies = append(law.Energies, x)
			law.Rates = append(law.Rates, 0.2+2*r.Float64())
		}
	}
	for b := range s.Bath {
		s.Bath[b].Law = law
	}
}

// RandomEdges returns a random commuting generator with two levels per site on a
// lattice with open edges, at some of which sites are absent, cut by a rule for
// each axis; always the same for the same seed.
func RandomEdges(seed uint64, size Size) kinetic.Spec {
	r := &random{rand.New(rand.NewPCG(seed, 0xed6e))}
	for {
		s := r.spec(size)
		axis := r.IntN(s.Lattice.Axes)
		s.Lattice.Open[axis] = true
		for i := range s.Families {
			rules := make([]kinetic.Cut, s.Lattice.Axes)
			for a := range rules {
				rules[a] = []kinetic.Cut{kinetic.Drop, kinetic.Truncate}[r.IntN(2)]
			}
			s.Families[i].Cut = kinetic.CutAlong(rules...)
		}
		for range 1 + r.IntN(2) {
			a := kinetic.Absence{Site: r.IntN(s.Sites), Axis: axis, Last: r.IntN(2) == 0}
			if !slices.Contains(s.Absent, a) {
				s.Absent = append(s.Absent, a)
			}
		}
		sys, err := exact.NewSystem(s)
		if err != nil || len(sys.Moves) == 0 || !lacksSites(s) {
			continue
		}
		if n := sys.OrbitSize(); n.Cmp(big.NewInt(size.MinStates)) < 0 || n.Cmp(big.NewInt(size.MaxStates)) > 0 {
			continue
		}
		r.tabulate(&s, sys)
		return s
	}
}

// lacksSites reports whether some site is absent and some is there.
func lacksSites(s kinetic.Spec) bool {
	n := s.SiteCount()
	return n > 0 && n < s.Lattice.Cells()*s.Sites
}

// PlanarCode returns the planar code in two dimensions with rough edges at both
// ends of the first axis (S. B. Bravyi, A. Yu. Kitaev, arXiv:quant-ph/9811052):
// the toric code's edges along y are absent at the first x and at the last y.
func PlanarCode(x, y int, beta float64, which string, law bath.Law) kinetic.Spec {
	l, err := lattice.New([]int{x, y}, []bool{true, true})
	if err != nil {
		panic("kinetictest: " + err.Error())
	}
	s := ToricCode(l, beta, which, law, "")
	s.Families[0].Cut = kinetic.CutAlong(kinetic.Drop, kinetic.Truncate)
	s.Families[1].Cut = kinetic.CutAlong(kinetic.Truncate, kinetic.Drop)
	s.Absent = []kinetic.Absence{{Site: 1, Axis: 0}, {Site: 1, Axis: 1, Last: true}}
	s.Tracked = []kinetic.TrackedSpec{
		{Name: "string-x", Operator: Operator(2, 2, nil, []string{"line x", "0"})},
		{Name: "dual-string-y", Operator: Operator(2, 2, []string{"line y", "0"}, nil)},
	}
	return s
}
