package observables

import (
	"unsafe"

	"sojourn/kinetic"
)

// Bytes returns the memory that [Record] takes for a unit with the given number
// of lanes, beyond the engine's own, rows included: an estimate on the high
// side, by less than a half. It grows with the logarithm of the number of
// samples. The main parts are, on a lattice with N seats,
//
//	2 N                       patterns, if an observable or a snapshot reads them
//	N/8 to N/2 per family     bit planes, times the lanes if they are bits of words
//	33 levels lanes width     history: width is 8 per number, 1/8 per bit
//	12 shapes 2^bits          census
func Bytes(g *kinetic.Generator, obs []Observable, pairs [][2]int, plan Plan, lanes int) int64 {
	tl := newTimeline(plan.Samples())
	var width, total int64 // width: bytes of history per place and lane
	read := make(map[int]bool)
	seats, cells := int64(g.Addresses()), int64(g.Cells())
	patterns := false
	for _, o := range obs {
		switch o.Kind {
		case Local:
			patterns = true
			limit := int64(localLimit(g, lanes))
			width += trackBytes(g, limit)
			total += limit * int64(unsafe.Sizeof(chosenTerm{})+unsafe.Sizeof(spot{}))
			if !g.Lattice.Periodic() {
				total += 2*seats + limit*int64(unsafe.Sizeof(shown{})*uintptr(len(g.Seats)))
			}
		case Operator:
			n := int64(g.Lines[o.Line].Positions)
			width += trackBytes(g, n)
			total += n
		case Fourier:
			patterns = true
			width += 16
			for _, f := range o.Families {
				read[f] = true
			}
			total += int64(g.Cells()/g.Lattice.Size[0]+g.Lattice.Size[0])*16 + 8192
		default:
			width += 8
		}
	}
	total += int64(tl.places()) * int64(lanes) * width
	if g.Levels > 2 {
		total += int64(len(read)) * cells
	} else {
		total += int64(len(read)) * 2 * planeBytes(g)
	}
	if lanes > 1 && len(read) > 0 {
		total += 16*cells + int64(len(read)*lanes)*planeBytes(g)
	}
	if patterns {
		total += 2 * seats
	}
	segments := int64(PairSegments * len(tl.lags) * len(pairs))
	total += segments * int64(2*unsafe.Sizeof(pairSums{})+unsafe.Sizeof(AutocorrelationRow{}))
	total += int64(MomentSegments*len(obs)) * int64(unsafe.Sizeof(powerSums{})+unsafe.Sizeof(MomentRow{}))
	total += int64(len(TransientTimes(plan.Settle, plan.Span, plan.Step))*len(obs)) * int64(16+unsafe.Sizeof(TransientRow{}))
	if g.Wide == nil {
		total += int64(len(g.Shapes)<<g.Bits) * 12
	} else {
		total += 10*seats + wideRoom*int64(48+8*len(pairs))
	}
	if g.Couplings != nil {
		total += 16 * seats
	}
	if plan.Covariance != "" {
		total += 2 * seats
		if families, err := FamiliesOf(g, plan.Covariance); err == nil {
			total += int64(len(families)) * spatialBytes(g, plan.Limit)
		}
	}
	return total + total/4 + 1<<15 // what slices grow beyond their need, small parts
}

// trackBytes is what one sample of a track takes.
func trackBytes(g *kinetic.Generator, components int64) int64 {
	if g.Levels > 2 {
		return components
	}
	return components/8 + 16
}

func planeBytes(g *kinetic.Generator) int64 {
	lx := g.Lattice.Size[0]
	rows := int64(g.Cells() / lx)
	return rows*int64((lx+63)/64)*8 + rows*int64(unsafe.Sizeof(run{}))
}

// spatialBytes is the memory for the covariance of one family.
func spatialBytes(g *kinetic.Generator, limit int) int64 {
	l := g.Lattice
	if l.Axes == 1 {
		limit = max(limit, chainLimit)
	}
	n := int64(1)
	var planes int64
	for a := range l.Axes {
		reach := longest(l, a)
		n *= int64(2*min(limit, reach) + 1)
		planes += int64(l.Size[a])*32 + int64(min(reach, MaxDistance)+1)*int64(32+unsafe.Sizeof(CovarianceRow{})+4)
		if l.Size[a] > direct {
			planes += 4 * 64 * int64(l.Size[a])
		}
	}
	n = n/2 + 256*int64(l.Axes)
	values := int64(g.Levels)
	each := 8*max(4, values*values) + int64(unsafe.Sizeof(CovarianceRow{})) + 48
	return (4+values)*planeBytes(g) + planes + n*each
}
