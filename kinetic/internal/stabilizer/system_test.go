package stabilizer

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// op is a row written out: tau^phase prod X^x Z^z.
type op struct {
	x, z  []int
	phase int // units of exp(i pi/q)
}

func (a op) key() string { return fmt.Sprint(a.x, a.z) }

func commutator(a, b op, q int) int {
	c := 0
	for i := range a.x {
		c += a.z[i]*b.x[i] - a.x[i]*b.z[i]
	}
	return ((c % q) + q) % q
}

func multiply(a, b op, q int) op {
	out := op{x: make([]int, len(a.x)), z: make([]int, len(a.x)), phase: a.phase + b.phase}
	for i := range a.x {
		out.phase += 2 * a.z[i] * b.x[i]
		out.x[i] = (a.x[i] + b.x[i]) % q
		out.z[i] = (a.z[i] + b.z[i]) % q
	}
	out.phase = ((out.phase % (2 * q)) + 2*q) % (2 * q)
	return out
}

// randomRows draws commuting rows on n sites, each on at most weight sites, of
// one letter in the whole row if pure.
func randomRows(r *rand.Rand, q, n, weight int, pure bool) []op {
	var rows []op
	for range 40 {
		a := op{x: make([]int, n), z: make([]int, n)}
		letter := r.IntN(2)
		for range weight {
			i := r.IntN(n)
			if !pure || letter == 0 {
				a.x[i] = r.IntN(q)
			}
			if !pure || letter == 1 {
				a.z[i] = r.IntN(q)
			}
		}
		for i := range a.x {
			a.phase += a.x[i] * a.z[i]
		}
		if q%2 == 1 {
			a.phase *= q + 1
		}
		a.phase %= 2 * q
		fits := true
		for _, b := range rows {
			fits = fits && commutator(a, b, q) == 0
		}
		if fits {
			rows = append(rows, a)
		}
		if len(rows) == n+2 {
			break
		}
	}
	return rows
}

func systemOf(rows []op, q, n int) *System {
	s := New(q, n)
	for _, a := range rows {
		for i := range a.x {
			if a.x[i] != 0 || a.z[i] != 0 {
				s.Append(i, a.x[i], a.z[i])
			}
		}
		s.EndRow()
	}
	return s
}

// closure multiplies out the group of the rows at the wanted levels. It returns
// its order up to phases, and whether the identity comes without a phase only.
func closure(rows []op, want []uint8, q, n int) (order int, consistent bool) {
	one := op{x: make([]int, n), z: make([]int, n)}
	group := map[string]int{one.key(): 0}
	list := []op{one}
	consistent = true
	for i := 0; i < len(list); i++ {
		for k, row := range rows {
			b := multiply(list[i], row, q)
			b.phase = ((b.phase-2*int(want[k]))%(2*q) + 2*q) % (2 * q)
			if p, ok := group[b.key()]; !ok {
				group[b.key()] = b.phase
				list = append(list, b)
			} else if p != b.phase {
				consistent = false
			}
		}
	}
	return len(list), consistent
}

// TestSolveAgainstClosure compares rank, consistency and levels with the group
// multiplied out, for random commuting rows.
func TestSolveAgainstClosure(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	frustrated := 0
	for trial := range 4000 {
		q := []int{2, 2, 2, 3, 4, 6, 5}[trial%7]
		n := 1 + r.IntN(4)
		if q <= 3 {
			n = 1 + r.IntN(6)
		}
		if q > 4 {
			n = 1 + r.IntN(3)
		}
		rows := randomRows(r, q, n, 1+r.IntN(4), r.IntN(3) == 0)
		want := make([]uint8, len(rows))
		if r.IntN(2) == 0 {
			for i := range want {
				want[i] = uint8(r.IntN(q))
			}
		}
		order, consistent := closure(rows, want, q, n)
		s := systemOf(rows, q, n)
		sol, ok := s.Solve(want, math.MaxInt)
		if !ok || sol.Clash {
			t.Fatalf("trial %d: not solved", trial)
		}
		if math.Abs(math.Pow(float64(q), sol.Rank)-float64(order)) > 1e-9*float64(order) {
			t.Fatalf("trial %d: q = %d, %d rows on %d sites: order %v, want %d", trial, q, len(rows), n, math.Pow(float64(q), sol.Rank), order)
		}
		// A constant row cannot take another level than 0, which the closure
		// counts as a contradiction.
		constant := false
		for i, a := range rows {
			constant = constant || want[i] != 0 && a.key() == (op{x: make([]int, n), z: make([]int, n)}).key()
		}
		if !constant && sol.Consistent != consistent {
			t.Fatalf("trial %d: q = %d: consistent %v, want %v", trial, q, sol.Consistent, consistent)
		}
		if !sol.Consistent && prime(q) {
			frustrated++
			if _, consistent := closure(rows, sol.Levels, q, n); !consistent {
				t.Fatalf("trial %d: q = %d: levels %v are impossible", trial, q, sol.Levels)
			}
		}
	}
	if frustrated < 300 {
		t.Errorf("only %d cases were frustrated", frustrated)
	}
}

