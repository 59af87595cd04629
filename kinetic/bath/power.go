package bath

import "math"

// power returns
//
//	w |w|^(p-1) exp(-|w|/w_c) / (1 - exp(-beta w))
//
// for beta > 0: a bath of oscillators whose spectral density grows as w^p
// (A. J. Leggett et al., Rev. Mod. Phys. 59, 1 (1987), eq. 1.5), absorbing
// (w > 0) or emitting. The limit at w = 0 is 1/beta for p = 1 and 0 for p > 1.
// cutoff = 0 stands for no cutoff.
func power(w, beta, p, cutoff float64) float64 {
	if w == 0 {
		if p == 1 {
			return 1 / beta
		}
		return 0
	}
	a := math.Abs(w)
	density := math.Pow(a, p)
	if cutoff > 0 {
		if cut := math.Exp(-a / cutoff); cut > 0 && !math.IsInf(density, 0) {
			density *= cut
		} else {
			density = math.Exp(p*math.Log(a) - a/cutoff)
		}
	}
	x := beta * a
	switch {
	case x < tiny:
		// 1 - exp(-x) = x to the last digit, and x itself may have lost digits.
		return density / a / beta
	case w > 0:
		return density / -math.Expm1(-x)
	case x > large:
		// exp(x) overflows before the rate does.
		return density * math.Exp(-x)
	default:
		return density / math.Expm1(x)
	}
}

const (
	tiny  = 1e-18 // below half an ulp of 1
	large = 700   // exp(700) is finite; 1 - exp(-700) is 1
)
