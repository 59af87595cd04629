package analysis

// Point is what was recorded of one point of a study, as arrays of raw sums.
// The first index is always the unit (in increasing unit number), the second
// the segment.
type Point struct {
	Beta  float64 // inverse temperature
	Group string  // names and values of all other scanned physical parameters, for trends; "" for none

	Step     float64  // time between samples
	Span     float64  // recorded time of one trajectory
	Lanes    int      // trajectories per unit
	Starts   []string // by unit: start of its trajectories
	Rate     float64  // the largest rate of one bath operator: sets the scale of times
	Size     []int    // cells along each axis
	Open     []bool   // axes with edges
	Sites    int      // sites of the lattice
	LnStates float64  // ln of the number of states in the class of the reference, 0 if unknown
	// EnergyRange is the highest minus the lowest energy that states can have,
	// or an upper bound of it; 0 if unknown.
	EnergyRange float64
	Jumps       float64 // executed jumps of all trajectories while recorded, 0 if unknown
	Seconds     float64 // processor time spent on them, 0 if unknown

	Observables []Observable
	Pairs       []Pair // f <= g; every observable with itself, scalars with each other
	Spatial     []Spatial
	Transients  []Transient
}

// Observable is one recorded observable.
type Observable struct {
	Name    string
	Kind    string // observables.Kind
	Scalar  bool
	Single  bool       // declared a single exponential
	Moments [][]Moment // unit, segment (16)
	Flips   [][]Flips  // unit, level (the same for all units); nil if not recorded
}

// Flips counts how often an observable went from beyond one of +Level and
// -Level to beyond the other.
type Flips struct {
	Level float64
	N     int64
	Time  float64 // recorded, over lanes
}

// Moment is a segment's sums of powers.
type Moment struct {
	N              int64
	S1, S2, S3, S4 float64
}

// Pair is the covariance in time of observables F and G (indices, F <= G).
type Pair struct {
	F, G      int
	Lags      []int64      // in steps, increasing from 0
	Sums      [][][]Lagged // unit, segment (4), lag
	Dirichlet [][]Sum      // unit, segment (4); nil if not recorded
}

// Lagged is the sums over pairs of samples at one lag.
type Lagged struct {
	N           int64
	SF, SG, SFG float64
}

// Sum is a count and a sum.
type Sum struct {
	N int64
	S float64
}

// Spatial is the covariance in space of a family or of local tracked operators.
type Spatial struct {
	Of     string
	Planes []Plane // one per axis in use
	Points []Displacement
}

// Plane holds sums over pairs of plane sums, by distance from 0.
type Plane struct {
	Axis int
	Sums [][]Lagged // unit, distance
}

// Displacement holds sums over pairs of terms at one displacement.
type Displacement struct {
	D    []int
	Sums []Lagged // unit
}

// Transient is the mean of an observable against time since the start.
type Transient struct {
	Observable int
	Times      []float64
	Sums       [][]Moment // unit, time; S1 and S2 only
}
