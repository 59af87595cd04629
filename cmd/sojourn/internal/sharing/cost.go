package sharing

// Cost estimates the work in one unit, from the study alone.
type Cost struct {
	Sites   float64 // sites of the lattice
	Rate    float64 // largest total rate of one site
	Time    float64 // settle + span
	Samples float64 // times at which the whole lattice is read
	Lanes   float64 // trajectories in the unit; 0 counts as 1
}

const (
	// A jump takes 30 to 50 ns, and reading one site 1 to 30 ns, on the
	// machines this was written on. Parts need no more than the order.
	secondsPerJump = 40e-9
	secondsPerRead = 2e-9

	partSeconds = 120 // of one core
	maxExtent   = 64  // keeps the tables of a part small enough to hold in memory
)

// jumps bounds the number of jumps in the unit from above: every site moves at
// the largest rate.
func (c Cost) jumps() float64 {
	return c.Sites * c.Rate * c.Time * max(c.Lanes, 1)
}

// seconds estimates the time one core takes.
func (c Cost) seconds() float64 {
	return secondsPerJump*c.jumps() + secondsPerRead*c.Sites*c.Samples*max(c.Lanes, 1)
}

// Extent returns how many units make a part that takes minutes: a power of two
// from 1 to 64. It is a pure function of the point, and never of count.
func Extent(c Cost) int {
	extent := maxExtent
	for extent > 1 && float64(extent)*c.seconds() > partSeconds {
		extent /= 2
	}
	return extent
}
