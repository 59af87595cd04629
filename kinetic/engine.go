package kinetic

// Engine draws exact trajectories of one generator in continuous time. Its
// methods are called per sample, never per jump. An Engine is used by one
// goroutine.
type Engine interface {
	// Advance runs every lane to time t, which must not decrease. The law, and
	// the trajectory itself, do not depend on how a span is cut into calls.
	Advance(t float64)
	Time() float64
	Lanes() int
	// Jumps is the number of executed jumps, all lanes together.
	Jumps() uint64
	// Sums appends for each lane the sum of eigenvalues of every family, then
	// of every line; for q > 2, instead of each sum, the number of terms at each
	// level.
	Sums(dst []int64) []int64
	// Energy is the total energy of a lane.
	Energy(lane int) float64
	// Census adds to dst[shape<<Bits | pattern] the number of seats, over all
	// lanes; dst has len(Shapes)<<Bits entries.
	Census(dst []int64)
	// Terms writes the levels of a family's terms by cell (Absent where there
	// is none), or for family = len(Families)+l the levels of line l by
	// position.
	Terms(family, lane int, dst []uint8)
	// Patterns writes the pattern of every address.
	Patterns(lane int, dst []uint16)
	// Save appends the whole state; Restore continues from it bit for bit.
	Save(dst []byte) []byte
	Restore(src []byte) error
	// Audit recomputes everything from the state and says what disagrees.
	Audit() error
}

// Absent marks a term that the lattice does not have.
const Absent = 0xff

// Start names the state in which a trajectory begins.
type Start string

// The starts. Reference is the state all levels are counted from; Random draws
// every configuration with equal weight (infinite temperature); Up and Down
// are reference states with every spin +1 or -1.
const (
	StartReference Start = "reference"
	StartRandom    Start = "random"
	StartUp        Start = "up"
	StartDown      Start = "down"
)
