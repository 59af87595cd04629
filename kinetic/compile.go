package kinetic

import (
	"errors"
	"fmt"
	"math/bits"
	"sort"

	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
)

// MaxBits is the widest pattern, in bits, that the tables hold, MaxSlots the most
// terms that any pattern shows.
const (
	MaxBits  = 16
	MaxSlots = 16
)

// TooManyRates says that a generator has more distinct rates than there are
// classes.
type TooManyRates struct{ Rates int }

func (e *TooManyRates) Error() string {
	return fmt.Sprintf("the jumps have %d distinct rates; at most 255 are supported: fewer levels, couplings or bath operators make fewer", e.Rates)
}

// TooManyTerms says that a site touches more terms than a pattern holds.
type TooManyTerms struct {
	Site, Terms int
}

func (e *TooManyTerms) Error() string {
	return fmt.Sprintf("the bath operators on site %d of the cell change %d terms and tracked operators; at most %d are supported",
		e.Site, e.Terms, MaxSlots)
}

type compiler struct {
	spec     Spec
	g        *Generator
	families []family
	lines    []line
	atlas    atlas
	seen     map[seatAt]*neighbourhood
	energies *energies
	shapes   map[string]int
	tables   map[string]uint32
	hits     map[hitKey]int // in hitList
	hitList  []Hit

	family, from, to []int // scratch of compileMove

	wide       bool                // without tables by pattern
	wideEnergy [][]int64           // by family and level
	wideMet    []map[int64]float64 // by bath operator: rates at the energies met
}

// Compile turns a Spec into tables. Families without coupling are dropped. It
// fails if two terms, or a term and a tracked operator, do not commute as
// folded and cut (*NotCommuting), if the bath breaks detailed balance, or if
// the tables cannot hold the model (*TooManyTerms, *TooManyRates). With more than
// two levels models beyond the tables are computed (Generator.Wide).
func Compile(spec Spec) (*Generator, error) {
	g, err := compile(spec, false)
	var rates *TooManyRates
	if spec.Levels > 2 && (errors.Is(err, errWide) || errors.As(err, &rates)) {
		return compile(spec, true)
	}
	return g, err
}

// errWide says that patterns are too wide for tables.
var errWide = errors.New("patterns are too wide for tables")

func compile(spec Spec, wide bool) (*Generator, error) {
	k := &compiler{
		wide:   wide,
		spec:   spec,
		seen:   map[seatAt]*neighbourhood{},
		shapes: map[string]int{},
		tables: map[string]uint32{},
		hits:   map[hitKey]int{},
	}
	if spec.Levels < 2 || spec.Levels > 16 {
		return nil, fmt.Errorf("%d levels; 2 to 16 are possible", spec.Levels)
	}
	if err := spec.checkAbsent(); err != nil {
		return nil, err
	}
	if err := spec.checkInverses(); err != nil {
		return nil, err
	}
	k.spec.Families = nil
	for _, f := range spec.Families {
		if f.Coupling != 0 || f.Couplings != nil {
			k.spec.Families = append(k.spec.Families, f)
		}
	}
	k.g = &Generator{
		Spec:     k.spec,
		Lattice:  spec.Lattice,
		Levels:   spec.Levels,
		SlotBits: bits.Len(uint(spec.Levels - 1)),
	}
	steps := []func() error{
		k.collect, k.checkCommutation, k.findSeats, k.reference, k.collectCouplings,
		k.compileShapes, k.classify, k.compilePlaces, k.checkKMS,
	}
	for _, step := range steps {
		if err := step(); err != nil {
			return nil, err
		}
	}
	return k.g, nil
}

func (k *compiler) reference() error {
	var err error
	k.g.Reference, k.g.ReferenceLines, err = referenceLevels(k.spec)
	if err != nil {
		return err
	}
	for f, spec := range k.spec.Families {
		if spec.Signs == nil {
			continue
		}
		if k.g.Reference == nil {
			k.g.Reference = make([][]uint8, len(k.families))
		}
		if k.g.Reference[f] == nil {
			k.g.Reference[f] = make([]uint8, k.g.Cells())
		}
		for c, sign := range spec.Signs {
			k.g.Reference[f][c] ^= sign
		}
	}
	return nil
}

// reach returns, by axis, how far from an end of the lattice a seat can feel
// it: by the wrap of its influences and, at open edges, by the terms that its
// neighbours lack.
func (k *compiler) reach() (reach [lattice.MaxAxes]int) {
	var influence, edge [lattice.MaxAxes]int
	span := func(into *[lattice.MaxAxes]int, d, e lattice.Offset) {
		for a := range d {
			into[a] = max(into[a], d[a]-e[a], e[a]-d[a])
		}
	}
	for _, s := range k.g.Seats {
		for _, slot := range s.Slots {
			for _, other := range k.g.Seats {
				for _, slot2 := range other.Slots {
					if slot.Family == slot2.Family {
						span(&influence, slot.Offset, slot2.Offset)
					}
				}
			}
			for _, factor := range k.families[slot.Family].factors {
				span(&edge, slot.Offset, factor.Exp.Neg())
			}
			span(&edge, slot.Offset, lattice.Offset{})
		}
	}
	for _, l := range k.lines {
		for _, f := range l.factors {
			for _, f2 := range l.factors {
				span(&edge, f.Exp, f2.Exp)
			}
			span(&edge, f.Exp, lattice.Offset{})
		}
	}
	for a := range reach {
		reach[a] = influence[a]
		if k.g.Lattice.Open[a] {
			reach[a] += edge[a]
		}
	}
	for _, r := range k.spec.Absent {
		// What a site feels of the edge lies one cell further inside.
		if k.g.Lattice.Open[r.Axis] {
			reach[r.Axis] = max(reach[r.Axis], influence[r.Axis]+edge[r.Axis]+1)
		}
	}
	return reach
}

