package exact

import (
	"cmp"
	"math/big"
	"slices"
)

// Class is a closed communicating class: states between which the jumps lead
// and from which none leads out.
type Class struct {
	States int
	Weight float64 // Gibbs weight among all states
}

// Scope says among which states closed classes are counted.
type Scope int

const (
	// Moved is what the moves of the bath reach from the reference state,
	// whether or not a rate is 0 there.
	Moved Scope = iota
	// Everything is what products of X and Z on the sites reach: all values
	// that terms and tracked operators can have together.
	Everything
)

// ClosedClasses lists the closed communicating classes of the states in scope,
// the class of the reference state first, the others by decreasing weight, then
// size. By detailed balance every class is closed. More than limit states are
// refused with a *TooManyStatesError.
func (s *System) ClosedClasses(scope Scope, limit int) ([]Class, error) {
	total, steps := s.TotalSize(), s.elementary()
	if scope == Moved {
		total, steps = s.OrbitSize(), nil
		for _, m := range s.Moves {
			steps = append(steps, m.Changes)
		}
	}
	if total.Cmp(big.NewInt(int64(limit))) > 0 {
		return nil, &TooManyStatesError{Limit: limit, Total: total}
	}
	st := &States{}
	st.init(s)
	w := make([]uint64, st.code.words)
	st.code.pack(w, s.Reference)
	st.insert(w)
	for i := 0; i < st.Len(); i++ {
		for _, c := range steps {
			copy(w, st.state(i))
			st.applyTo(c, w)
			st.insert(w)
		}
	}
	st.weigh()
	class := make([]int, st.Len())
	var out []Class
	var queue []int
	for i := range class {
		if class[i] != 0 {
			continue
		}
		out = append(out, Class{})
		c := &out[len(out)-1]
		class[i] = len(out)
		queue = append(queue[:0], i)
		for len(queue) > 0 {
			k := queue[len(queue)-1]
			queue = queue[:len(queue)-1]
			c.States++
			c.Weight += st.Weight[k]
			for n := range s.Moves {
				m := &s.Moves[n]
				if m.rates.rate[st.patternOf(m, st.state(k))] == 0 {
					continue
				}
				copy(w, st.state(k))
				st.applyTo(m.Changes, w)
				if j := st.find(w); class[j] == 0 {
					class[j] = len(out)
					queue = append(queue, j)
				}
			}
		}
	}
	slices.SortStableFunc(out[1:], func(a, b Class) int {
		return cmp.Or(-cmp.Compare(a.Weight, b.Weight), -cmp.Compare(a.States, b.States))
	})
	return out, nil
}
