package kinetic

import (
	"fmt"
	"math"
	"math/big"
	"sort"

	"sojourn/kinetic/bath"
)

// energies turns changes of levels into exact energies and rates. Energies are
// sums of integers times couplings, each coupling being the rational number
// that its shortest decimal denotes, so that equal energies give equal rates in
// whatever order they are summed.
type energies struct {
	beta  float64
	laws  []bath.Law
	level [][]*big.Rat // family, level; nil for tracked families
	rates []map[string]float64
	met   map[string]*big.Rat // every energy asked for, by its text

	// counts says how many terms of a family leave a level less how many come to
	// it, mod 256; known holds what was found for counts.
	counts []byte
	known  map[string]*jumpEnergy
}

// jumpEnergy is an energy and the rate at it under each law, -1 if not yet asked
// for.
type jumpEnergy struct {
	energy *big.Rat
	text   string
	rate   []float64
}

func newEnergies(spec Spec, families []family) *energies {
	e := &energies{beta: spec.Beta, known: map[string]*jumpEnergy{}, met: map[string]*big.Rat{}}
	for _, b := range spec.Bath {
		e.laws = append(e.laws, b.Law)
		e.rates = append(e.rates, map[string]float64{})
	}
	for _, f := range families {
		e.level = append(e.level, f.energy)
	}
	e.counts = make([]byte, len(families)*spec.Levels)
	return e
}

// rate returns the rate under a law of the jump that takes before[b] to
// after[b] in each listed slot, where family[b] is the slot's family.
func (e *energies) rate(law int, family []int, before, after []int) (float64, error) {
	q := len(e.counts) / max(1, len(e.level)) // no families: nothing to count
	clear(e.counts)
	for b, f := range family {
		if e.level[f] != nil {
			e.counts[f*q+before[b]]++
			e.counts[f*q+after[b]]--
		}
	}
	j, ok := e.known[string(e.counts)]
	if !ok {
		j = e.add()
	}
	if j.rate[law] >= 0 {
		return j.rate[law], nil
	}
	r, ok := e.rates[law][j.text]
	if !ok {
		var err error
		if r, err = e.laws[law].At(j.energy, e.beta); err != nil {
			return 0, err
		}
		if math.IsNaN(r) || math.IsInf(r, 0) || r < 0 {
			return 0, fmt.Errorf("the rate at energy %s is %v", j.text, r)
		}
		e.rates[law][j.text] = r
	}
	j.rate[law] = r
	return r, nil
}

// add computes the energy of the counts.
func (e *energies) add() *jumpEnergy {
	q := len(e.counts) / max(1, len(e.level))
	w := new(big.Rat)
	for f, levels := range e.level {
		for s, energy := range levels {
			if n := int8(e.counts[f*q+s]); n != 0 {
				w.Add(w, new(big.Rat).Mul(big.NewRat(int64(n), 1), energy))
			}
		}
	}
	j := &jumpEnergy{energy: w, text: w.RatString(), rate: make([]float64, len(e.laws))}
	for law := range j.rate {
		j.rate[law] = -1
	}
	if _, ok := e.met[j.text]; !ok {
		e.met[j.text] = w
	}
	e.known[string(e.counts)] = j
	return j
}

// of lists the energies at which a law was asked for a rate, increasing.
func (e *energies) of(law int) []*big.Rat {
	out := make([]*big.Rat, 0, len(e.rates[law]))
	for text := range e.rates[law] {
		out = append(out, e.met[text])
	}
	sort.Slice(out, func(i, j int) bool { return out[i].Cmp(out[j]) < 0 })
	return out
}

// total sums rates in increasing order, so that seats with the same rates share
// a class whatever the order of their moves.
func total(rates []float64) float64 {
	sorted := append([]float64(nil), rates...)
	sort.Float64s(sorted)
	sum := 0.0
	for _, r := range sorted {
		sum += r
	}
	return sum
}

// levelEnergies returns E(s) = -J shape(s), or -J (-1)^s for q = 2, exactly.
func levelEnergies(f FamilySpec, q int) ([]*big.Rat, error) {
	shape := f.Shape
	if shape == nil {
		if q != 2 {
			return nil, fmt.Errorf("family %q gives no energies for %d levels", f.Name, q)
		}
		shape = []float64{1, -1}
	}
	if len(shape) != q {
		return nil, fmt.Errorf("family %q gives %d energies for %d levels", f.Name, len(shape), q)
	}
	out := make([]*big.Rat, q)
	j := bath.Exact(f.Coupling)
	for s, v := range shape {
		out[s] = new(big.Rat).Mul(bath.Exact(-v), j)
	}
	return out, nil
}
