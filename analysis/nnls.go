package analysis

import "math"

// nnls minimises |y - sum_j x_j a_j|^2 over x >= 0 by the active-set method (C.
// L. Lawson, R. J. Hanson, Solving Least Squares Problems, chapter 23 (1974)).
// The columns a_j are few entries long; there may be many of them. passive
// carries the indices of the positive x between calls that are alike; scratch
// is kept in the solver.
type nnls struct {
	passive  []int
	x        []float64 // by passive index
	residual []float64
	gram     [][]float64
	rhs      []float64
	solution []float64
}

func newNNLS(rows int) *nnls {
	return &nnls{
		residual: make([]float64, rows),
		gram:     square(rows + 1),
		rhs:      make([]float64, rows+1),
		solution: make([]float64, rows+1),
	}
}

// solve returns the least squared residual over the columns from first on.
func (s *nnls) solve(columns [][]float64, first int, y []float64) float64 {
	rows := len(y)
	s.passive, s.x = s.passive[:0], s.x[:0]
	copy(s.residual, y)
	scale := dot(y, y)
	for range 20 * rows {
		best, steepest := -1, 1e-10*scale
		for j := first; j < len(columns); j++ {
			g := dot(columns[j], s.residual)
			if g <= 0 {
				continue
			}
			if g = g * g / dot(columns[j], columns[j]); g > steepest && !s.has(j) {
				best, steepest = j, g
			}
		}
		if best < 0 || len(s.passive) >= rows {
			break
		}
		s.passive = append(s.passive, best)
		s.x = append(s.x, 0)
		if !s.descend(columns, y) {
			break
		}
		s.update(columns, y)
	}
	return dot(s.residual, s.residual)
}

func (s *nnls) has(j int) bool {
	for _, p := range s.passive {
		if p == j {
			return true
		}
	}
	return false
}

// descend moves to the least-squares solution of the passive columns, dropping
// those that would turn negative on the way. It returns false if the columns
// are dependent.
func (s *nnls) descend(columns [][]float64, y []float64) bool {
	for {
		n := len(s.passive)
		if !s.normal(columns, y) {
			s.passive, s.x = s.passive[:n-1], s.x[:n-1]
			return false
		}
		alpha, worst := 1.0, -1
		for i := range n {
			if s.solution[i] <= 0 {
				if a := s.x[i] / (s.x[i] - s.solution[i]); a < alpha || worst < 0 {
					alpha, worst = a, i
				}
			}
		}
		if worst < 0 {
			copy(s.x, s.solution[:n])
			return true
		}
		for i := range n {
			s.x[i] += alpha * (s.solution[i] - s.x[i])
		}
		s.passive = append(s.passive[:worst], s.passive[worst+1:]...)
		s.x = append(s.x[:worst], s.x[worst+1:]...)
		if len(s.passive) == 0 {
			return true
		}
	}
}

// normal solves the normal equations of the passive columns into solution.
func (s *nnls) normal(columns [][]float64, y []float64) bool {
	n := len(s.passive)
	for i, p := range s.passive {
		for j := range i + 1 {
			s.gram[i][j] = dot(columns[p], columns[s.passive[j]])
		}
		s.solution[i] = dot(columns[p], y)
	}
	g := s.gram
	for j := range n { // Cholesky in place
		d := g[j][j]
		diagonal := d
		for k := range j {
			d -= g[j][k] * g[j][k]
		}
		if d <= 1e-13*diagonal {
			return false
		}
		g[j][j] = math.Sqrt(d)
		for i := j + 1; i < n; i++ {
			v := g[i][j]
			for k := range j {
				v -= g[i][k] * g[j][k]
			}
			g[i][j] = v / g[j][j]
		}
	}
	x := s.solution[:n]
	solveLower(g, x)
	solveUpper(g, x)
	return true
}

func (s *nnls) update(columns [][]float64, y []float64) {
	copy(s.residual, y)
	for i, p := range s.passive {
		for r := range s.residual {
			s.residual[r] -= s.x[i] * columns[p][r]
		}
	}
}
