package analysis

import (
	"fmt"
	"math"
)

// mixingDistance is the distance in total variation that mixing times refer to.
const mixingDistance = 0.25

// mixing gives bounds on the time after which the distance in total variation
// from equilibrium is at most eps = 1/4 from every start,
//
//	tau ln(1/(2 eps))  <=  t_mix  <=  tau ln(1/(eps pi_min)),   tau = 1/gap
//
// (D. A. Levin, Y. Peres, E. L. Wilmer, Markov Chains and Mixing Times,
// theorems 12.5 and 12.4, in continuous time). A lower bound of tau keeps the
// first true. The second holds only if tau is 1/gap, which data cannot show.
func mixing(p *Point, r *Result) Mixing {
	m := Mixing{Distance: mixingDistance}
	tau := gapBound(r)
	if !tau.OK {
		m.Lower = noBound(tau.Code, tau.Reason)
		m.Volume = missing(codeNoData, "there is no slow mode")
		return m
	}
	m.Lower = Bound{Value: tau.Value * math.Log(1/(2*mixingDistance)), Confidence: tau.Confidence, OK: true}
	switch {
	case !r.SlowMode.Tau.OK:
		m.Volume = missing(r.SlowMode.Tau.Code, r.SlowMode.Tau.Reason)
	case p.LnStates <= 0 || p.EnergyRange <= 0:
		m.Volume = missing(codeNoData, "the number of states or the range of energies is not known")
	default:
		m.Volume = scaled(r.SlowMode.Tau, math.Log(1/mixingDistance)+p.LnStates+p.Beta*p.EnergyRange)
	}
	m.Text = fmt.Sprintf("mixing to distance %g takes at least %.3g (95 %%)", mixingDistance, m.Lower.Value)
	if m.Volume.OK {
		m.Text += fmt.Sprintf("; at most %.3g, but only if tau of the slow mode is 1/gap, which no finite set of observables certifies", m.Volume.Value)
	}
	return m
}

// gapBound is the lower bound on 1/gap of the slow mode, or else the largest of
// single observables.
func gapBound(r *Result) Bound {
	best := r.SlowMode.Bound
	if best.OK {
		return best
	}
	for i := range r.Observables {
		if b := r.Observables[i].SlowestBound; b.OK && (!best.OK || b.Value > best.Value) {
			best = b
		}
	}
	return best
}
