package analysis

import (
	"fmt"
	"math"
	"sort"

	"gonum.org/v1/gonum/stat/distuv"
)

// significance is the family-wise level of the tests of stationarity.
const significance = 0.05

// stationarity makes the tests of one observable: whether its mean, and its
// mean square about the grand mean, drift along the span, and whether they
// differ between starts. Units are the statistical units.
func stationarity(p *Point, o int) []Test {
	var mean Moment
	for _, segments := range p.Observables[o].Moments {
		for _, m := range segments {
			mean.add(m)
		}
	}
	if mean.N == 0 {
		return nil
	}
	center := mean.S1 / float64(mean.N)
	name := p.Observables[o].Name
	first := func(m Moment) float64 { return m.S1 / float64(m.N) }
	second := func(m Moment) float64 {
		return (m.S2-2*center*m.S1)/float64(m.N) + center*center
	}
	tests := []Test{
		driftTest(p, o, name, first), driftTest(p, o, name+" (variance)", second),
	}
	if len(startGroups(p)) > 1 {
		tests = append(tests, startTest(p, o, name, first), startTest(p, o, name+" (variance)", second))
	}
	return tests
}

// driftTest fits a straight line to the segments of each unit and compares the
// mean slope over units with its standard error: Student's t with U-1 degrees
// of freedom.
func driftTest(p *Point, o int, name string, of func(Moment) float64) Test {
	t := Test{Kind: "drift", Observable: name}
	var slopes []float64
	for _, segments := range p.Observables[o].Moments {
		var n, sx, sy, sxx, sxy float64
		for s, m := range segments {
			if m.N == 0 {
				continue
			}
			x, y := float64(s), of(m)
			n++
			sx += x
			sy += y
			sxx += x * x
			sxy += x * y
		}
		if d := n*sxx - sx*sx; d > 0 {
			slopes = append(slopes, (n*sxy-sx*sy)/d)
		}
	}
	if len(slopes) < 3 {
		t.Reason = fmt.Sprintf("%d units with more than one segment, at least 3 are needed", len(slopes))
		return t
	}
	mean, variance := meanVariance(slopes)
	return t.student(mean, math.Sqrt(variance/float64(len(slopes))), float64(len(slopes)-1))
}

// startGroups lists the distinct starts in order of appearance.
func startGroups(p *Point) []string {
	var starts []string
	for _, s := range p.Starts {
		found := false
		for _, t := range starts {
			found = found || s == t
		}
		if !found {
			starts = append(starts, s)
		}
	}
	return starts
}

// startTest compares the unit means of the first two starts (B. L. Welch,
// Biometrika 34, 28 (1947); degrees of freedom after Satterthwaite).
func startTest(p *Point, o int, name string, of func(Moment) float64) Test {
	t := Test{Kind: "starts", Observable: name}
	starts := startGroups(p)
	var means [2][]float64
	for u, segments := range p.Observables[o].Moments {
		var m Moment
		for _, v := range segments {
			m.add(v)
		}
		for g := range 2 {
			if p.Starts[u] == starts[g] && m.N > 0 {
				means[g] = append(means[g], of(m))
			}
		}
	}
	a, b := float64(len(means[0])), float64(len(means[1]))
	if a < 2 || b < 2 {
		t.Reason = fmt.Sprintf("%.0f and %.0f units, at least 2 of each start are needed", a, b)
		return t
	}
	ma, va := meanVariance(means[0])
	mb, vb := meanVariance(means[1])
	va, vb = va/a, vb/b
	dof := (va + vb) * (va + vb) / (va*va/(a-1) + vb*vb/(b-1))
	return t.student(ma-mb, math.Sqrt(va+vb), dof)
}

// student fills in a two-sided t test of difference against its standard error.
func (t Test) student(difference, se, dof float64) Test {
	switch {
	case se > 0:
		t.Statistic = difference / se
	case difference == 0: // nothing varies, nothing differs
		t.OK, t.P, t.Adjusted, t.Dof = true, 1, 1, 1
		return t
	default: // every unit says exactly the same
		t.Statistic, dof = math.Copysign(math.MaxFloat64, difference), 1
		t.OK, t.P, t.Adjusted, t.Dof = true, 0, 0, dof
		return t
	}
	t.OK, t.Dof = true, dof
	t.P = 2 * distuv.StudentsT{Mu: 0, Sigma: 1, Nu: dof}.Survival(math.Abs(t.Statistic))
	t.Adjusted = t.P
	return t
}

func meanVariance(x []float64) (mean, variance float64) {
	for _, v := range x {
		mean += v
	}
	mean /= float64(len(x))
	for _, v := range x {
		variance += (v - mean) * (v - mean)
	}
	return mean, variance / float64(len(x)-1)
}

// holm corrects the P of tests that belong together for their number (S. Holm,
// Scand. J. Stat. 6, 65 (1979)): ordered by P, the i-th of m (from 0) becomes
// the largest of (m-j) P_j over j <= i. It sets Adjusted and Rejected.
func holm(tests []*Test) {
	order := make([]*Test, 0, len(tests))
	for _, t := range tests {
		if t.OK {
			order = append(order, t)
		}
	}
	sort.SliceStable(order, func(i, j int) bool { return order[i].P < order[j].P })
	adjusted := 0.0
	for i, t := range order {
		adjusted = math.Max(adjusted, math.Min(1, float64(len(order)-i)*t.P))
		t.Adjusted = adjusted
		t.Rejected = adjusted < significance
	}
}

// conclude corrects the tests of results for their number, kind by kind, and
// sets Equilibrated and the warnings that follow.
func conclude(results []*Result) {
	for _, kind := range []string{"drift", "starts"} {
		var tests []*Test
		for _, r := range results {
			for i := range r.Tests {
				if r.Tests[i].Kind == kind {
					tests = append(tests, &r.Tests[i])
				}
			}
		}
		holm(tests)
	}
	for _, r := range results {
		r.Equilibrated = true
		kept := r.Warnings[:0:0]
		for _, w := range r.Warnings {
			if w.Code != codeDrift && w.Code != codeStarts && w.Code != codeStartsUnknown {
				kept = append(kept, w)
			}
		}
		unknown := ""
		for _, t := range r.Tests {
			switch {
			case t.Kind == "starts" && !t.OK:
				unknown = t.Reason
			case t.Kind == "starts" && t.Rejected:
				r.Equilibrated = false
				kept = append(kept, warn(codeStarts, "%s differs between starts: t = %.1f, p = %.2g after correction for the number of comparisons; not equilibrated, settle longer",
					t.Observable, t.Statistic, t.Adjusted))
			case t.Kind == "drift" && t.Rejected:
				r.Equilibrated = false
				kept = append(kept, warn(codeDrift, "%s drifts along the span: t = %.1f, p = %.2g after correction for the number of comparisons; not equilibrated, settle longer",
					t.Observable, t.Statistic, t.Adjusted))
			}
		}
		if unknown != "" {
			kept = append(kept, warn(codeStartsUnknown, "starts were not compared: %s", unknown))
		}
		r.Warnings = kept
	}
}