// TestRoutes solves random systems of the kinds that have a short cut, once
// with it and once by elimination.
func TestRoutes(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	taken := map[string]int{}
	for trial := range 3000 {
		n := 2 + r.IntN(8)
		rows := randomRows(r, 2, n, 1+r.IntN(3), r.IntN(3) > 0)
		s := systemOf(rows, 2, n)
		levels := make([]uint8, len(rows))
		for i := range levels {
			levels[i] = uint8(r.IntN(2))
		}
		budget := math.MaxInt
		for _, p := range s.problems(levels, &budget) {
			plain := *p
			plain.levels = append([]uint8(nil), levels...)
			plain.alive = make([]bool, len(p.rows))
			for i := range plain.alive {
				plain.alive[i] = true
			}
			wantRank, _ := plain.eliminateBits()
			p.levels = append([]uint8(nil), levels...)
			rank, consistent, ok := p.solve()
			if !ok || rank != wantRank || consistent != plain.consistent {
				t.Fatalf("trial %d: rank %v, consistent %v; by elimination %v, %v", trial, rank, consistent, wantRank, plain.consistent)
			}
			modular := *p
			modular.consistent = true
			modular.alive = plain.alive
			modular.levels = append([]uint8(nil), levels...)
			if rank, _ := modular.eliminateModular(); rank != wantRank || modular.consistent != plain.consistent {
				t.Fatalf("trial %d: rank %v, consistent %v over Z_q; by bits %v, %v", trial, rank, modular.consistent, wantRank, plain.consistent)
			}
			switch {
			case !p.mixed && p.rowsAreEdges():
				taken["edge rows"]++
			case p.columnsAreEdges():
				taken["edge columns"]++
			default:
				taken["elimination"]++
			}
		}
	}
	for _, route := range []string{"edge rows", "edge columns", "elimination"} {
		if taken[route] < 100 {
			t.Errorf("%s was taken %d times", route, taken[route])
		}
	}
}

// The product of XX, ZZ and YY is -1 (N. D. Mermin, Phys. Rev. Lett. 65, 3373
// (1990)), so that not all three can be 1; the last stage gives way.
func TestMerminPair(t *testing.T) {
	letters := map[byte][2]int{'X': {1, 0}, 'Z': {0, 1}, 'Y': {1, 1}}
	for _, c := range []struct {
		rows  string
		stage int // rows before it
		want  []uint8
	}{
		{"XZY", 3, []uint8{0, 0, 1}},
		{"YXZ", 3, []uint8{0, 0, 1}},
		{"YXZ", 1, []uint8{0, 0, 1}},
		{"XZ", 2, nil},
	} {
		s := New(2, 2)
		for i := range c.rows {
			if i == c.stage {
				s.NextStage()
			}
			for site := range 2 {
				s.Append(site, letters[c.rows[i]][0], letters[c.rows[i]][1])
			}
			s.EndRow()
		}
		sol, ok := s.Solve(nil, 1000)
		if !ok || sol.Rank != 2 || fmt.Sprint(sol.Levels) != fmt.Sprint(c.want) {
			t.Errorf("%s: %+v, want levels %v", c.rows, sol, c.want)
		}
	}
}

func TestBudget(t *testing.T) {
	s := New(2, 3)
	for range 3 {
		for site := range 3 {
			s.Append(site, 1, 0)
		}
		s.EndRow()
	}
	if _, ok := s.Solve(nil, 3); ok {
		t.Error("elimination took no steps")
	}
	if sol, ok := s.Solve(nil, 100); !ok || sol.Rank != 1 {
		t.Errorf("three equal rows have rank %v, %v", sol.Rank, ok)
	}
}

func TestClash(t *testing.T) {
	s := New(2, 1)
	for _, f := range [][2]int{{1, 0}, {0, 1}, {1, 1}} {
		s.Append(0, f[0], f[1])
		s.EndRow()
	}
	if sol, _ := s.Solve(nil, 1000); !sol.Clash {
		t.Error("X, Y and Z on one site pass for commuting")
	}
}
