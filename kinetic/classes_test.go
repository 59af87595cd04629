package kinetic

import (
	"fmt"
	"math"
	"testing"
)

// meanTerm returns the mean eigenvalue of the terms of family 0 with its
// standard error, from block means.
func meanTerm(t *testing.T, s Spec, settle, step float64, blocks, perBlock int) (mean, se float64) {
	t.Helper()
	g := compiled(t, s)
	e, err := NewClasses(g, [32]byte{1}, 0, StartRandom)
	if err != nil {
		t.Fatal(err)
	}
	e.Advance(settle)
	var sums []int64
	var m, q float64
	for range blocks {
		b := 0.0
		for range perBlock {
			e.Advance(e.Time() + step)
			sums = e.Sums(sums[:0])
			b += float64(sums[0]) / float64(g.Families[0].Terms)
		}
		b /= float64(perBlock)
		m += b
		q += b * b
	}
	if err := e.Audit(); err != nil {
		t.Error(err)
	}
	n := float64(blocks)
	m /= n
	return m, math.Sqrt((q/n - m*m) / (n - 1))
}

func TestExactMeans(t *testing.T) {
	ring := func(b float64, n int) float64 {
		th := math.Tanh(b)
		return (th + math.Pow(th, float64(n-1))) / (1 + math.Pow(th, float64(n)))
	}
	for _, c := range []struct {
		name   string
		spec   Spec
		want   float64
		source string
	}{
		{"torus 8 at 0.35", isingSpec(t, 0.35, false, 8, 8), 0.9191479 / 2, "B. Kaufman, Phys. Rev. 76, 1232 (1949), evaluated"},
		{"torus 16 at 0.42", isingSpec(t, 0.42, false, 16, 16), 1.28240082 / 2, "B. Kaufman, Phys. Rev. 76, 1232 (1949), evaluated"},
		{"ring 6", isingSpec(t, 0.5, false, 6), ring(0.5, 6), "transfer matrix, textbook"},
		{"ring 2", isingSpec(t, 0.5, false, 2), ring(0.5, 2), "transfer matrix, textbook"},
		{"ring 3", isingSpec(t, 0.5, false, 3), ring(0.5, 3), "transfer matrix, textbook"},
		{"open chain 5", isingSpec(t, 0.5, true, 5), math.Tanh(0.5), "independent bonds, textbook"},
		{"toric 4 XYZ", toricSpec(t, 0.8, 4, "X", "Y", "Z"), ring(0.8, 16), "independent terms with one parity constraint, elementary"},
		{"toric 3 Y", toricSpec(t, 0.8, 3, "X", "Y"), ring(0.8, 9), "independent terms with one parity constraint, elementary"},
	} {
		t.Run(c.name, func(t *testing.T) {
			mean, se := meanTerm(t, c.spec, 200, 2, 40, 600)
			if math.Abs(mean-c.want) > 4*se || se > 0.01*c.want {
				t.Errorf("mean term %.5f(%.5f), want %.5f: %.1f standard errors (%s)", mean, se, c.want, (mean-c.want)/se, c.source)
			}
		})
	}
}

// The trajectory depends neither on what is tracked nor on how time is cut.
func TestTrackingChangesNothing(t *testing.T) {
	run := func(s Spec, cuts int) string {
		e, err := NewClasses(compiled(t, s), [32]byte{7}, 3, StartRandom)
		if err != nil {
			t.Fatal(err)
		}
		for i := range cuts {
			e.Advance(20 * float64(i+1) / float64(cuts))
		}
		return fmt.Sprint(e.Jumps(), e.Sums(nil)[:2])
	}
	s := toricSpec(t, 0.7, 6, "X", "Z")
	want := run(s, 1)
	if got := run(s, 1000); got != want {
		t.Errorf("cut into pieces: %s, want %s", got, want)
	}
	s.Tracked = nil
	if got := run(s, 1); got != want {
		t.Errorf("nothing tracked: %s, want %s", got, want)
	}
	i := isingSpec(t, 0.4, false, 6, 5)
	want = run(i, 1)
	i.Tracked = append(i.Tracked, TrackedSpec{Name: "pair", Operator: operator(t, 2, nil, []string{"1 + x^2"})})
	if got := run(i, 1); got != want {
		t.Errorf("pairs tracked: %s, want %s", got, want)
	}
}

func BenchmarkClasses(b *testing.B) {
	for _, c := range []struct {
		name string
		spec Spec
	}{
		{"ising-256x256/0.3", isingSpec(b, 0.3, false, 256, 256)},
		{"ising-256x256/critical", isingSpec(b, 0.4406868, false, 256, 256)},
		{"ising-256x256/0.6", isingSpec(b, 0.6, false, 256, 256)},
		{"ising-250x250/critical", isingSpec(b, 0.4406868, false, 250, 250)},
		{"ising-1024x1024/critical", isingSpec(b, 0.4406868, false, 1024, 1024)},
		{"ising-256x256-open/critical", isingSpec(b, 0.4406868, true, 256, 256)},
		{"ising-40x40x40/0.2", isingSpec(b, 0.2, false, 40, 40, 40)},
		{"toric-180x180-X/0.8", toricSpec(b, 0.8, 180, "X")},
		{"toric-180x180-XYZ/0.8", toricSpec(b, 0.8, 180, "X", "Y", "Z")},
	} {
		b.Run(c.name, func(b *testing.B) {
			g := compiled(b, c.spec)
			start := StartRandom
			if c.spec.Beta > 0.5 {
				start = StartReference
			}
			e, err := NewClasses(g, [32]byte{1}, 0, start)
			if err != nil {
				b.Fatal(err)
			}
			e.Advance(30)
			// A fixed number of jumps per iteration, in steps of time that hold
			// about that many.
			before, t := e.Jumps(), e.Time()
			e.Advance(t + 1)
			step := (e.Time() - t) * (1 << 18) / float64(e.Jumps()-before)
			b.ReportAllocs()
			first := e.Jumps()
			for b.Loop() {
				e.Advance(e.Time() + step)
			}
			jumps := float64(e.Jumps() - first)
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/jumps, "ns/jump")
			b.ReportMetric(float64(ClassBytes(g))/float64(g.Addresses()), "bytes/site")
		})
	}
}
