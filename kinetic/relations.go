package kinetic

import (
	"fmt"
	"math"
	"slices"

	"sojourn/kinetic/internal/stabilizer"
	"sojourn/kinetic/pauli"
)

// Limits of GroundStates and of the reference state: terms and their factors
// that are listed, and words that elimination touches. Each stands for about a
// second.
const (
	maxRelationFactors = 1 << 23
	relationBudget     = 1 << 30
)

// Ground says how degenerate the levels of a Hamiltonian are.
type Ground struct {
	// Known is false if the lattice is too large to find out; Reason says so,
	// and the other fields but Classical mean nothing.
	Known  bool
	Reason string
	// Encoded is log_q of the number of states in which every term has a given
	// value, for values that can occur together: the number of encoded qubits
	// (q = 2). It is a whole number if q is prime.
	Encoded float64
	// Classical says that every term is diagonal, so that states are
	// configurations and not codewords.
	Classical bool
	// Satisfied says that all terms can have their lowest energy at once: there
	// are then q^Encoded ground states. Otherwise Encoded counts the states of
	// a level, and the number of ground states is not known.
	Satisfied bool
	// Reference says that the reference state is a ground state because every
	// term has its lowest energy there.
	Reference bool
}

// GroundStates counts the states that share the values of all terms that have
// a coupling: q to the number of sites less the rank of the terms (D.
// Gottesman, arXiv:quant-ph/9705052, section 3.2). It fails if it comes upon
// terms that do not commute, which it does not look for.
func GroundStates(s Spec) (Ground, error) {
	s = withoutZeroCouplings(s)
	g := Ground{Classical: true}
	for _, f := range s.Families {
		for _, factor := range f.Operator.Factors() {
			g.Classical = g.Classical && factor.X == 0
		}
	}
	lowest := true    // one level of every term is lower than its others
	reference := true // and it is 0
	for _, f := range s.Families {
		level, unique := lowestLevel(f, s.Levels)
		if f.Couplings != nil {
			level, unique = 0, !slices.Contains(f.Couplings, 0)
			if slices.Min(f.Couplings) < 0 {
				level = 1 // of some
			}
		}
		lowest = lowest && unique
		reference = reference && level == 0 && unique && f.Signs == nil
	}
	sites := float64(s.SiteCount())
	if reference {
		if rank, ok := translationRank(s); ok {
			g.Known, g.Satisfied, g.Reference = true, true, true
			g.Encoded = sites - float64(rank)
			return g, nil
		}
	}
	if n := s.factors(s.Families); n > maxRelationFactors {
		g.Reason = fmt.Sprintf("not determined: the terms have more than %d factors", maxRelationFactors)
		return g, nil
	}
	r := newRelations(s)
	for _, f := range s.Families {
		level, _ := lowestLevel(f, s.Levels)
		first := len(r.want)
		r.add(f.Operator, f.Cut, level)
		r.turn(f, first)
	}
	want := r.want
	if !lowest {
		want = nil
	}
	sol, ok := r.system.Solve(want, relationBudget)
	if !ok {
		g.Reason = "not determined: too many relations between the terms"
		return g, nil
	}
	if sol.Clash {
		return g, fmt.Errorf("terms do not commute")
	}
	g.Known = true
	// For composite q a rank is a sum of logarithms: whole but for rounding.
	if g.Encoded = sites - sol.Rank; math.Abs(g.Encoded-math.Round(g.Encoded)) < 1e-9 {
		g.Encoded = math.Round(g.Encoded)
	}
	g.Satisfied = lowest && sol.Consistent
	g.Reference = g.Satisfied && reference
	return g, nil
}

// ReferenceLevels returns the levels of the reference state by family with a
// coupling and by cell, or nil if every term is at level 0: see Generator.
func ReferenceLevels(s Spec) ([][]uint8, error) {
	families, _, err := referenceLevels(s)
	if families != nil {
		families = families[:len(withoutZeroCouplings(s).Families)]
	}
	return families, err
}

func withoutZeroCouplings(s Spec) Spec {
	all := s.Families
	s.Families = nil
	for _, f := range all {
		if f.Coupling != 0 || f.Couplings != nil {
			s.Families = append(s.Families, f)
		}
	}
	return s
}

// factors returns how many factors the terms of the families have in all.
func (s Spec) factors(families []FamilySpec) int {
	n := 0
	for _, f := range families {
		n += len(f.Operator.Factors()) * s.Lattice.Cells()
	}
	return n
}

// lowestLevel returns the level of lowest energy and whether it is the only one.
func lowestLevel(f FamilySpec, q int) (level uint8, unique bool) {
	shape := f.Shape
	if shape == nil {
		shape = []float64{1, -1}
	}
	unique = true
	for s := 1; s < q && s < len(shape); s++ {
		switch a, b := -f.Coupling*shape[s], -f.Coupling*shape[level]; {
		case a < b:
			level, unique = uint8(s), true
		case a == b:
			unique = false
		}
	}
	return level, unique
}

// relations collects the terms of a Spec as rows of a system.
type relations struct {
	spec   Spec
	system *stabilizer.System
	want   []uint8
	number []int // site -> number under which the system knows it
	buffer []SiteFactor
}

func newRelations(s Spec) *relations {
	return &relations{spec: s, system: stabilizer.New(s.Levels, s.Lattice.Cells()*s.Sites), number: eliminationNumbers(s)}
}

// add appends the instances of an operator that exist, each wanted at level.
func (r *relations) add(o pauli.Operator, cut Cut, level uint8) {
	for p := range r.spec.Positions(o) {
		var ok bool
		if r.buffer, ok = r.spec.AppendTerm(r.buffer[:0], o, cut, r.spec.PositionCell(o, p)); !ok {
			continue
		}
		for _, f := range r.buffer {
			r.system.Append(r.number[f.Site], f.X, f.Z)
		}
		r.system.EndRow()
		r.want = append(r.want, level)
	}
}

// turn makes the levels wanted of a family's rows, of which first is the first,
// those of lowest energy where couplings differ from term to term.
func (r *relations) turn(f FamilySpec, first int) {
	if f.Signs == nil && f.Couplings == nil {
		return
	}
	for cell := range r.spec.Lattice.Cells() {
		if _, ok := r.spec.Term(f.Operator, f.Cut, cell); !ok {
			continue
		}
		if f.Couplings != nil {
			r.want[first] = 0
			if f.Couplings[cell] < 0 {
				r.want[first] = 1
			}
		}
		if f.Signs != nil {
			r.want[first] ^= f.Signs[cell]
		}
		first++
	}
}

// eliminationNumbers numbers the sites layer by layer along the longest axis.
// A periodic axis is folded flat, from one layer alternately to both sides, so
// that neighbours around the wrap stay close.
func eliminationNumbers(s Spec) []int {
	l := s.Lattice
	long := 0
	for a, n := range l.Size {
		if n > l.Size[long] {
			long = a
		}
	}
	layer := l.Cells() / l.Size[long]
	stride := 1
	for a := range long {
		stride *= l.Size[a]
	}
	out := make([]int, l.Cells()*s.Sites)
	for cell := range l.Cells() {
		x := cell / stride % l.Size[long]
		if !l.Open[long] {
			if 2*x < l.Size[long] {
				x = 2 * x
			} else {
				x = 2*(l.Size[long]-1-x) + 1
			}
		}
		within := cell/(stride*l.Size[long])*stride + cell%stride
		for site := range s.Sites {
			out[cell*s.Sites+site] = (x*layer+within)*s.Sites + site
		}
	}
	return out
}
