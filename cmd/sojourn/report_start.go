package main

import (
	"fmt"
	"strings"

	"sojourn/analysis"
)

// shownApproaches are the approaches to equilibrium that are printed: those with
// something to say, and from up and down together where there are both.
func shownApproaches(list []analysis.Approach) []*analysis.Approach {
	something := func(a *analysis.Approach) bool { return a.Time.OK || a.Tau.OK || a.Coupling.OK }
	both := map[string]bool{}
	for i := range list {
		both[list[i].Observable] = both[list[i].Observable] || list[i].Start == "up-down" && something(&list[i])
	}
	var out []*analysis.Approach
	for i := range list {
		if a := &list[i]; something(a) && (a.Start == "up-down" || !both[a.Observable]) {
			out = append(out, a)
		}
	}
	return out
}

// writeApproaches prints how observables came from prepared starts to their
// limits.
func writeApproaches(b *strings.Builder, list []analysis.Approach) {
	for _, a := range shownApproaches(list) {
		var parts []string
		if a.Time.OK {
			parts = append(parts, fmt.Sprintf("within %s %% of its limit after %s", shortest(100*a.Epsilon), estimate(a.Time)))
		}
		if a.Tau.OK {
			parts = append(parts, "last decay "+estimate(a.Tau))
		}
		if a.Coupling.OK {
			parts = append(parts, "coupled after "+estimate(a.Coupling))
		}
		writeNote(b, "approach", a.Observable+" from "+a.Start+": "+strings.Join(parts, ", "))
	}
}

// writeAdvice says how long to run for the observable that needs it most.
func writeAdvice(b *strings.Builder, r *analysis.Result) {
	most := -1
	for i := range r.Advice {
		if r.Advice[i].Factor > 1 && (most < 0 || r.Advice[i].Factor > r.Advice[most].Factor) {
			most = i
		}
	}
	if most >= 0 {
		writeNote(b, "to do", r.Advice[most].Text)
	}
}
