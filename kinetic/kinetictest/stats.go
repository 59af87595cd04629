package kinetictest

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// verdicts collects the p-values of many comparisons and judges them together.
type verdicts struct {
	cases []verdict
	// Waiting times of all models, in units of their means: how many, and the
	// sum of their differences from 1, whose variance is 1 each.
	waits  int
	excess float64
}

type verdict struct {
	name string
	p    float64
	note string
}

func (v *verdicts) add(name string, p float64, format string, args ...any) {
	v.cases = append(v.cases, verdict{name, p, fmt.Sprintf(format, args...)})
}

// falseAlarm is the probability that a right engine fails the suite with other
// seeds than the fixed ones.
const falseAlarm = 1e-3

// judge fails the test for every rejected case.
func (v *verdicts) judge(t *testing.T) {
	t.Helper()
	if v.waits > 0 {
		z := v.excess / math.Sqrt(float64(v.waits))
		v.add("waiting times of all models", normal(z), "the mean of %d is off by %.2f standard errors", v.waits, z)
	}
	for _, c := range v.rejected() {
		t.Errorf("%s: p = %.2g among %d comparisons: %s", c.name, c.p, len(v.cases), c.note)
	}
	if len(v.cases) > 0 {
		t.Logf("%d comparisons, smallest p = %.2g (%s)", len(v.cases), v.cases[0].p, v.cases[0].name)
	}
}

// rejected sorts the cases by p-value and returns those that S. Holm's procedure
// (Scand. J. Stat. 6, 65 (1979)) rejects at the level falseAlarm for all cases
// together. A p-value that is not a number is rejected.
func (v *verdicts) rejected() []verdict {
	for i := range v.cases {
		if math.IsNaN(v.cases[i].p) {
			v.cases[i].p = -1
		}
	}
	slices.SortStableFunc(v.cases, func(a, b verdict) int { return cmp.Compare(a.p, b.p) })
	n := 0
	for n < len(v.cases) && v.cases[n].p < falseAlarm/float64(len(v.cases)-n) {
		n++
	}
	return v.cases[:n]
}

// chiSquareTail is the probability of a chi-square above x.
func chiSquareTail(x float64, degrees int) float64 {
	return distuv.ChiSquared{K: float64(degrees)}.Survival(x)
}

// fewest is the smallest expected count that a bin may have: the tail of the
// statistic is then close to that of the chi-square distribution.
const fewest = 8

// chiSquare compares counts of outcomes with their probabilities (K. Pearson,
// Phil. Mag. 50, 157 (1900)); outcomes too rare for a bin of their own are
// merged. An outcome of probability 0 that occurred gives p = 0. degrees = 0
// means that there was nothing to compare.
func chiSquare(counts []int, probabilities []float64) (p float64, degrees int, note string) {
	n := 0
	for _, c := range counts {
		n += c
	}
	type bin struct{ got, want float64 }
	var bins []bin
	var rest bin
	x := 0.0
	for i, c := range counts {
		if probabilities[i] == 0 && c > 0 {
			return 0, 1, fmt.Sprintf("outcome %d cannot occur, and did %d times", i, c)
		}
		b := bin{float64(c), float64(n) * probabilities[i]}
		if b.want >= fewest {
			bins = append(bins, b)
			continue
		}
		rest.got += b.got
		rest.want += b.want
	}
	if rest.want >= fewest {
		bins = append(bins, rest)
	} else if len(bins) > 0 {
		// The rest goes to the least expected bin.
		least := 0
		for i := range bins {
			if bins[i].want < bins[least].want {
				least = i
			}
		}
		bins[least].got += rest.got
		bins[least].want += rest.want
	}
	if len(bins) < 2 {
		return 1, 0, ""
	}
	for _, b := range bins {
		x += (b.got - b.want) * (b.got - b.want) / b.want
	}
	return chiSquareTail(x, len(bins)-1), len(bins) - 1,
		fmt.Sprintf("chi-square %.1f for %d degrees of freedom", x, len(bins)-1)
}

