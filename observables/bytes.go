package observables

import (
	"unsafe"

	"sojourn/kinetic"
)

// Bytes returns the memory that [Record] takes for a unit with the given number
// of lanes, beyond the engine's own, rows included; an estimate on the high
// side, by less than a half. It grows with the logarithm of the number of samples. The
// main parts are, on a lattice with N seats,
//
//	2 N                          patterns, if an observable or snapshot reads them
//	N/8 to N/2 per family        bit planes
//	33 levels lanes width        history: width is 8 per number, 1/8 per bit
//	12 shapes 2^bits             census
func Bytes(g *kinetic.Generator, obs []Observable, pairs [][2]int, plan Plan, lanes int) int64 {
	samples := plan.Samples()
	tl := newTimeline(samples)
	var width, rows, line int64 // bytes of history per place and lane
	planes := make(map[int]bool)
	patterns := plan.Covariance != ""
	for _, o := range obs {
		switch o.Kind {
		case Local:
			patterns = true
			width += MaxLocal/8 + 8
			rows += MaxLocal * int64(unsafe.Sizeof(chosenTerm{})+unsafe.Sizeof(spot{}))
			if !g.Lattice.Periodic() {
				rows += MaxLocal * int64(unsafe.Sizeof(shown{})) * int64(len(g.Seats))
			}
		case Operator:
			n := int64(g.Lines[o.Line].Positions)
			width += n/8 + 8
			line = max(line, n)
		case Fourier:
			patterns = true
			width += 16
			for _, f := range o.Families {
				planes[f] = true
			}
			rows += int64(g.Cells()/g.Lattice.Size[0]+g.Lattice.Size[0])*16 + 4096
		default:
			width += 8
		}
	}
	plane := planeBytes(g)
	total := int64(tl.places())*int64(lanes)*width + rows + line
	total += 2 * plane * int64(len(planes))
	segments := int64(PairSegments * len(tl.lags) * len(pairs))
	total += segments * int64(2*unsafe.Sizeof(pairSums{})+unsafe.Sizeof(AutocorrelationRow{}))
	total += int64(MomentSegments*len(obs)) * int64(unsafe.Sizeof(powerSums{})+unsafe.Sizeof(MomentRow{}))
	total += int64(len(TransientTimes(plan.Settle, plan.Span, plan.Step))*len(obs)) * int64(16+unsafe.Sizeof(TransientRow{}))
	total += int64(len(g.Shapes)<<g.Bits) * 12
	if patterns {
		total += 2 * int64(g.Addresses())
	}
	if plan.Covariance != "" {
		if families, err := FamiliesOf(g, plan.Covariance); err == nil {
			total += int64(len(families)) * spatialBytes(g, plan.Limit)
		}
	}
	return total + total/4 + 1<<15 // what slices grow beyond their need, small parts
}

func planeBytes(g *kinetic.Generator) int64 {
	lx := g.Lattice.Size[0]
	rows := int64(g.Cells() / lx)
	return rows*int64((lx+63)/64)*8 + rows*int64(unsafe.Sizeof(run{}))
}

// spatialBytes is the memory for the covariance of one family.
func spatialBytes(g *kinetic.Generator, limit int) int64 {
	if g.Lattice.Axes == 1 {
		limit = max(limit, chainLimit)
	}
	n := int64(1)
	var planes int64
	for a := range g.Lattice.Axes {
		reach := longest(g.Lattice, a)
		n *= int64(2*min(limit, reach) + 1)
		planes += int64(g.Lattice.Size[a])*49 + int64(min(reach, MaxDistance)+1)*(32+int64(unsafe.Sizeof(CovarianceRow{}))+4)
		if g.Lattice.Size[a] > direct {
			planes += 4 * 64 * int64(g.Lattice.Size[a])
		}
	}
	n = n/2 + 256*int64(g.Lattice.Axes)
	return 4*planeBytes(g) + planes + n*int64(unsafe.Sizeof(pairSumI{})+unsafe.Sizeof(CovarianceRow{})+48)
}
