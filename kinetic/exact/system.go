package exact

import (
	"fmt"
	"math/big"
	"reflect"
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// System is a thermal generator on a lattice, operator by operator: what exists
// and what each jump does. It is immutable and may be shared by goroutines.
type System struct {
	Spec      kinetic.Spec
	Kinds     []Kind     // energy families, local tracked operators, lines
	Instances []Instance // of all kinds, one after another
	Moves     []Move
	// Reference holds the levels of the reference state, by instance.
	Reference []uint8

	at [][]incidence // by site of the lattice: instances with a factor there
}

type incidence struct {
	instance int
	x, z     int
}

// Move is one bath operator on one site. Operators that change no level are
// left out: nothing can be seen of them.
type Move struct {
	Bath    int      // index into Spec.Bath
	Site    int      // cell*Sites + site of the cell
	Changes []Change // energy terms first, each part in increasing order of instance
	Energy  int      // how many of Changes are energy terms

	rates *rateTable
}

// Change adds Add, mod q, to the level of an instance.
type Change struct {
	Instance int
	Add      uint8
}

// CommutationError names two operators of which at least one is a term of the
// Hamiltonian and which do not commute on this lattice.
type CommutationError struct {
	A, B         string         // families or tracked operators
	CellA, CellB lattice.Offset // where they stand
}

func (e *CommutationError) Error() string {
	return fmt.Sprintf("%s at cell %v and %s at cell %v do not commute", e.A, e.CellA, e.B, e.CellB)
}

// NewSystem lists the terms and tracked operators that spec has on its lattice,
// folded along periodic axes and dropped or truncated at open edges, verifies
// that every term commutes with every other operator (*CommutationError if
// not), and finds by commutation what each bath operator changes. The rates of
// all jumps are computed here, from exact energy differences: an energy that a
// table law lacks is an error.
func NewSystem(spec kinetic.Spec) (*System, error) {
	if spec.Levels < 2 || spec.Levels > 64 {
		return nil, fmt.Errorf("%d levels per site; 2 to 64 are possible", spec.Levels)
	}
	s := &System{Spec: spec}
	if err := s.enumerate(); err != nil {
		return nil, err
	}
	s.at = make([][]incidence, s.Sites())
	for i, t := range s.Instances {
		for _, f := range t.Factors {
			s.at[f.Site] = append(s.at[f.Site], incidence{i, f.X, f.Z})
		}
	}
	if err := s.checkCommutation(); err != nil {
		return nil, err
	}
	if err := s.findReference(); err != nil {
		return nil, err
	}
	if err := s.findMoves(); err != nil {
		return nil, err
	}
	return s, nil
}

// Sites returns the number of sites of the lattice.
func (s *System) Sites() int { return s.Spec.Lattice.Cells() * s.Spec.Sites }

// Levels returns q.
func (s *System) Levels() int { return s.Spec.Levels }

// checkCommutation compares every instance with those that share a site.
func (s *System) checkCommutation() error {
	q := s.Spec.Levels
	phase := make([]int, len(s.Instances))
	for i, t := range s.Instances {
		if s.Kinds[t.Kind].Energy == nil {
			continue
		}
		clear(phase)
		for _, f := range t.Factors {
			for _, o := range s.at[f.Site] {
				phase[o.instance] += f.Z*o.x - f.X*o.z
			}
		}
		for j, p := range phase {
			if mod(p, q) != 0 {
				return &CommutationError{
					A: s.Kinds[t.Kind].Name, CellA: s.cell(i),
					B: s.Kinds[s.Instances[j].Kind].Name, CellB: s.cell(j),
				}
			}
		}
	}
	return nil
}

// cell returns where an instance stands; coordinates along an extent are 0.
func (s *System) cell(i int) lattice.Offset {
	t := s.Instances[i]
	k := s.Kinds[t.Kind]
	return transverse(s.Spec.Lattice, k.extent)[t.Position]
}

// effect returns how the operator X^x Z^z on a site changes levels: if
// T A = w^c A T, A takes the eigenvalue w^s of T to w^(s+c), and
// c = t_z x - z t_x from Z X = w X Z.
func (s *System) effect(site, x, z int) []Change {
	var terms, tracked []Change
	for _, o := range s.at[site] {
		c := mod(o.z*x-z*o.x, s.Spec.Levels)
		if c == 0 {
			continue
		}
		change := Change{Instance: o.instance, Add: uint8(c)}
		if s.Kinds[s.Instances[o.instance].Kind].Energy != nil {
			terms = append(terms, change)
		} else {
			tracked = append(tracked, change)
		}
	}
	return append(terms, tracked...)
}

// checkInverses verifies that every bath operator comes with its inverse, which
// detailed balance needs for q > 2.
func (s *System) checkInverses() error {
	q := s.Spec.Levels
	for _, a := range s.Spec.Bath {
		for site := range s.Spec.Sites {
			found := a.Sites != nil && !slices.Contains(a.Sites, site)
			for _, b := range s.Spec.Bath {
				found = found || mod(a.X+b.X, q) == 0 && mod(a.Z+b.Z, q) == 0 &&
					(b.Sites == nil || slices.Contains(b.Sites, site)) && reflect.DeepEqual(a.Law, b.Law)
			}
			if !found {
				return fmt.Errorf("the bath lacks the inverse of %s on site %d of the cell, at the same law", a.Name, site)
			}
		}
	}
	return nil
}

// findMoves lists the moves by cell, site of the cell and bath operator.
func (s *System) findMoves() error {
	if err := s.checkInverses(); err != nil {
		return err
	}
	tables := map[string]*rateTable{}
	for site := range s.Sites() {
		for b, op := range s.Spec.Bath {
			if op.Sites != nil && !slices.Contains(op.Sites, site%s.Spec.Sites) {
				continue
			}
			m := Move{Bath: b, Site: site, Changes: s.effect(site, op.X, op.Z)}
			if len(m.Changes) == 0 {
				continue
			}
			for m.Energy < len(m.Changes) && s.energy(m.Changes[m.Energy].Instance) != nil {
				m.Energy++
			}
			key := s.rateKey(m)
			t, ok := tables[key]
			if !ok {
				var err error
				if t, err = s.newRateTable(m); err != nil {
					return err
				}
				tables[key] = t
			}
			m.rates = t
			s.Moves = append(s.Moves, m)
		}
	}
	return nil
}

// energy returns the energies of an instance by level, nil for a tracked one.
func (s *System) energy(instance int) []*big.Rat { return s.Instances[instance].exact }

// Apply adds the changes of move m to levels, in place.
func (s *System) Apply(m int, levels []uint8) {
	q := uint8(s.Spec.Levels)
	for _, c := range s.Moves[m].Changes {
		levels[c.Instance] = (levels[c.Instance] + c.Add) % q
	}
}

// EnergyOf returns the energy of a state given by its levels.
func (s *System) EnergyOf(levels []uint8) float64 {
	e := 0.0
	for i, l := range levels {
		if t := &s.Instances[i]; t.Energy != nil {
			e += t.Energy[l]
		}
	}
	return e
}
