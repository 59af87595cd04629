package sharing

import (
	"sync"
	"time"
)

// noticeEvery bounds how often progress is told for jumps alone.
const noticeEvery = 100 * time.Millisecond

// meter adds up the progress of a Job.
type meter struct {
	tell  func(Progress) // may be nil
	units []int          // by part: units wanted
	point []int          // by part: its point
	costs []Cost         // by point

	mu       sync.Mutex
	sum      Progress
	finished []int     // by part: units known to be finished
	done     float64   // estimated work in them
	total    float64   // estimated work in all
	mean     []average // by point: jumps of finished units
	slots    []*slot
	told     time.Time
}

type average struct {
	sum float64
	n   int
}

// slot is the unit that one worker runs.
type slot struct {
	running bool
	part    int
	jumps   uint64
}

// newMeter returns a meter for the parts of a share.
func newMeter(points []Point, parts []Part, tell func(Progress)) *meter {
	m := &meter{
		tell:     tell,
		finished: make([]int, len(parts)),
		mean:     make([]average, len(points)),
	}
	for _, p := range points {
		m.costs = append(m.costs, p.Cost)
	}
	for i, p := range parts {
		m.units = append(m.units, p.Units)
		m.point = append(m.point, p.Point)
		m.sum.Units += p.Units
		m.total += float64(p.Units) * m.weight(i)
	}
	m.sum.Parts = len(parts)
	return m
}

// weight is the estimated work in one unit of a part.
func (m *meter) weight(part int) float64 {
	return max(m.costs[m.point[part]].seconds(), 1e-9)
}

// found sets how many units of a part are finished.
func (m *meter) found(part, units int) {
	m.mu.Lock()
	defer m.mu.Unlock()
	m.set(part, units)
}

func (m *meter) set(part, units int) {
	change := min(units, m.units[part]) - m.finished[part]
	m.finished[part] += change
	m.sum.UnitsDone += change
	m.done += float64(change) * m.weight(part)
}

// partDone counts a part as finished, by this process or another.
func (m *meter) partDone(here bool) {
	m.mu.Lock()
	defer m.mu.Unlock()
	m.sum.PartsDone++
	if here {
		m.sum.PartsHere++
	}
}

// newSlot returns the slot of a worker.
func (m *meter) newSlot() *slot {
	m.mu.Lock()
	defer m.mu.Unlock()
	s := &slot{}
	m.slots = append(m.slots, s)
	return s
}

// began notes that a worker runs a unit of a part.
func (m *meter) began(s *slot, part int) {
	m.mu.Lock()
	defer m.mu.Unlock()
	*s = slot{running: true, part: part}
}

// jumps notes the jumps executed so far in a worker's unit.
func (m *meter) jumps(s *slot, jumps uint64) {
	m.mu.Lock()
	defer m.mu.Unlock()
	s.jumps = jumps
	m.notify(false)
}

// ended notes that a worker's unit came to its end.
func (m *meter) ended(s *slot, finished bool, seconds float64) {
	m.mu.Lock()
	defer m.mu.Unlock()
	s.running = false
	m.sum.Jumps += s.jumps
	if !finished {
		return
	}
	m.set(s.part, m.finished[s.part]+1)
	m.sum.UnitsHere++
	m.sum.Seconds += seconds
	a := &m.mean[m.point[s.part]]
	a.sum += float64(s.jumps)
	a.n++
}

// progress returns the present state.
func (m *meter) progress() Progress {
	m.mu.Lock()
	defer m.mu.Unlock()
	return m.present()
}

func (m *meter) present() Progress {
	p := m.sum
	done := m.done
	for _, s := range m.slots {
		if !s.running {
			continue
		}
		p.Jumps += s.jumps
		// How far a unit is follows from its jumps and those of earlier ones;
		// before there are any, from their bound.
		expected := m.costs[m.point[s.part]].jumps()
		if a := m.mean[m.point[s.part]]; a.n > 0 {
			expected = a.sum / float64(a.n)
		}
		if expected > 0 {
			done += m.weight(s.part) * min(float64(s.jumps)/expected, 0.99)
		}
	}
	p.Done = 1
	if m.total > 0 {
		p.Done = min(max(done/m.total, 0), 1)
	}
	return p
}

// now tells the present state.
func (m *meter) now() {
	m.mu.Lock()
	defer m.mu.Unlock()
	m.notify(true)
}

// notify tells the present state, unless it was told a moment ago and need not
// be. It is called with mu held, so that calls do not overlap.
func (m *meter) notify(must bool) {
	if m.tell == nil {
		return
	}
	if now := time.Now(); must || now.Sub(m.told) >= noticeEvery {
		m.told = now
		m.tell(m.present())
	}
}
