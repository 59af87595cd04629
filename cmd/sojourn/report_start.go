package main

import (
	"fmt"
	"strings"

	"sojourn/analysis"
)

// writeApproaches prints how each observable came from its prepared starts to
// its limit: from up and down together where there are both.
func writeApproaches(b *strings.Builder, list []analysis.Approach) {
	both := map[string]bool{}
	for i := range list {
		a := &list[i]
		both[a.Observable] = both[a.Observable] || a.Start == "up-down" && (a.Time.OK || a.Tau.OK)
	}
	for i := range list {
		a := &list[i]
		if both[a.Observable] && a.Start != "up-down" {
			continue
		}
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
		if len(parts) > 0 {
			writeNote(b, "approach", a.Observable+" from "+a.Start+": "+strings.Join(parts, ", "))
		}
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
