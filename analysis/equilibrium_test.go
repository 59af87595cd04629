package analysis

import (
	"math"
	"math/rand/v2"
	"testing"
)

// Holm's procedure by hand: P = .01, .04, .03, .005 become, times 4, 3, 2, 1 in
// order and made monotone, .02, .03, .06, .06.
func TestHolm(t *testing.T) {
	p := []float64{.01, .04, .03, .005}
	tests := make([]Test, len(p))
	var list []*Test
	for i := range p {
		tests[i] = Test{OK: true, P: p[i]}
		list = append(list, &tests[i])
	}
	list = append(list, &Test{Reason: "not made"})
	holm(list)
	for i, want := range []float64{.03, .06, .06, .02} {
		if math.Abs(tests[i].Adjusted-want) > 1e-15 || tests[i].Rejected != (want < .05) {
			t.Errorf("P = %g: adjusted %g, rejected %v, want %g", p[i], tests[i].Adjusted, tests[i].Rejected, want)
		}
	}
	if list[4].Rejected {
		t.Error("a test that was not made rejects")
	}
}

// unitMeans makes a point whose units have the given constant values.
func unitMeans(values []float64, starts []string) Point {
	p := Point{Starts: starts, Observables: []Observable{{Name: "m", Scalar: true}}}
	for _, v := range values {
		segments := make([]Moment, 16)
		for s := range segments {
			segments[s] = Moment{10, 10 * v, 10 * v * v, 0, 0}
		}
		p.Observables[0].Moments = append(p.Observables[0].Moments, segments)
	}
	return p
}

// Welch's t and degrees of freedom, worked by hand: means 2 and 7, variances 1
// and 10, 3 and 5 values.
func TestStartTest(t *testing.T) {
	p := unitMeans([]float64{1, 3, 2, 5, 3, 11, 6, 10}, []string{"up", "down", "up", "down", "up", "down", "down", "down"})
	test := startTest(&p, 0, "m", func(m Moment) float64 { return m.S1 / float64(m.N) })
	// up: 1, 2, 3 (mean 2, variance 1); down: 3, 5, 11, 6, 10 (mean 7, variance 11.5).
	a, b := 1.0/3, 11.5/5
	wantT, wantDof := -5/math.Sqrt(a+b), (a+b)*(a+b)/(a*a/2+b*b/4)
	if math.Abs(test.Statistic-wantT) > 1e-12 || math.Abs(test.Dof-wantDof) > 1e-12 || !test.OK {
		t.Errorf("t = %g with %g degrees, want %g, %g", test.Statistic, test.Dof, wantT, wantDof)
	}
	if test.P < 0.02 || test.P > 0.05 { // |t| = 3.08 with 4.9 degrees: between the table's 0.02 (3.37) and 0.05 (2.57)
		t.Errorf("P = %g", test.P)
	}
}

// Stationary data must pass at the stated level, drifting and disagreeing data
// must not.
func TestStationarity(t *testing.T) {
	rejected := 0
	const points = 60
	var results []Result
	for i := range points {
		p := pureOU.point(uint64(500+i), 8, 40, 0.2)
		for u := range p.Starts {
			p.Starts[u] = []string{"up", "down"}[u%2]
		}
		results = append(results, Infer(p, Options{}))
	}
	Compare(results)
	for _, r := range results {
		if !r.Equilibrated {
			rejected++
		}
	}
	if rejected > 1 { // 2 families at 5 %: two rejections have probability below 1 %
		t.Errorf("%d of %d stationary points rejected", rejected, points)
	}
	drift := func(slope, split float64) Result {
		rng := rand.New(rand.NewPCG(12, 13))
		x := make([][][]float64, 8)
		for u := range x {
			x[u] = [][]float64{make([]float64, 200)}
			pureOU.sample(rng, x[u][0], 0.2)
			for i := range x[u][0] {
				x[u][0][i] += slope*float64(i)/200 + split*float64(u%2)
			}
		}
		p := record(x, 0.2, [][]float64{{1}})
		for u := range p.Starts {
			p.Starts[u] = []string{"up", "down"}[u%2]
		}
		return Infer(p, Options{})
	}
	codes := func(r Result) map[string]bool {
		m := map[string]bool{}
		for _, w := range r.Warnings {
			m[w.Code] = true
		}
		return m
	}
	if r := drift(3, 0); r.Equilibrated || !codes(r)[codeDrift] || codes(r)[codeStarts] {
		t.Errorf("drift: equilibrated %v, warnings %v", r.Equilibrated, r.Warnings)
	}
	if r := drift(0, 3); r.Equilibrated || codes(r)[codeDrift] || !codes(r)[codeStarts] {
		t.Errorf("different starts: equilibrated %v, warnings %v", r.Equilibrated, r.Warnings)
	}
	p := pureOU.point(1, 3, 40, 0.2)
	p.Starts = []string{"up", "up", "down"}
	if r := Infer(p, Options{}); !r.Equilibrated || !codes(r)[codeStartsUnknown] {
		t.Errorf("one unit of a start: %v", r.Warnings)
	}
}

// Compare corrects for the number of points and withdraws what does not stand.
func TestCompareWithdraws(t *testing.T) {
	weak := Result{Tests: []Test{{Kind: "starts", Observable: "m", OK: true, P: 0.01}}}
	one := []Result{weak}
	Compare(one)
	if one[0].Equilibrated || len(one[0].Warnings) != 1 {
		t.Errorf("alone: %+v", one[0])
	}
	var many []Result
	for range 10 {
		r := weak
		r.Tests = append([]Test(nil), weak.Tests...)
		r.Warnings = []Warning{warn(codeStarts, "from the point alone"), warn(codeFrozen, "kept")}
		many = append(many, r)
	}
	Compare(many)
	for _, r := range many {
		if !r.Equilibrated || len(r.Warnings) != 1 || r.Warnings[0].Code != codeFrozen {
			t.Fatalf("among ten: %+v", r)
		}
	}
}
