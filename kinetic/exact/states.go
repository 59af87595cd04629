package exact

import (
	"fmt"
	"math"
	"math/big"
	"math/bits"
)

// States is a list of states of a System, the reference state first, with
// their Gibbs weights and the rates between them.
type States struct {
	System *System
	// Energy holds the energies and Weight the Gibbs weights, normalised to 1
	// within the list.
	Energy, Weight []float64

	code   code
	packed []uint64
	table  []int32 // open addressing: state number + 1, 0 for empty
	matrix *Matrix
}

// TooManyStatesError says that a lattice has more states than were allowed.
type TooManyStatesError struct {
	Limit   int
	Reached int      // states listed when the limit was passed; 0 if it was known beforehand
	Total   *big.Int // states that the moves connect if none is frozen
}

func (e *TooManyStatesError) Error() string {
	if e.Reached == 0 {
		return fmt.Sprintf("the lattice has %s states, more than the limit of %d", size(e.Total), e.Limit)
	}
	return fmt.Sprintf("more than %d states reached; without frozen jumps there are %s", e.Limit, size(e.Total))
}

// size writes small numbers in full and large ones as powers of two.
func size(n *big.Int) string {
	if n.BitLen() <= 40 {
		return n.String()
	}
	if n.TrailingZeroBits() == uint(n.BitLen()-1) {
		return fmt.Sprintf("2^%d", n.BitLen()-1)
	}
	return fmt.Sprintf("about 2^%d", n.BitLen())
}

// code packs levels into words, as many per word as fit.
type code struct {
	bits, perWord, words int
}

func newCode(q, instances int) code {
	b := bits.Len(uint(q - 1))
	per := 64 / b
	return code{b, per, max(1, (instances+per-1)/per)}
}

func (c code) get(w []uint64, i int) int {
	return int(w[i/c.perWord] >> (i % c.perWord * c.bits) & (1<<c.bits - 1))
}

func (c code) set(w []uint64, i, level int) {
	shift := i % c.perWord * c.bits
	p := &w[i/c.perWord]
	*p = *p&^((1<<c.bits-1)<<shift) | uint64(level)<<shift
}

func (c code) pack(dst []uint64, levels []uint8) {
	clear(dst)
	for i, l := range levels {
		c.set(dst, i, int(l))
	}
}

func hash(w []uint64) uint64 {
	h := uint64(0x9e3779b97f4a7c15)
	for _, x := range w {
		h = (h ^ x) * 0xbf58476d1ce4e5b9
		h ^= h >> 29
	}
	return h ^ h>>32
}

func (st *States) init(s *System) {
	st.System = s
	st.code = newCode(s.Spec.Levels, len(s.Instances))
	st.table = make([]int32, 1<<10)
}

// Len returns the number of states.
func (st *States) Len() int { return len(st.packed) / st.code.words }

func (st *States) state(i int) []uint64 {
	return st.packed[i*st.code.words : (i+1)*st.code.words]
}

// Levels appends the levels of state i, by instance.
func (st *States) Levels(i int, dst []uint8) []uint8 {
	w := st.state(i)
	for k := range st.System.Instances {
		dst = append(dst, uint8(st.code.get(w, k)))
	}
	return dst
}

// Find returns the number of the state with the given levels, or -1 if it is
// not listed.
func (st *States) Find(levels []uint8) int {
	w := make([]uint64, st.code.words)
	st.code.pack(w, levels)
	return st.find(w)
}

func (st *States) find(w []uint64) int {
	mask := uint64(len(st.table) - 1)
	for h := hash(w) & mask; ; h = (h + 1) & mask {
		i := int(st.table[h]) - 1
		if i < 0 {
			return -1
		}
		if equal(st.state(i), w) {
			return i
		}
	}
}

// insert returns the number of a state, adding it if it is new.
func (st *States) insert(w []uint64) int {
	if i := st.find(w); i >= 0 {
		return i
	}
	i := st.Len()
	st.packed = append(st.packed, w...)
	if 2*(i+1) > len(st.table) {
		st.table = make([]int32, 2*len(st.table))
		for j := range i {
			st.link(j)
		}
	}
	st.link(i)
	return i
}

