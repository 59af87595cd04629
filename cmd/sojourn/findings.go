package main

import "sojourn/analysis"

// findings is everything that a fit has to say, before it is laid out for people
// or for programs.
type findings struct {
	dir        string
	title      string
	complete   bool
	missing    int // units that the study asks for and nobody has run
	points     []finding
	samples    []sampled // of random couplings, taken together; nil without several
	comparison analysis.Comparison
}

// finding is one point of the study: what it is, what was run of it, what was
// inferred.
type finding struct {
	point        int // by first appearance in the study
	key          string
	model        string
	beta         float64
	size         []int
	scan         []setting // scanned physical parameters other than beta and size
	start        string
	span         float64 // recorded time of one trajectory
	engine       string
	units        int
	trajectories int
	jumps        float64
	seconds      float64 // in trajectories, summed over workers; 0 if unknown
	result       analysis.Result
	against      *against // exact values; nil unless asked for
}

// setting is a parameter and its value, as printed.
type setting struct{ name, value string }

// eachWarning visits every warning about a point.
func eachWarning(r *analysis.Result, visit func(about string, w analysis.Warning)) {
	eachWarningBut(r, func(*analysis.Approach) bool { return false }, visit)
}

// eachWarningBut visits the warnings about a point except those about some
// approaches.
func eachWarningBut(r *analysis.Result, but func(a *analysis.Approach) bool, visit func(about string, w analysis.Warning)) {
	all := func(about string, list []analysis.Warning) {
		for _, w := range list {
			visit(about, w)
		}
	}
	all("point", r.Warnings)
	for i := range r.Observables {
		all(r.Observables[i].Name, r.Observables[i].Warnings)
	}
	all("slow mode", r.SlowMode.Warnings)
	for i := range r.Decay {
		all(r.Decay[i].Of+" along "+axisName(r.Decay[i].Axis), r.Decay[i].Warnings)
	}
	for i := range r.Approach {
		if but(&r.Approach[i]) {
			continue
		}
		all(r.Approach[i].Observable+" from "+r.Approach[i].Start, r.Approach[i].Warnings)
	}
}
