package kinetic

import (
	"fmt"
	"maps"
	"math"
	"math/big"
	"slices"

	"sojourn/kinetic/bath"
)

// Wide stands in for the tables of a generator of more than two levels whose
// patterns, or whose number of distinct rates, are beyond them. What tables would
// say by pattern is computed: new patterns slot by slot, energies in integers,
// rates from a list of all energies that can occur.
type Wide struct {
	g      *Generator
	unit   *big.Rat // energies are integers times it
	adds   []wideAdd
	slots  []wideSlot // of the adds
	moves  [][]wideMove
	rates  []*rateList // by bath operator
	most   []float64   // by bath operator: its largest rate
	frozen []FrozenJumps
	least  float64 // the smallest rate above 0
}

// wideAdd is what a touch does to a seat of a shape: it adds to slots[first:last].
type wideAdd struct {
	shape       uint16
	first, last uint32
}

type wideSlot struct{ shift, change uint8 }

// wideMove is a move of a shape: by slot with energy, what it hands to the bath
// at each level. rates is nil if it changes nothing.
type wideMove struct {
	rates *rateList
	gains []wideGain
}

type wideGain struct {
	shift uint8
	gain  []int64 // by level, in units
}

// rateList gives the rate at every energy that can occur, by a hash table with
// open addressing.
type rateList struct {
	keys  []int64
	rate  []float64 // negative for an empty place
	shift uint
}

func newRateList(rates map[int64]float64) *rateList {
	bits := uint(3)
	for 1<<bits < 2*len(rates) {
		bits++
	}
	l := &rateList{keys: make([]int64, 1<<bits), rate: make([]float64, 1<<bits), shift: 64 - bits}
	for i := range l.rate {
		l.rate[i] = -1
	}
	for _, w := range slices.Sorted(maps.Keys(rates)) {
		i := l.place(w)
		l.keys[i], l.rate[i] = w, rates[w]
	}
	return l
}

// place is where an energy stands, or the empty place where it would.
func (l *rateList) place(w int64) int {
	i := int(uint64(w) * 0x9e3779b97f4a7c15 >> (l.shift & 63))
	for l.rate[i] >= 0 && l.keys[i] != w {
		i = (i + 1) & (len(l.keys) - 1)
	}
	return i
}

func (l *rateList) at(w int64) float64 { return l.rate[l.place(w)] }

// maxEnergies bounds the distinct energies of one kind of jump.
const maxEnergies = 1 << 20

// newWide finds a unit in which all energies are integers.
func newWide(g *Generator, families []family) (*Wide, [][]int64, error) {
	w := &Wide{g: g, unit: big.NewRat(1, 1)}
	denominator, divisor := big.NewInt(1), new(big.Int)
	for _, f := range families {
		for _, e := range f.energy {
			d := e.Denom()
			denominator.Mul(denominator, new(big.Int).Div(d, new(big.Int).GCD(nil, nil, denominator, d)))
		}
	}
	whole := func(e *big.Rat) *big.Int {
		n := new(big.Int).Mul(e.Num(), denominator)
		return n.Div(n, e.Denom())
	}
	// Only differences within a family matter.
	for _, f := range families {
		for _, e := range f.energy {
			d := new(big.Int).Sub(whole(e), whole(f.energy[0]))
			divisor.GCD(nil, nil, divisor, d.Abs(d))
		}
	}
	if divisor.Sign() == 0 {
		divisor.SetInt64(1)
	}
	w.unit.SetFrac(divisor, denominator)
	energy := make([][]int64, len(families))
	limit := new(big.Int).Lsh(big.NewInt(1), 56)
	for f := range families {
		for _, e := range families[f].energy {
			n := new(big.Int).Sub(whole(e), whole(families[f].energy[0]))
			n.Div(n, divisor)
			if n.CmpAbs(limit) > 0 {
				return nil, nil, fmt.Errorf("the energies of family %q have more digits than can be told apart with %d levels: give couplings with fewer", families[f].name, g.Levels)
			}
			energy[f] = append(energy[f], n.Int64())
		}
	}
	return w, energy, nil
}

// addShape compiles the moves of a new shape: the energies that they can hand to
// the bath, by adding up slots one after another.
func (k *compiler) addWideShape(s *Shape) error {
	g, w := k.g, k.g.Wide
	seat := &g.Seats[s.Seat]
	moves := make([]wideMove, len(seat.Moves))
	for m, move := range seat.Moves {
		if !s.acts[m] {
			continue
		}
		met := map[int64]int{0: 1} // energy -> patterns of the slots that matter
		others := 1
		for b, slot := range seat.Slots {
			d, energy := int(s.Change[m][b]), k.wideEnergy[slot.Family]
			switch {
			case s.Present>>b&1 == 0:
				continue
			case d == 0 || energy == nil:
				others *= g.Levels
				continue
			}
			gain := make([]int64, g.Levels)
			next := map[int64]int{}
			for level := range gain {
				gain[level] = energy[level] - energy[(level+d)%g.Levels]
				for e, n := range met {
					next[e+gain[level]] += n
				}
			}
			if met = next; len(met) > maxEnergies {
				return fmt.Errorf("the jumps of bath operator %s have more than %d distinct energies", g.Spec.Bath[move.Bath].Name, maxEnergies)
			}
			moves[m].gains = append(moves[m].gains, wideGain{uint8(b * g.SlotBits), gain})
		}
		if err := k.wideRates(move.Bath, met, others); err != nil {
			return fmt.Errorf("bath operator %s: %w", g.Spec.Bath[move.Bath].Name, err)
		}
	}
	w.moves = append(w.moves, moves)
	return nil
}

