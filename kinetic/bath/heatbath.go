package bath

import "math"

// heatBath returns 1/(1 + exp(-x)), x = beta w: R. J. Glauber, J. Math. Phys.
// 4, 294 (1963). For x < 0 it is written so that it falls to 0 like exp(x)
// where exp(-x) overflows.
func heatBath(x float64) float64 {
	if x < 0 {
		e := math.Exp(x)
		return e / (1 + e)
	}
	return 1 / (1 + math.Exp(-x))
}
