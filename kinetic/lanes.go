package kinetic

// LaneEngine is the name of the lane engine.
const LaneEngine = "lanes"

// lanes draws 64 trajectories at once, in the bits of words, by uniformisation
// (A. Jensen, Skand. Aktuarietidskr. 36, 87 (1953)). Attempts of a move on a
// seat come at a rate that no lane's rate exceeds, at times and places shared
// by all lanes; each lane accepts with the ratio of its rate to that of the
// attempts, independently of the others. So the law of each lane is that of one
// trajectory, but lanes that share times and places are not independent of each
// other: what they have together is one sample, and its error comes from
// several bundles of lanes.
//
// Attempts are drawn ahead, with words in which every bit is 1 with one of the
// acceptance probabilities; the number of terms that cost energy is counted bit
// by bit, and chooses the word (see attempts, chance, lanePlan).
type lanes struct {
	plan  *lanePlan
	words []uint64
	next  attempts
	from  lanePosition // of the streams when next was drawn
	done  int          // attempts made of next
	now   float64
	jumps uint64

	sums    []int64 // lane-major, of families and lines
	fresh   bool    // sums belong to the present state
	counter laneCounter
	some    [gathered]uint64
	census  *patternCounter
	sink    uint64

	// Scratch of runAny.
	values  []uint64
	atLeast [maxLaneSlots][maxLaneSlots + 1]uint64
}

// NewLanes returns the lane engine, with 64 trajectories: the given unit of the
// stream that seed identifies. It needs 8 bytes for each term that moves change,
// or for each kind of flip on a site, whichever moves fewer words. A *LaneLimit
// says what it cannot run.
func NewLanes(g *Generator, seed [32]byte, unit int, start Start) (Engine, error) {
	p, err := newLanePlan(g)
	if err != nil {
		return nil, err
	}
	return newLanes(p, seed, unit, start)
}

func newLanes(p *lanePlan, seed [32]byte, unit int, start Start) (*lanes, error) {
	e := &lanes{plan: p, words: make([]uint64, p.layout.size)}
	combos := uint32(0)
	for i := range p.zoned {
		combos = max(combos, p.zoned[i].combos)
	}
	e.values = make([]uint64, combos)
	e.sums = make([]int64, lanesPerWord*len(p.still))
	src := newSource(seed, unit, "lanes start "+string(start))
	if err := e.start(start, &src); err != nil {
		return nil, err
	}
	e.next = newAttempts(p, newSource(seed, unit, "lanes attempts"))
	e.draw(0)
	return e, nil
}

// LaneBytes estimates the memory of one lane engine.
func LaneBytes(g *Generator) (int64, error) {
	p, err := newLanePlan(g)
	if err != nil {
		return 0, err
	}
	return p.bytes(), nil
}

func (p *lanePlan) bytes() int64 {
	ahead := attemptsAhead * 8 * (p.columns + chanceBits + p.hits + 5)
	return 8*int64(p.layout.size) + int64(ahead) + p.g.tableBytes()
}

// draw draws the attempts after time begin.
func (e *lanes) draw(begin float64) {
	e.from = e.next.position()
	e.next.draw(begin)
	e.done = 0
}

// Advance runs all trajectories to time t.
func (e *lanes) Advance(t float64) {
	if t < e.now {
		panic("kinetic: Advance to an earlier time")
	}
	for e.next.end <= t {
		e.run(e.done, attemptsAhead)
		e.draw(e.next.end)
	}
	n := e.next.before(t)
	e.run(e.done, n)
	e.done = n
	e.now = t
}

func (e *lanes) Time() float64 { return e.now }
func (e *lanes) Lanes() int    { return lanesPerWord }
func (e *lanes) Jumps() uint64 { return e.jumps }
