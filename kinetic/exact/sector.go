package exact

import (
	"fmt"
	"math"
	"math/big"
)

// Sector is a chain reduced by its symmetries to the functions that share those
// of given observables: a state stands for all its translates and flips. It
// reaches lattices whose states are too many to list one by one; what it says
// is exact for functions in the sector and says nothing of others.
//
// For the group G with the character chi (1 or -1 for each element) and the
// orbit of a state x with M states, the functions on the orbit of the form
// f(g x) = chi(g) f(x) are one number, and
//
//	H_ij = sqrt(M_i/M_j) sum over jumps from x_i to g x_j of chi(g) h(x_i, g x_j)
//
// (h the entry of the symmetrised generator). Orbits on which no such function
// exists, because some g with chi(g) = -1 leaves the state, are left out.
type Sector struct {
	System *System
	// Orbits is how many orbits of the group's Order elements there are with
	// functions in the sector, States how many states they hold.
	Orbits, Order int
	States        *big.Int

	chain  chain
	group  *symmetry
	listed States // one state of each orbit
}

// Sector lists the orbits under the symmetries that the observables share, at
// most limit of them. All components of the observables must transform alike:
// the magnetization is one sector, the energy another.
func (s *System) Sector(limit int, observables ...Observable) (*Sector, error) {
	g, err := s.symmetryOf(observables)
	if err != nil {
		return nil, err
	}
	total := s.OrbitSize()
	fewest := new(big.Int).Div(total, big.NewInt(int64(g.order())))
	if !s.Frozen() && fewest.Cmp(big.NewInt(int64(limit))) > 0 {
		return nil, &TooManyStatesError{Limit: limit, Total: total}
	}
	b := &sectorBuilder{s: s, images: newImages(s, g), limit: limit, total: total}
	b.states.init(s)
	if err := b.list(); err != nil {
		return nil, err
	}
	return b.finish(g), nil
}

// sectorBuilder lists orbits breadth first.
type sectorBuilder struct {
	s      *System
	images *images
	states States // representatives
	limit  int
	total  *big.Int

	start     []int
	to        []int32
	sign      []int8
	rate      []float64
	symmetric []float64
	size      []int // states of each orbit; 0 where the sector has no function
}

func (b *sectorBuilder) list() error {
	st, s := &b.states, b.s
	w := make([]uint64, st.code.words)
	st.code.pack(w, s.Reference)
	least, _, _, _ := b.images.least(w)
	st.insert(least)
	b.start = append(b.start, 0)
	for i := 0; i < st.Len(); i++ {
		_, _, same, split := b.images.least(st.state(i))
		b.size = append(b.size, b.images.order/same)
		if split {
			b.size[i] = 0
		}
		for k := range s.Moves {
			move := &s.Moves[k]
			p := st.patternOf(move, st.state(i))
			if move.rates.rate[p] == 0 {
				continue
			}
			copy(w, st.state(i))
			st.applyTo(move.Changes, w)
			least, odd, _, _ := b.images.least(w)
			j := st.insert(least)
			if j >= b.limit {
				return &TooManyStatesError{Limit: b.limit, Reached: b.limit, Total: b.total}
			}
			b.add(j, odd, move.rates.rate[p], move.rates.symmetric[p])
		}
		b.start = append(b.start, len(b.to))
	}
	return nil
}

// add puts a jump into the current row.
func (b *sectorBuilder) add(to int, odd bool, rate, symmetric float64) {
	sign := int8(1)
	if odd {
		sign = -1
	}
	for k := b.start[len(b.start)-1]; k < len(b.to); k++ {
		if b.to[k] == int32(to) && b.sign[k] == sign {
			b.rate[k] += rate
			b.symmetric[k] += symmetric
			return
		}
	}
	b.to, b.sign = append(b.to, int32(to)), append(b.sign, sign)
	b.rate, b.symmetric = append(b.rate, rate), append(b.symmetric, symmetric)
}

