package observables

// Unit is everything recorded of one unit (a trajectory, or a bundle of lanes),
// as raw sums that pool by addition. Rows are in a fixed order, so that the
// same unit always gives the same bytes.
type Unit struct {
	Unit            int
	Trajectories    []TrajectoryRow
	Moments         []MomentRow
	Autocorrelation []AutocorrelationRow
	Dirichlet       []DirichletRow
	Covariance      []CovarianceRow
	Transients      []TransientRow
	Flips           []FlipRow
}

// TrajectoryRow describes one lane of a unit.
type TrajectoryRow struct {
	Lane    int32
	Start   string
	Engine  string
	Samples int64 // samples taken after settling
	Jumps   int64 // executed jumps since the start
}

// MomentRow holds sums over the samples (and lanes) of one segment, of powers
// of the observable. For an observable with several components Sum1..Sum4 sum
// over components and divide by its norm: Sum2/Count is the mean square.
type MomentRow struct {
	Segment                int32 // 0..15
	Observable             string
	Count                  int64
	Sum1, Sum2, Sum3, Sum4 float64
}

// AutocorrelationRow holds sums over pairs of samples one lag apart whose first
// time lies in the segment; Lag is in steps. SumF and SumG sum the first and
// the second member, SumFG their products (components: as in MomentRow, with
// the mean over components in SumF and SumG, for Fourier amplitudes the sum of
// real and imaginary part). For F != G both time orders are counted: SumF then
// sums F, and SumG sums G, at both times.
type AutocorrelationRow struct {
	Segment           int32 // 0..3
	F, G              string
	Lag               int64
	Pairs             int64
	SumF, SumG, SumFG float64
}

// DirichletRow sums the Dirichlet form
//
//	E(f,g) = 1/2 sum_a r_a (Delta_a f)(Delta_a g)
//
// over the times at which it was taken, and over lanes. Tracked operators with an
// extent have none in systems of more than two levels.
type DirichletRow struct {
	Segment int32 // 0..3
	F, G    string
	Count   int64
	Sum     float64
}

// CovarianceRow sums products of two terms of a family, or of two plane sums,
// at one displacement. Axis is -1 for a full displacement; for plane sums it is
// the axis along which planes are apart by Displacement[0] cells. Pairs counts
// pairs of terms (or planes) over all snapshots.
type CovarianceRow struct {
	Of                string
	Axis              int32
	Displacement      []int32
	Snapshots         int64
	Pairs             int64
	SumF, SumG, SumFG float64
}

// TransientRow sums an observable over lanes at one time since the start.
type TransientRow struct {
	Observable string
	Time       float64
	Count      int64
	Sum1, Sum2 float64
}

// FlipRow counts, over lanes, how often the magnetization went from beyond one of
// +Level and -Level to beyond the other, as seen at the samples, in the time
// recorded.
type FlipRow struct {
	Observable string
	Level      float64
	Flips      int64
	Time       float64
}

// Segments of a recorded span.
const (
	MomentSegments = 16
	PairSegments   = 4
)
