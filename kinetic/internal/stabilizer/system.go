package stabilizer

import (
	"fmt"
	"math"
)

// System is a list of rows over a number of sites of q levels each. Rows that
// meet should be close together in the numbering of sites.
type System struct {
	q, sites int
	stage    []int32 // first row of each stage but the first
	first    []int32 // row -> first of its factors; one more at the end
	site     []int32
	x, z     []uint8
}

// New returns a system without rows. It panics unless q is 2 to 16.
func New(q, sites int) *System {
	if q < 2 || q > 16 || sites < 0 || sites > math.MaxInt32/2 {
		panic(fmt.Sprintf("stabilizer: %d sites of %d levels", sites, q))
	}
	return &System{q: q, sites: sites, first: []int32{0}}
}

// Append adds a factor with powers 0..q-1 to the row that EndRow closes. A site
// occurs at most once in a row.
func (s *System) Append(site, x, z int) {
	s.site = append(s.site, int32(site))
	s.x = append(s.x, uint8(x))
	s.z = append(s.z, uint8(z))
}

// EndRow closes a row.
func (s *System) EndRow() { s.first = append(s.first, int32(len(s.site))) }

// NextStage makes rows that follow give way to all rows so far where Solve has
// a choice of levels.
func (s *System) NextStage() { s.stage = append(s.stage, int32(s.Rows())) }

// Rows returns the number of rows.
func (s *System) Rows() int { return len(s.first) - 1 }

// Solution is what Solve finds.
type Solution struct {
	// Rank is log_q of the order of the group that the rows generate.
	Rank float64
	// Consistent says that the rows can have the wanted levels together.
	Consistent bool
	// Levels are possible levels by row, the wanted ones as far as relations
	// allow. It is nil if Consistent, and if q is not prime.
	Levels []uint8
	// Clash says that rows were found not to commute. Not every such fault is
	// noticed, and the rest of the solution means nothing then.
	Clash bool
}

// Solve compares the rows, which must commute, with the wanted levels; nil
// stands for level 0 of every row. ok is false if elimination would take more
// than budget words touched.
func (s *System) Solve(want []uint8, budget int) (sol Solution, ok bool) {
	if want != nil && len(want) != s.Rows() {
		panic(fmt.Sprintf("stabilizer: %d levels for %d rows", len(want), s.Rows()))
	}
	levels := make([]uint8, s.Rows())
	copy(levels, want)
	sol.Consistent = true
	for _, p := range s.problems(levels, &budget) {
		rank, consistent, ok := p.solve()
		if !ok {
			return Solution{}, false
		}
		sol.Rank += rank
		sol.Consistent = sol.Consistent && consistent
		sol.Clash = sol.Clash || p.clash
	}
	if !sol.Consistent && prime(s.q) {
		sol.Levels = levels
	}
	return sol, true
}

func prime(q int) bool {
	for d := 2; d*d <= q; d++ {
		if q%d == 0 {
			return false
		}
	}
	return true
}
