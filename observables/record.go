package observables

import (
	"context"
	"errors"

	"sojourn/kinetic"
)

// Label says which unit of a point is recorded and where it comes from.
type Label struct {
	Unit   int    // its number, from 0
	Start  string // the state in which its lanes began
	Engine string // name of the engine
}

// Record drives a fresh engine (at time 0) through one unit and returns its
// sums. obs come from [Bind] on the same generator; pairs are indices into obs
// with f <= g: an observable with itself, or two scalars.
//
// progress, which may be nil, is called with the number of jumps so far after
// every piece of work of at most about a million attempts; it should only note
// the number. When ctx is cancelled Record returns ctx.Err() after at most one
// such piece, and the unit is lost. Record panics if the engine is not at time
// 0. Rows depend on the trajectory alone.
func Record(ctx context.Context, e kinetic.Engine, g *kinetic.Generator, obs []Observable,
	pairs [][2]int, plan Plan, label Label, progress func(jumps uint64)) (Unit, error) {
	return Unit{}, errors.New("observables: not recorded yet")
}

// Bytes returns the memory that [Record] takes for a unit with the given
// number of lanes, to within a few kilobytes, beyond the engine's own. It does
// not grow with the number of samples except through the number of lags.
func Bytes(g *kinetic.Generator, obs []Observable, pairs [][2]int, plan Plan, lanes int) int64 {
	return 0
}