// compileShapes lays out the zones and finds the shape of every place.
func (k *compiler) compileShapes() error {
	g := k.g
	k.energies = newEnergies(k.spec, k.families)
	if k.wide {
		if err := k.beginWide(); err != nil {
			return err
		}
	}
	k.atlas = newAtlas(g.Lattice, k.reach())
	places := len(g.Seats)
	for _, z := range k.atlas.axis {
		places *= z.count()
	}
	if k.atlas.axis[0].count()*len(g.Seats) > 1<<16 || places > 1<<24 {
		return fmt.Errorf("the terms reach too far: the lattice has %d kinds of places", places)
	}
	g.Col = k.atlas.columns(len(g.Seats))
	g.Row = k.atlas.rows(len(g.Seats))
	var err error
	k.atlas.each(func(c lattice.Offset) {
		for u := range g.Seats {
			if err != nil {
				return
			}
			var id int
			id, err = k.shapeOf(c, u)
			g.Places = append(g.Places, Place{Shape: uint16(id), Seat: uint16(u), Cell: int32(g.Lattice.Index(c))})
		}
	})
	return err
}

// compilePlaces finds, for every place, which seats each of its moves touches.
func (k *compiler) compilePlaces() error {
	g := k.g
	for i := range g.Places {
		p := &g.Places[i]
		p.First = uint32(len(g.Moves))
		c := g.Lattice.Coord(int(p.Cell))
		for m := range g.Seats[p.Seat].Moves {
			if err := k.compileTouches(c, int(p.Seat), m); err != nil {
				return err
			}
		}
	}
	return nil
}

// compileTouches appends move m of a seat in cell c, with its touches and hits.
func (k *compiler) compileTouches(c lattice.Offset, seat, m int) error {
	g := k.g
	home := g.Lattice.Index(c)*len(g.Seats) + seat
	changes := map[int][]int{} // address -> change of its slots
	n := k.look(c, seat)
	for b, exists := range n.exists {
		d := n.change[m][b]
		if !exists || d == 0 {
			continue
		}
		k.spread(g.Seats[seat].Slots[b].Family, n.term[b], d, changes)
	}
	addresses := make([]int, 0, len(changes))
	for a := range changes {
		addresses = append(addresses, a)
	}
	sort.Slice(addresses, func(i, j int) bool {
		x, y := addresses[i], addresses[j]
		if (x == home) != (y == home) {
			return x == home
		}
		return x < y
	})
	move := Move{First: uint32(len(g.Touch))}
	for _, withEnergy := range []bool{true, false} {
		for _, a := range addresses {
			u := a % len(g.Seats)
			if k.changesEnergy(u, changes[a]) != withEnergy {
				continue
			}
			shape, err := k.shapeOf(g.Lattice.Coord(a/len(g.Seats)), u)
			if err != nil {
				return err
			}
			var t uint32
			if k.wide {
				t = k.wideTable(shape, changes[a])
			} else if t, err = k.table(shape, changes[a]); err != nil {
				return err
			}
			g.Touch = append(g.Touch, Touch{int32(a - home), t})
		}
		if withEnergy {
			move.Energy = uint32(len(g.Touch))
		}
	}
	move.Last = uint32(len(g.Touch))
	move.FirstHit = uint32(len(g.Hits))
	k.appendHits(c, seat, m)
	move.LastHit = uint32(len(g.Hits))
	g.Moves = append(g.Moves, move)
	return nil
}

// spread adds the change d of one term to the slot of every seat that sees it.
func (k *compiler) spread(f int, term lattice.Offset, d int, changes map[int][]int) {
	g := k.g
	for u := range g.Seats {
		for _, slot := range g.Seats[u].Slots {
			if slot.Family != f {
				continue
			}
			c, ok := g.Lattice.Wrap(term, slot.Offset.Neg())
			if !ok {
				continue
			}
			b, ok := k.look(c, u).slot[termAt{f, term}]
			if !ok {
				continue
			}
			a := g.Lattice.Index(c)*len(g.Seats) + u
			if changes[a] == nil {
				changes[a] = make([]int, len(g.Seats[u].Slots))
			}
			changes[a][b] = d
		}
	}
}

func (k *compiler) changesEnergy(seat int, change []int) bool {
	for b, d := range change {
		if d != 0 && k.families[k.g.Seats[seat].Slots[b].Family].energy != nil {
			return true
		}
	}
	return false
}

func (k *compiler) checkKMS() error {
	if k.wide {
		return nil // done with the rates
	}
	if k.g.Couplings != nil {
		for _, op := range k.spec.Bath {
			if op.Law.Kind == bath.Table {
				return fmt.Errorf("bath operator %s: a table of rates cannot cover couplings that vary in size", op.Name)
			}
		}
		return nil
	}
	for i, op := range k.spec.Bath {
		if err := bath.CheckKMS(op.Law, k.spec.Beta, k.energies.of(i)); err != nil {
			return fmt.Errorf("bath operator %s: %w", k.spec.Bath[i].Name, err)
		}
	}
	return nil
}
