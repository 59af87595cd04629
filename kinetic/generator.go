package kinetic

import (
	"sync"

	"sojourn/kinetic/lattice"
)

// Generator is a compiled thermal generator: the tables that every engine runs
// from. It is immutable and shared by all goroutines.
//
// A seat is one site with all its moves. It carries the pattern of all terms
// that any of its moves touches: slot b of the pattern occupies SlotBits bits
// from bit b*SlotBits and holds the level s of one term (for q = 2: 1 for an
// unsatisfied term). Its class is its total rate.
//
// Neighbours are found by zones. The place of a seat (zone and seat of the
// cell) is Row[r] + Col[c], where r and c are the quotient and remainder of its
// address by len(Col); the place knows its shape (which slots exist), and for
// each move the touches: other seats, as address differences, whose patterns
// change, and how.
type Generator struct {
	Spec     Spec // as given, zero couplings dropped
	Lattice  lattice.Lattice
	Levels   int
	SlotBits int // bits of one slot: 1 for q = 2
	Bits     int // bits of the widest pattern, at least 1

	Families []Family // energy families in the order of Spec, then local tracked operators
	Lines    []Line   // tracked operators with an extent
	Seats    []Seat   // seats of one cell; address = cell*len(Seats) + seat
	Shapes   []Shape

	Col    []uint16 // address within a row -> place offset
	Row    []uint32 // row -> first place
	Places []Place
	Moves  []Move  // Places[p].Moves consecutive entries from Places[p].First
	Touch  []Touch // Moves[m].First .. Energy .. Last
	Hits   []Hit   // Moves[m].FirstHit .. LastHit: lines that a move changes

	// Tables holds one transition table after another, 1<<Bits entries each:
	// entry table + old pattern is new pattern | old class<<16 | new class<<24.
	Tables []uint32
	// Rates is the total rate of a seat by class, increasing; class 0 has rate 0.
	Rates []float64

	// Wide is not nil if there are no tables by pattern: patterns have more than
	// 16 bits, or there are more rates than classes (q > 2). The shapes then have
	// no rates, and Rates is 0 and a bound.
	Wide *Wide

	// Couplings is not nil if couplings vary in size from term to term; rates
	// then depend on the place, and the shapes and classes give none.
	Couplings *Couplings

	tableShape []uint16 // by table: the shape it is for
	everywhere uint16   // slots that every shape has, whatever its seat

	// Reference gives, per family, the level of each term in the reference
	// state; nil means 0 everywhere. ReferenceLines does so per line.
	Reference      [][]uint8
	ReferenceLines [][]uint8

	printed sync.Once // guards print; see fingerprint
	print   [32]byte
}

// Family is a compiled set of terms, one per cell.
type Family struct {
	Name   string
	Group  string
	Energy []float64 // energy by level; nil for a tracked operator
	Order  bool      // its sum is the magnetization
	Terms  int       // how many exist on this lattice
	// Slots lists where the terms can be read: slot Slot of seat Seat in the
	// cell at Offset from the term's own. Empty if no move touches the family.
	Slots []SlotRef

	terms family
}

// SlotRef locates a term in a seat's pattern.
type SlotRef struct {
	Seat   int
	Slot   int
	Offset lattice.Offset // from the term's cell to the seat's
}

// Line is a tracked operator that runs along one or more axes: one value per
// transverse position.
type Line struct {
	Name      string
	Positions int    // transverse positions, existing or not
	Exists    []bool // by position; nil if all do
}

// Hit tells where a move meets a line: at transverse position
// Col[c] + Row[r] (r and c as for places), whose level grows by Change. A sum
// at or above Positions means that there is no such instance.
type Hit struct {
	Line   int
	Change uint8
	Col    []uint32
	Row    []uint32
}

// Seat is a site of the cell with all its moves.
type Seat struct {
	Site  int
	Slots []Slot
	Moves []MoveSpec
}

// Slot is one term in a seat's pattern.
type Slot struct {
	Family int
	Offset lattice.Offset // from the seat's cell to the term's
}

// MoveSpec is one way in which the bath acts on a seat.
type MoveSpec struct {
	Bath   int   // index into Spec.Bath
	X, Z   int   // powers applied
	Change []int // by slot: added to the level, mod q
}

// Shape is a seat together with the set of slots that exist: what rates depend
// on. All slices over patterns have 1<<Bits entries.
type Shape struct {
	Seat    int
	Present uint16 // bit b set if slot b exists
	Class   []uint8
	// Rate[m][p] is the rate of move m at pattern p, 0 if the move changes
	// nothing here. Split[p*moves+m] is the
	// cumulative share of moves 0..m in the total, scaled to 2^64-1.
	Rate  [][]float64
	Split []uint64
	// Delta[(m<<Bits|p)*len(Families)+f] is the change of the sum of family f,
	// of eigenvalues (-1)^s, for q = 2. For q > 2 there are q numbers per family,
	// the changes of the counts by level.
	Delta  []int8
	turned []uint16 // by move: the slots that it changes (q = 2)
	// Change[m][b] is what move m adds to the level in slot b, mod q: 0 if that
	// does not exist.
	Change [][]uint8
	// LineHits[m][l] is how many positions of line l the move changes, and
	// LineChanges[m][l] what it adds to their levels, in increasing order.
	LineHits    [][]int
	LineChanges [][][]uint8

	acts []bool // by move: whether it changes any term or line
}

// Place is a seat in a zone.
type Place struct {
	Shape uint16
	Seat  uint16
	First uint32 // of its moves in Generator.Moves
	Cell  int32  // a cell that represents the zone
}

// Move is a move at a place. Touches First..Energy change terms with energy,
// and so perhaps the class of the seat; Energy..Last change tracked slots only
// and leave the class. In each part the seat itself comes first, if it changes,
// and the others follow by address, so that trajectories depend neither on
// what is tracked nor on how the families were listed.
type Move struct {
	First, Energy, Last uint32
	FirstHit, LastHit   uint32 // in Generator.Hits
}

// Touch is one seat that a move changes.
type Touch struct {
	Delta int32  // address difference
	Table uint32 // first entry of its transition table in Generator.Tables, or number of what Wide adds
}

// Cells returns the number of cells.
func (g *Generator) Cells() int { return g.Lattice.Cells() }

// Addresses returns the number of seats on the lattice.
func (g *Generator) Addresses() int { return g.Cells() * len(g.Seats) }

// PlaceOf returns the place of an address. Engines use their own faster form.
func (g *Generator) PlaceOf(address int) int {
	return int(g.Row[address/len(g.Col)]) + int(g.Col[address%len(g.Col)])
}
