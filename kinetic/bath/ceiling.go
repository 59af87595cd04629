package bath

import "math"

// margin covers rounding, of a rate and of its bound.
const margin = 1e-12

// Floor returns a number that G(w) is not below for any w from low to high, 0
// if it does not know better. The law must be valid at beta and not a table.
func (l *Law) Floor(low, high, beta float64) float64 {
	if l.Kind == Power && (l.Exponent != 1 || l.Cutoff > 0) {
		return 0
	}
	return l.Float(low, beta) * (1 - margin)
}

// Ceiling returns a number that G(w) does not exceed for any w from low to high,
// close to the largest rate there if the two are. The law must be valid at beta
// and not a table.
func (l *Law) Ceiling(low, high, beta float64) float64 {
	if l.Kind != Power {
		return l.Float(high, beta) * (1 + margin) // these grow with w
	}
	// A product of |w|^(p-1), w/(1 - exp(-beta w)), which grows with w, and the
	// cutoff.
	far, near := math.Max(math.Abs(low), math.Abs(high)), 0.0
	if low > 0 || high < 0 {
		near = math.Min(math.Abs(low), math.Abs(high))
	}
	g := l.Rate * power(high, beta, 1, 0) * math.Pow(far, l.Exponent-1)
	if l.Cutoff > 0 {
		g *= math.Exp(-near / l.Cutoff)
	}
	if g == 0 && far > 0 {
		return 0x1p-1022 // the product underflows before the rate does
	}
	return g * (1 + margin)
}
