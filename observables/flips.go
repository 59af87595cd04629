package observables

// flips counts how often the magnetization goes from one well to the other
// (two levels). A lane is in a well once the value is beyond +level or -level,
// and stays in it until the value is beyond the other: the gap between the two
// is the hysteresis. Levels are fixed shares of saturation, since the depth of
// the wells is not known beforehand.
type flips struct {
	channels []int     // of the observables counted
	layout   []int     // their place among the observables
	levels   []float64 // channel, share
	side     []int8    // lane, channel, share: -1, +1, or 0 before the first well
	count    []int64   // channel, share
	samples  int64
	lanes    int
}

// flipShares are the levels, as shares of the number of spins.
var flipShares = [...]float64{0.5, 0.25, 0.125, 0.0625}

func newFlips(r *reading) *flips {
	f := &flips{lanes: r.lanes}
	for o := range r.layout {
		l := &r.layout[o]
		if l.Kind != Magnetization || !l.Scalar() || l.channel < 0 || r.g.Levels != 2 {
			continue
		}
		spins := 0
		for _, family := range l.Families {
			spins += r.g.Families[family].Terms
		}
		f.channels = append(f.channels, l.channel)
		f.layout = append(f.layout, o)
		for _, share := range flipShares {
			f.levels = append(f.levels, share*float64(spins))
		}
	}
	f.side = make([]int8, r.lanes*len(f.levels))
	f.count = make([]int64, len(f.levels))
	return f
}

// add takes in the present state.
func (f *flips) add(r *reading) {
	f.samples++
	side := f.side
	for lane := range f.lanes {
		values := r.values[lane*r.channels:][:r.channels]
		for c, channel := range f.channels {
			v := values[channel]
			for s := range flipShares {
				k := c*len(flipShares) + s
				now := side[k]
				if v > f.levels[k] {
					now = 1
				} else if v < -f.levels[k] {
					now = -1
				}
				if now != side[k] {
					if side[k] != 0 {
						f.count[k]++
					}
					side[k] = now
				}
			}
		}
		side = side[len(f.levels):]
	}
}

// rows lists observables, and in each the levels.
func (f *flips) rows(r *reading, step float64) []FlipRow {
	var out []FlipRow
	for c, o := range f.layout {
		for s := range flipShares {
			k := c*len(flipShares) + s
			out = append(out, FlipRow{
				Observable: r.layout[o].Name, Level: f.levels[k], Flips: f.count[k],
				Time: float64(f.samples) * step * float64(f.lanes),
			})
		}
	}
	return out
}
