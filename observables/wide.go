package observables

import "sojourn/kinetic"

// wideForms sums Dirichlet forms over the seats of a generator whose patterns have
// no tables, and so no census. What a shape and pattern contribute is remembered
// as long as there is room.
type wideForms struct {
	patterns []uint64
	shapes   []uint16 // by address
	index    map[widePattern]int32
	weights  []float64 // place, pair
}

type widePattern struct {
	shape   uint16
	pattern uint64
}

// wideRoom is how many patterns are remembered.
const wideRoom = 1 << 14

func newWideForms(g *kinetic.Generator) *wideForms {
	w := &wideForms{
		patterns: make([]uint64, g.Addresses()), shapes: make([]uint16, g.Addresses()),
		index: make(map[widePattern]int32),
	}
	for a := range w.shapes {
		w.shapes[a] = g.Places[g.PlaceOf(a)].Shape
	}
	return w
}

// addWide sums over the seats of one lane.
func (d *dirichlet) addWide(sums []float64, lane int) {
	w := d.wide
	d.e.(kinetic.WidePatterns).WidePatterns(lane, w.patterns)
	n := len(d.pairs)
	for a, shape := range w.shapes {
		key := widePattern{shape, w.patterns[a]}
		at, known := w.index[key]
		switch {
		case known:
		case len(w.index) < wideRoom:
			at = int32(len(w.weights) / n)
			w.weights = append(w.weights, d.weighWide(key)...)
			w.index[key] = at
		default:
			for p, x := range d.weighWide(key) {
				sums[p] += x
			}
			continue
		}
		for p, x := range w.weights[int(at)*n:][:n] {
			sums[p] += x
		}
	}
}

// weighWide is weigh for a pattern without tables.
func (d *dirichlet) weighWide(key widePattern) []float64 {
	out := make([]float64, len(d.pairs))
	steps := make([]float64, len(d.r.layout))
	for m := range d.g.Shapes[key.shape].Change {
		if rate := d.g.Wide.Rate(int(key.shape), m, key.pattern); rate > 0 {
			d.jumps.of(steps, int(key.shape), m, int(key.pattern))
			d.accumulate(out, rate, steps)
		}
	}
	return out
}