// wideRates computes the rates of a bath operator at energies that were met.
func (k *compiler) wideRates(b int, met map[int64]int, others int) error {
	w := k.g.Wide
	for _, e := range slices.Sorted(maps.Keys(met)) {
		n := met[e]
		r, ok := k.wideMet[b][e]
		if !ok {
			var err error
			if r, err = k.spec.Bath[b].Law.At(w.energy(e), k.spec.Beta); err != nil {
				return err
			}
			if math.IsNaN(r) || math.IsInf(r, 0) || r < 0 {
				return fmt.Errorf("the rate at energy %s is %v", w.energy(e).RatString(), r)
			}
			k.wideMet[b][e] = r
		}
		w.frozen[b].Possible += n * others
		if r == 0 {
			w.frozen[b].Frozen += n * others
		}
	}
	return nil
}

// energy is an energy in units as a number.
func (w *Wide) energy(e int64) *big.Rat {
	return new(big.Rat).Mul(new(big.Rat).SetInt64(e), w.unit)
}

// beginWide prepares for shapes, finishWide lists the rates of all that were met.
func (k *compiler) beginWide() (err error) {
	if k.g.Wide, k.wideEnergy, err = newWide(k.g, k.families); err != nil {
		return err
	}
	w := k.g.Wide
	w.frozen = make([]FrozenJumps, len(k.spec.Bath))
	for b := range k.spec.Bath {
		w.frozen[b].Bath = b
		k.wideMet = append(k.wideMet, map[int64]float64{})
	}
	return nil
}

func (k *compiler) finishWide() error {
	g, w := k.g, k.g.Wide
	w.least = math.Inf(1)
	for b, met := range k.wideMet {
		w.rates = append(w.rates, newRateList(met))
		most := 0.0
		for _, r := range met {
			most = math.Max(most, r)
			if r > 0 {
				w.least = math.Min(w.least, r)
			}
		}
		w.most = append(w.most, most)
		if err := bath.CheckKMS(k.spec.Bath[b].Law, k.spec.Beta, w.energies(met)); err != nil {
			return fmt.Errorf("bath operator %s: %w", k.spec.Bath[b].Name, err)
		}
	}
	g.everywhere = 1<<MaxSlots - 1
	bound := 0.0
	for i := range g.Shapes {
		s := &g.Shapes[i]
		g.everywhere &= s.Present
		sum := 0.0
		for m, move := range g.Seats[s.Seat].Moves {
			if s.acts[m] {
				w.moves[i][m].rates = w.rates[move.Bath]
				sum += w.most[move.Bath]
			}
		}
		bound = math.Max(bound, sum)
	}
	g.Rates = []float64{0}
	if bound > 0 {
		g.Rates = append(g.Rates, bound)
	}
	return nil
}

// energies lists energies in increasing order.
func (w *Wide) energies(met map[int64]float64) []*big.Rat {
	var out []*big.Rat
	for _, e := range slices.Sorted(maps.Keys(met)) {
		out = append(out, w.energy(e))
	}
	return out
}

// add lists what a touch adds to a seat of a shape, and returns its number.
func (w *Wide) add(shape int, change []int) uint32 {
	a := wideAdd{shape: uint16(shape), first: uint32(len(w.slots))}
	for b, d := range change {
		if d != 0 {
			w.slots = append(w.slots, wideSlot{uint8(b * w.g.SlotBits), uint8(d)})
		}
	}
	a.last = uint32(len(w.slots))
	w.adds = append(w.adds, a)
	return uint32(len(w.adds) - 1)
}

// after returns the pattern after a touch.
func (w *Wide) after(pattern uint64, add uint32) uint64 {
	q, mask := uint64(w.g.Levels), uint64(1)<<w.g.SlotBits-1
	a := &w.adds[add]
	for _, s := range w.slots[a.first:a.last] {
		level := pattern >> (s.shift & 63) & mask
		to := level + uint64(s.change)
		if to >= q {
			to -= q
		}
		pattern += (to - level) << (s.shift & 63)
	}
	return pattern
}

// rate returns the rate of a move, and the energy in units that it hands to the
// bath.
func (m *wideMove) rate(pattern, mask uint64) (r float64, e int64) {
	if m.rates == nil {
		return 0, 0
	}
	for i := range m.gains {
		g := &m.gains[i]
		e += g.gain[pattern>>(g.shift&63)&mask]
	}
	return m.rates.at(e), e
}

// total is the rate of a seat.
func (w *Wide) total(shape uint16, pattern uint64) float64 {
	mask := uint64(1)<<w.g.SlotBits - 1
	sum := 0.0
	moves := w.moves[shape]
	for i := range moves {
		r, _ := moves[i].rate(pattern, mask)
		sum += r
	}
	return sum
}

// Rate returns the rate of a move of a seat of the given shape and pattern.
func (w *Wide) Rate(shape, move int, pattern uint64) float64 {
	r, _ := w.moves[shape][move].rate(pattern, uint64(1)<<w.g.SlotBits-1)
	return r
}

// WidePatterns is implemented by engines that run wide patterns.
type WidePatterns interface {
	// WidePatterns writes the pattern of every address in a lane; dst has
	// Addresses entries.
	WidePatterns(lane int, dst []uint64)
}
