package observables

// transients sums each observable, as the mean over its components, at times
// since the start, over lanes.
type transients struct {
	times  []int64 // in steps
	next   int
	lanes  int
	values [][2]float64 // time, observable: sum, and sum of squares
}

func newTransients(times []int64, lanes, observables int) *transients {
	return &transients{times: times, lanes: lanes, values: make([][2]float64, len(times)*observables)}
}

// add takes in the state at the next of the times.
func (t *transients) add(r *reading) {
	n := len(r.layout)
	for o := range n {
		at := &t.values[t.next*n+o]
		for lane := range t.lanes {
			v := r.mean(o, lane)
			at[0] += v
			at[1] += v * v
		}
	}
	t.next++
}

// rows returns the sums by observable and time.
func (t *transients) rows(r *reading, step float64) []TransientRow {
	var out []TransientRow
	n := len(r.layout)
	for o := range n {
		for i, time := range t.times {
			v := t.values[i*n+o]
			out = append(out, TransientRow{
				Observable: r.layout[o].Name, Time: float64(time) * step,
				Count: int64(t.lanes), Sum1: v[0], Sum2: v[1],
			})
		}
	}
	return out
}
