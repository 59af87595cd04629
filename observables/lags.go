package observables

// The lags: every integer up to dense, then perOctave in each octave, thinned
// so that a lag in octave j (dense<<j, 2*dense<<j] is a multiple of 1<<j.
const (
	dense     = 8
	perOctave = 8
)

// Lags returns the lags in steps at which pairs are recorded in a series of
// the given number of samples: 0 to 8 by 1, then 8 per octave, up to a quarter
// of the samples (at least lag 0, if there is a sample). They are distinct
// integers (8+j)*2^k, j = 1..8.
func Lags(samples int64) []int64 {
	if samples < 1 {
		return nil
	}
	return upTo(samples / 4)
}

// TransientTimes returns the times since the start, in steps, at which the
// observables are read for the decay from a prepared start: on the grid of
// [Lags], up to settle + span.
func TransientTimes(settle, span, step float64) []int64 {
	return upTo(int64((settle + span) / step * (1 + 1e-12)))
}

// upTo returns the grid 0..8, (8+j)*2^k up to the largest value.
func upTo(largest int64) []int64 {
	var grid []int64
	for t := int64(0); t <= dense && t <= largest; t++ {
		grid = append(grid, t)
	}
	for unit := int64(1); unit*(dense+1) <= largest; unit *= 2 {
		for j := int64(1); j <= perOctave; j++ {
			if t := unit * (dense + j); t <= largest {
				grid = append(grid, t)
			}
		}
	}
	return grid
}
