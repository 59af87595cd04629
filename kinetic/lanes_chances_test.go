package kinetic

import (
	"math"
	"slices"
	"testing"
)

// The words of a chance have its probability, to within 4.5 standard errors for
// each of some 20 probabilities: seen with other seeds once in 7000 runs.
func TestChances(t *testing.T) {
	rates := []float64{1e-4, 0.003, 1. / 512, 0.0137, 0.1, 0.25, 1. / 3, 0.4999, 0.5, 0.5001, 2. / 3, 0.75, 0.9, 0.9863, 1 - 1e-4, 1}
	set := newChanceSet(1, rates)
	if set.turned != 6 || !set.even {
		t.Errorf("%d complements, an even chance %v; want 6 and true", set.turned, set.even)
	}
	p := &lanePlan{sets: []chanceSet{set}, columns: set.columns()}
	p.setRest()
	src := newSource([32]byte{4}, 0, "chances")
	a := attempts{plan: p, src: src, bulk: newBulk(&src)}
	a.columns = make([]wordColumn, p.columns)
	for i := range a.columns[1] {
		a.columns[1][i] = math.MaxUint64
	}
	a.extra = make([]uint64, p.extra.most())
	ones := make([]float64, len(rates))
	const rounds = 4000
	for range rounds {
		for k := range a.raw {
			a.bulk.fill(a.raw[k][:])
		}
		a.drawWords(&p.sets[0])
		a.strew()
		for i, r := range rates {
			var c laneCounter
			c.add(a.columns[p.sets[0].column(r)][:])
			var n [lanesPerWord]int64
			c.addTo(n[:], 1, 1)
			for _, k := range n {
				ones[i] += float64(k)
			}
		}
	}
	const n = rounds * attemptsAhead * lanesPerWord
	for i, r := range rates {
		sd := math.Sqrt(n * r * (1 - r))
		if z := ones[i] - n*r; math.Abs(z) > 4.5*sd {
			t.Errorf("probability %v: %.0f of %d bits, %.1f standard errors off", r, ones[i], n, z/sd)
		}
	}
	for _, c := range p.sets[0].direct {
		// exp(-rest) (1 - P/2^8) = 1 - p, P/2^8 being the word before points.
		i := slices.IndexFunc(p.sets[0].direct, func(d chance) bool { return d == c })
		want := p.sets[0].small[i]
		whole := math.Floor(want*256) / 256
		if got := -math.Expm1(-c.rest)*(1-whole) + whole; math.Abs(got-want) > 1e-16 {
			t.Errorf("chance %v is made as %v", want, got)
		}
	}
}

// Counts in intervals are Poisson: the dispersion index of n counts is a
// chi-square; 4.5 standard errors.
func TestLaneClock(t *testing.T) {
	g := compiled(t, isingSpec(t, 0.3, false, 5))
	made, err := NewLanes(g, [32]byte{9}, 0, StartReference)
	if err != nil {
		t.Fatal(err)
	}
	e := made.(*lanes)
	attempts, begun := 0.0, 0.0
	step := 11 / e.plan.clock
	const n = 40000
	var m, q float64
	blocks := 0.0
	begin := e.next.begin
	for k := range n {
		e.Advance(float64(k+1) * step)
		if e.next.begin != begin {
			// Blocks are shorter than two steps only once in 10^40.
			begin = e.next.begin
			blocks++
		}
		now := blocks*attemptsAhead + float64(e.done)
		attempts, begun = now-begun, now
		m += attempts / n
		q += attempts * attempts / n
	}
	if z := (m - 11) / math.Sqrt(11./n); math.Abs(z) > 4.5 {
		t.Errorf("%.4f attempts in a time of 11, %.1f standard errors off", m, z)
	}
	if z := ((q-m*m)/m - 1) * math.Sqrt(n/2.); math.Abs(z) > 4.5 {
		t.Errorf("the variance of the number of attempts is %.4f of its mean, %.1f standard errors off", (q-m*m)/m, z)
	}
}
