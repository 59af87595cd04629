package bath

import "math"

// symmetric returns exp(x/2), x = beta w: both directions of a jump share the
// factor sqrt(G(w) G(-w)) = 1. It grows without bound.
func symmetric(x float64) float64 { return math.Exp(x / 2) }