// finish leaves out orbits without functions and scales the matrix.
func (b *sectorBuilder) finish(g *symmetry) *Sector {
	x := &Sector{System: b.s, Order: g.order(), States: new(big.Int), group: g}
	x.listed.init(b.s)
	for _, o := range g.odd {
		x.chain.odd = x.chain.odd || o
	}
	number := make([]int32, len(b.size))
	for i, n := range b.size {
		number[i] = -1
		if n > 0 {
			number[i] = int32(x.listed.insert(b.states.state(i)))
			x.States.Add(x.States, big.NewInt(int64(n)))
		}
	}
	x.Orbits = x.listed.Len()
	m := &Matrix{}
	m.begin()
	for i, n := range b.size {
		if n == 0 {
			continue
		}
		exit, leak := 0.0, 0.0
		for k := b.start[i]; k < b.start[i+1]; k++ {
			exit += b.rate[k]
			j := b.to[k]
			if number[j] < 0 {
				leak += b.rate[k]
				continue
			}
			m.To = append(m.To, number[j])
			m.Rate = append(m.Rate, b.rate[k])
			m.Symmetric = append(m.Symmetric, float64(b.sign[k])*b.symmetric[k]*math.Sqrt(float64(n)/float64(b.size[j])))
			x.chain.sign = append(x.chain.sign, b.sign[k])
		}
		m.Exit = append(m.Exit, exit)
		x.chain.leak = append(x.chain.leak, leak)
		m.Start = append(m.Start, len(m.To))
	}
	x.chain.matrix = m
	x.weigh(b)
	return x
}

// weigh gives orbits their Gibbs weights, among all states.
func (x *Sector) weigh(b *sectorBuilder) {
	b.states.weigh()
	sum := 0.0
	for i, e := range b.states.Weight {
		n := b.size[i]
		if n == 0 {
			_, _, same, _ := b.images.least(b.states.state(i))
			n = b.images.order / same
		}
		w := e * float64(n)
		sum += w
		if b.size[i] > 0 {
			x.chain.weight = append(x.chain.weight, w)
		}
	}
	for i := range x.chain.weight {
		x.chain.weight[i] /= sum
	}
}

// Relaxation decomposes an observable of the sector into modes, as
// States.Relaxation does. Observables of other sectors are refused.
func (x *Sector) Relaxation(o Observable) (Relaxation, error) {
	if !x.group.fits(o) {
		return Relaxation{}, fmt.Errorf("%s has not the symmetry of the sector", o.Name)
	}
	return x.chain.relaxation(o, x.listed.Values)
}

// Lowest returns the count lowest distinct eigenvalues of -L above 0 that
// belong to functions in the sector, with their multiplicities there: see
// States.Lowest.
func (x *Sector) Lowest(count int) ([]Level, error) { return x.chain.lowest(count) }

// images finds the least of a state's images under a group, word by word.
type images struct {
	order int
	words int
	// table[t][256*b+v] is the part of the translated state that comes from byte
	// b of the state having the value v.
	table [][]uint64
	flip  [][]uint64
	odd   []bool
	now   []uint64
	image []uint64
	best  []uint64
}

func newImages(s *System, g *symmetry) *images {
	c := newCode(2, len(s.Instances))
	m := &images{
		order: g.order(), words: c.words, odd: g.odd,
		now: make([]uint64, c.words), image: make([]uint64, c.words), best: make([]uint64, c.words),
	}
	bytes := 8 * c.words
	for _, t := range g.move {
		table := make([]uint64, bytes*256*c.words)
		for b := range bytes {
			for v := range 256 {
				out := table[(256*b+v)*c.words : (256*b+v+1)*c.words]
				for bit := range 8 {
					if i := 8*b + bit; v>>bit&1 == 1 && i < len(t) {
						c.set(out, int(t[i]), 1)
					}
				}
			}
		}
		m.table = append(m.table, table)
	}
	for _, f := range g.flip {
		w := make([]uint64, c.words)
		c.pack(w, f)
		m.flip = append(m.flip, w)
	}
	return m
}

// least returns the least image of a state (valid until the next call),
// whether odd functions change sign on the way there, how many elements of the
// group lead there, and whether they disagree about the sign.
func (m *images) least(state []uint64) (best []uint64, odd bool, same int, split bool) {
	for t, table := range m.table {
		clear(m.now)
		for i, x := range state {
			for b := 8 * i; x != 0; b++ {
				at := (256*b + int(x&255)) * m.words
				for k := range m.now {
					m.now[k] ^= table[at+k]
				}
				x >>= 8
			}
		}
		for f, flip := range m.flip {
			for k := range m.image {
				m.image[k] = m.now[k] ^ flip[k]
			}
			c := compare(m.image, m.best)
			switch {
			case t == 0 && f == 0 || c < 0:
				copy(m.best, m.image)
				odd, same, split = m.odd[f], 1, false
			case c == 0:
				same++
				split = split || m.odd[f] != odd
			}
		}
	}
	return m.best, odd, same, split
}

func compare(a, b []uint64) int {
	for i := range a {
		if a[i] != b[i] {
			if a[i] < b[i] {
				return -1
			}
			return 1
		}
	}
	return 0
}
