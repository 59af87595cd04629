package analysis

import (
	"fmt"
	"math"
	"strings"
)

// efficiency is the relative error of tau_int by the windowed sum, in units of
// sqrt(2 tau/T) (a pure exponential; smaller for mixtures).
const efficiency = 4.3

// TotalFor returns the total time of all trajectories, in units of the
// relaxation time, that the windowed sum needs for tau_int to the given relative
// precision: 2 (4.3/precision)^2, and at least 160.
func TotalFor(precision float64) float64 {
	return math.Max(totalDoubt, 2*math.Pow(efficiency/precision, 2))
}

// advise says what it takes to know tau_int of each observable to the wanted
// precision, from the error that it has now, or from the size of tau where it
// has none.
func advise(p *Point, states []integrated, results []ObservableResult, opt Options) []Advice {
	var out []Advice
	for o := range results {
		in, r := &states[o], &results[o]
		if in.pool == nil || in.tau <= 0 || in.constant {
			continue
		}
		total := in.pool.time(o, all)
		a := Advice{Observable: r.Name, Quantity: "tau_int", Precision: opt.Precision}
		var how string
		switch {
		case r.Integrated.OK:
			factor := math.Pow(r.Integrated.Err/r.Integrated.Value/opt.Precision, 2)
			a.Total = math.Max(total*factor, totalDoubt*in.tau)
		case r.Integrated.Code == codeShortSpan || r.Integrated.Code == codeShortTotal || r.Integrated.Code == codeFewUnits:
			a.Total = TotalFor(opt.Precision) * in.tau
			how = " or more, tau being longer than it seems from short data"
		default:
			continue
		}
		a.Factor = a.Total / total
		a.TauTotal = a.Total / in.tau
		a.Jumps, a.Seconds = p.Jumps*a.Factor, p.Seconds*a.Factor
		a.Text = adviceText(p, &a, how)
		if p.Span < spanDoubt*in.tau {
			a.Text += fmt.Sprintf("; raise span to at least %.2g", spanDoubt*in.tau)
		}
		out = append(out, a)
	}
	return out
}

func adviceText(p *Point, a *Advice, how string) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s of %s", a.Quantity, a.Observable)
	if len(p.Size) > 0 {
		fmt.Fprintf(&b, " at L = %d, beta = %.6g", p.Size[0], p.Beta)
	}
	if a.Factor <= 1 {
		fmt.Fprintf(&b, " is known to %.2g %%", 100*a.Precision)
		return b.String()
	}
	fmt.Fprintf(&b, " to %.2g %%: total time about %.1g tau%s, %.2g times this run", 100*a.Precision, a.TauTotal, how, a.Factor)
	if a.Jumps > 0 {
		fmt.Fprintf(&b, ", %.1g jumps", a.Jumps)
	}
	if a.Seconds > 0 {
		fmt.Fprintf(&b, ", %s of processor time like this one's", seconds(a.Seconds))
	}
	return b.String()
}

// seconds prints a time roughly.
func seconds(s float64) string {
	switch {
	case s < 90:
		return fmt.Sprintf("%.0f s", math.Max(1, s))
	case s < 90*60:
		return fmt.Sprintf("%.0f minutes", s/60)
	case s < 48*3600:
		return fmt.Sprintf("%.0f hours", s/3600)
	}
	return fmt.Sprintf("%.0f days", s/86400)
}
