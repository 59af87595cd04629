package exact

import (
	"fmt"
	"math"
	"math/big"
	"slices"

	"sojourn/kinetic/bath"
)

// rateTable gives the rate of a move by the levels of the terms that it
// changes: the pattern is their number in base q, the first term's level least
// significant. Moves that look alike share one.
type rateTable struct {
	rate      []float64
	symmetric []float64  // sqrt(G(w) G(-w))
	gain      []*big.Rat // w = E(before) - E(after)
}

// maxPatterns bounds a rate table; 2^16 is 16 terms on one site for q = 2.
const maxPatterns = 1 << 16

// rateKey is equal for moves whose rates are the same function of the pattern.
func (s *System) rateKey(m Move) string {
	key := fmt.Sprint(m.Bath)
	for _, c := range m.Changes[:m.Energy] {
		key += fmt.Sprint(" ", s.Instances[c.Instance].Kind, "+", c.Add)
		for _, e := range s.energy(c.Instance) {
			key += "," + e.RatString()
		}
	}
	return key
}

func (s *System) newRateTable(m Move) (*rateTable, error) {
	q := s.Spec.Levels
	n := 1
	for range m.Energy {
		if n *= q; n > maxPatterns {
			return nil, fmt.Errorf("%s changes %d terms at once; their levels have more than %d combinations",
				s.Spec.Bath[m.Bath].Name, m.Energy, maxPatterns)
		}
	}
	t := &rateTable{rate: make([]float64, n), symmetric: make([]float64, n), gain: make([]*big.Rat, n)}
	op := s.Spec.Bath[m.Bath]
	for p := range n {
		w := new(big.Rat)
		rest := p
		for _, c := range m.Changes[:m.Energy] {
			levels := s.energy(c.Instance)
			before := rest % q
			rest /= q
			w.Add(w, levels[before])
			w.Sub(w, levels[(before+int(c.Add))%q])
		}
		down, up, err := balanced(op.Law, w, s.Spec.Beta)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", op.Name, err)
		}
		t.gain[p] = w
		t.rate[p] = down
		if w.Sign() < 0 {
			t.rate[p] = up
		}
		x, _ := w.Float64()
		t.symmetric[p] = down * math.Exp(-s.Spec.Beta*math.Abs(x)/2)
	}
	return t, nil
}

// balanced returns G(|w|) and G(-|w|) and verifies that they are rates in
// detailed balance, to a relative 1e-12.
func balanced(law bath.Law, w *big.Rat, beta float64) (down, up float64, err error) {
	w = new(big.Rat).Abs(w)
	if down, err = law.At(w, beta); err != nil {
		return 0, 0, err
	}
	if up, err = law.At(new(big.Rat).Neg(w), beta); err != nil {
		return 0, 0, err
	}
	if !(down >= 0) || math.IsInf(down, 0) {
		return 0, 0, fmt.Errorf("the rate at the energy %s is %v", w.RatString(), down)
	}
	x, _ := w.Float64()
	if down > 0 && up == 0 {
		return 0, 0, fmt.Errorf("at beta = %v a jump that costs the energy %s has a rate below 1e-300", beta, w.RatString())
	}
	if !(math.Abs(up-math.Exp(-beta*x)*down) <= 1e-12*up) {
		return 0, 0, fmt.Errorf("the rates %v and %v at the energies %s and -%s do not satisfy KMS", down, up, w.RatString(), w.RatString())
	}
	return down, up, nil
}

// pattern returns the number of a move's pattern in a state.
func (s *System) pattern(m *Move, levels []uint8) int {
	p := 0
	for i := m.Energy - 1; i >= 0; i-- {
		p = p*s.Spec.Levels + int(levels[m.Changes[i].Instance])
	}
	return p
}

// Rate returns the rate of move m in a state.
func (s *System) Rate(m int, levels []uint8) float64 {
	return s.Moves[m].rates.rate[s.pattern(&s.Moves[m], levels)]
}

// Gain returns the energy w = E(before) - E(after) that move m hands to the
// bath in a state. The result is shared and must not be changed.
func (s *System) Gain(m int, levels []uint8) *big.Rat {
	return s.Moves[m].rates.gain[s.pattern(&s.Moves[m], levels)]
}

// Frozen reports whether any move has rate 0 at some pattern.
func (s *System) Frozen() bool {
	for _, m := range s.Moves {
		for _, r := range m.rates.rate {
			if r == 0 {
				return true
			}
		}
	}
	return false
}

// Energies lists, increasing, the energies w that jumps of bath operator b can
// hand to the bath, whatever the levels around.
func (s *System) Energies(b int) []*big.Rat {
	var out []*big.Rat
	seen := map[*rateTable]bool{}
	for _, m := range s.Moves {
		if m.Bath == b && !seen[m.rates] {
			seen[m.rates] = true
			out = append(out, m.rates.gain...)
		}
	}
	slices.SortFunc(out, (*big.Rat).Cmp)
	return slices.CompactFunc(out, func(a, b *big.Rat) bool { return a.Cmp(b) == 0 })
}