// kolmogorov returns the probability that n uniform numbers differ from their
// distribution by as much as the given ones (A. N. Kolmogorov, G. Ist. Ital.
// Attuari 4, 83 (1933), with the correction of M. A. Stephens, J. R. Stat. Soc. B
// 32, 115 (1970)).
func kolmogorov(uniform []float64) (p float64, note string) {
	u := slices.Sorted(slices.Values(uniform))
	n := float64(len(u))
	d := 0.0
	for i, x := range u {
		d = max(d, x-float64(i)/n, float64(i+1)/n-x)
	}
	k := d * (math.Sqrt(n) + 0.12 + 0.11/math.Sqrt(n))
	for j := 1; j <= 100; j++ {
		term := 2 * math.Exp(-2*k*k*float64(j*j))
		if j%2 == 0 {
			term = -term
		}
		p += term
	}
	if k < 0.2 {
		p = 1
	}
	return min(1, max(0, p)), fmt.Sprintf("largest difference %.4f among %d", d, len(u))
}

// drift sums differences between what happened and its conditional mean, with
// their conditional covariance: a martingale, whatever the law of the states
// visited.
type drift struct {
	n      int
	sum    []float64
	square *mat.SymDense
}

func newDrift(n int) *drift {
	return &drift{sum: make([]float64, n), square: mat.NewSymDense(n, nil)}
}

// outcome adds one draw among outcomes of the given probabilities.
func (d *drift) outcome(k int, probabilities []float64) {
	d.n++
	d.sum[k]++
	for i, p := range probabilities {
		if p == 0 {
			continue
		}
		d.sum[i] -= p
		d.square.SetSym(i, i, d.square.At(i, i)+p)
		for j := i; j < len(probabilities); j++ {
			if q := probabilities[j]; q != 0 {
				d.square.SetSym(i, j, d.square.At(i, j)-p*q)
			}
		}
	}
}

// test compares the squared differences, in units of their covariance, with a
// chi-square. Combinations whose variance is below fewest/2 are too far from
// normal and count for nothing.
func (d *drift) test() (p float64, degrees int, note string) {
	var kept []int
	for i := range d.sum {
		if d.square.At(i, i) >= fewest/2 {
			kept = append(kept, i)
		} else if d.square.At(i, i) == 0 && math.Abs(d.sum[i]) > 1e-6*float64(d.n) {
			return 0, 1, fmt.Sprintf("outcome %d cannot occur, and did", i)
		}
	}
	if len(kept) == 0 {
		return 1, 0, ""
	}
	v := mat.NewSymDense(len(kept), nil)
	for i, a := range kept {
		for j := i; j < len(kept); j++ {
			v.SetSym(i, j, d.square.At(a, kept[j]))
		}
	}
	var e mat.EigenSym
	if !e.Factorize(v, true) {
		return 0, 1, "the covariance has no eigenvalues"
	}
	var vectors mat.Dense
	e.VectorsTo(&vectors)
	values := e.Values(nil)
	x := 0.0
	for k, l := range values {
		c := 0.0
		for i, a := range kept {
			c += vectors.At(i, k) * d.sum[a]
		}
		if l >= fewest/2 {
			x += c * c / l
			degrees++
		}
	}
	return chiSquareTail(x, degrees), degrees, fmt.Sprintf("chi-square %.1f for %d degrees of freedom, %d draws", x, degrees, d.n)
}

// normal returns the two-sided tail probability of a standard normal variate.
func normal(z float64) float64 { return math.Erfc(math.Abs(z) / math.Sqrt2) }

// chiSquareQuantile returns the chi-square with the given tail.
func chiSquareQuantile(tail float64, degrees int) float64 {
	return distuv.ChiSquared{K: float64(degrees)}.Quantile(1 - tail)
}
