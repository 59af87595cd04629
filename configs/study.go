package configs

import (
	"sojourn/kinetic"
	"sojourn/kinetic/lattice"
)

// Study is a decoded and validated study file with every default filled in.
type Study struct {
	Name   string // file name without .toml, or the bundled name
	Path   string // as given; "" for a bundled study
	Title  string
	Source []byte // the file as read
	// Scanned lists the dotted names of all scanned parameters, in order of
	// appearance ("beta" and the other short names are given in full:
	// "bath.beta", "lattice.size").
	Scanned []string
	Points  []Point // in order of appearance
	// Defaults lists every default that was filled in, dotted name and value,
	// for plan.
	Defaults []Setting
	// Notes are things that are allowed but worth a word, with their place.
	Notes []Fault
}

// Setting is one parameter and its value, printed as in a study file.
type Setting struct {
	Name    string
	Value   string
	Numbers []float64 // of a scanned parameter: its value; one per axis for lattice.size
}

// Point is one combination of the scanned parameters: everything that its
// trajectories depend on.
type Point struct {
	Scan        []Setting // value of each of Study.Scanned
	Model       string
	Parameters  []Setting    // of a built-in model, defaults filled in, and of disorder
	MaxRate     float64      // the largest rate of one bath operator; see nominal for gaussian couplings
	SizeAt      Fault        // where its lattice.size is written; without a message
	Spec        kinetic.Spec // with one coupling for all terms of a family: see Draw
	Disorder    []Disorder   // how couplings vary from term to term; nil if they do not
	Sample      int          // which draw of them
	Trajectory  Trajectory
	Observables []Observable
	Pairs       [][2]int // pairs of Observables to record, f <= g
	Covariance  *Covariance

	// Stream is the digest that feeds the random streams: Hamiltonian without
	// names, bath, size, boundary, start, seed.
	Stream [32]byte
	// Key identifies the point: Stream with engine, times, lags, observables,
	// covariance and stream revision; 16 hexadecimal digits.
	Key string
}

// Trajectory says how many units are run, from where, and for how long.
type Trajectory struct {
	Count  int
	Start  string // reference, random, up, down, both
	Settle float64
	Span   float64
	Step   float64
	Seed   int64
	Engine string // as asked
	// EngineName is the engine that runs the point: one of kinetic.EngineNames.
	EngineName string
}

// Observable is a requested observable, not yet bound to a generator.
type Observable struct {
	Name       string
	Kind       string // observables.Kind
	Family     string // terms, local, fourier: a family, a group of families, or a local tracked operator
	Tracked    string // operator
	Wavevector lattice.Offset
	Single     bool // declared to decay as a single exponential
}

// Covariance is the requested spatial covariance.
type Covariance struct {
	Of    string // a family or a local tracked operator
	Every float64
	Limit int // displacements up to this many cells along each axis
}