func (st *States) link(i int) {
	mask := uint64(len(st.table) - 1)
	h := hash(st.state(i)) & mask
	for st.table[h] != 0 {
		h = (h + 1) & mask
	}
	st.table[h] = int32(i) + 1
}

func equal(a, b []uint64) bool {
	for i := range a {
		if a[i] != b[i] {
			return false
		}
	}
	return true
}

// patternOf and applyTo are System.pattern and System.Apply on packed levels.
func (st *States) patternOf(m *Move, w []uint64) int {
	p := 0
	for i := m.Energy - 1; i >= 0; i-- {
		p = p*st.System.Spec.Levels + st.code.get(w, m.Changes[i].Instance)
	}
	return p
}

func (st *States) applyTo(changes []Change, w []uint64) {
	q := st.System.Spec.Levels
	for _, c := range changes {
		l := st.code.get(w, c.Instance) + int(c.Add)
		if l >= q {
			l -= q
		}
		st.code.set(w, c.Instance, l)
	}
}

// Explore lists the states that jumps of positive rate reach from the
// reference state, at most limit (which must be below 2^31) of them. Beyond
// that it returns a *TooManyStatesError.
func (s *System) Explore(limit int) (*States, error) {
	total := s.OrbitSize()
	if !s.Frozen() && total.Cmp(big.NewInt(int64(limit))) > 0 {
		return nil, &TooManyStatesError{Limit: limit, Total: total}
	}
	return s.list(limit, total, false)
}

// Orbit lists the states that the moves reach from the reference state whether
// or not they have a rate there: a random start draws from these. Where jumps
// are frozen they may fall into several classes, and Weight then averages over
// classes that no trajectory connects.
func (s *System) Orbit(limit int) (*States, error) {
	total := s.OrbitSize()
	if total.Cmp(big.NewInt(int64(limit))) > 0 {
		return nil, &TooManyStatesError{Limit: limit, Total: total}
	}
	return s.list(limit, total, true)
}

// list lists states breadth first, with the rates between them.
func (s *System) list(limit int, total *big.Int, frozen bool) (*States, error) {
	st := &States{matrix: &Matrix{}}
	st.init(s)
	w := make([]uint64, st.code.words)
	st.code.pack(w, s.Reference)
	st.insert(w)
	st.matrix.begin()
	if !s.Frozen() && total.IsInt64() && total.Int64() <= int64(limit) {
		st.matrix.grow(int(total.Int64()) * len(s.Moves))
	}
	for i := 0; i < st.Len(); i++ {
		for k := range s.Moves {
			move := &s.Moves[k]
			p := st.patternOf(move, st.state(i))
			if move.rates.rate[p] == 0 && !frozen {
				continue
			}
			copy(w, st.state(i))
			st.applyTo(move.Changes, w)
			j := st.insert(w)
			if j >= limit {
				return nil, &TooManyStatesError{Limit: limit, Reached: limit, Total: total}
			}
			if move.rates.rate[p] > 0 {
				st.matrix.add(j, move.rates.rate[p], move.rates.symmetric[p])
			}
		}
		st.matrix.endRow()
	}
	st.weigh()
	return st, nil
}

// weigh fills Energy and Weight.
func (st *States) weigh() {
	s := st.System
	n := st.Len()
	st.Energy, st.Weight = make([]float64, n), make([]float64, n)
	var levels []uint8
	lowest := math.Inf(1)
	for i := range n {
		levels = st.Levels(i, levels[:0])
		st.Energy[i] = s.EnergyOf(levels)
		lowest = math.Min(lowest, st.Energy[i])
	}
	sum := 0.0
	for i, e := range st.Energy {
		st.Weight[i] = math.Exp(-s.Spec.Beta * (e - lowest))
		sum += st.Weight[i]
	}
	for i := range st.Weight {
		st.Weight[i] /= sum
	}
}

// Matrix returns the generator on the listed states.
func (st *States) Matrix() *Matrix { return st.matrix }
