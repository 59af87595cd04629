package bath

import "math"

// metropolis returns min(1, exp(x)), x = beta w: N. Metropolis et al., J. Chem.
// Phys. 21, 1087 (1953).
func metropolis(x float64) float64 {
	if x < 0 {
		return math.Exp(x)
	}
	return 1
}
