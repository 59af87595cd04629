package analysis

import "math"

// chain checks Var/E <= tau_int <= tau_slowest within three standard errors of
// the differences.
func (res *ObservableResult) chain(in *integrated) []Warning {
	const limit = 3
	var w []Warning
	if res.Initial.OK {
		q := in.pool
		diff, ok := resampled(q.blocks, func(b int) (float64, bool) {
			e, ok := q.dirichlet(in.k, b)
			return in.logs[b] - math.Log(in.without[b][0]/e), ok
		})
		d := math.Log(res.Integrated.Value / res.Initial.Value)
		if ok && d < -limit*jackknife(diff) && d < -1e-3 {
			w = append(w, warn(codeChain, "tau_int %.4g lies below tau_initial %.4g by %.1f standard errors: the data do not come from one stationary reversible process",
				res.Integrated.Value, res.Initial.Value, -d/jackknife(diff)))
		}
	}
	if res.SlowestInterval.OK {
		if h := res.SlowestInterval.High; res.Integrated.Value*math.Exp(-limit*res.Integrated.Err/res.Integrated.Value) > h {
			w = append(w, warn(codeWeightFloor, "tau_int %.4g exceeds the upper end %.4g of tau_slowest: a slower mode of little weight, or noise", res.Integrated.Value, h))
		}
	}
	return w
}
