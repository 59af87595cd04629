package kinetic

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"slices"
	"testing"

	"sojourn/kinetic/bath"
)

// laneCases covers the layouts, the kernels and what moves can change.
func laneCases(t testing.TB) map[string]Spec {
	field := isingSpec(t, 0.4, false, 7, 5)
	field.Families = append(field.Families, FamilySpec{
		Name: "field", Coupling: -0.3, Operator: operator(t, 2, nil, []string{"1"}),
	})
	cubic := isingSpec(t, 0.2, false, 4, 3, 5)
	cubic.Families = append([]FamilySpec{{Name: "field", Coupling: 0.7, Operator: operator(t, 3, nil, []string{"1"})}}, cubic.Families...)
	anisotropic := isingSpec(t, 0.4, false, 5, 6)
	anisotropic.Families[0].Coupling = 0.6
	frustrated := isingSpec(t, 0.4, false, 6, 6)
	frustrated.Families[1].Coupling = -1
	next := isingSpec(t, 0.3, true, 6, 7)
	next.Families = append(next.Families,
		FamilySpec{Name: "diagonal", Coupling: -0.5, Operator: operator(t, 2, nil, []string{"1 + x*y"})},
		FamilySpec{Name: "antidiagonal", Coupling: -0.5, Operator: operator(t, 2, nil, []string{"1 + x*y^-1"})})
	next.Bath[0].Law = bath.Law{Kind: bath.Metropolis, Rate: 1}
	plaquettes := Spec{
		Lattice: testLattice(t, false, 6, 8), Levels: 2, Sites: 1, Beta: 0.6, Bath: heatBath("X"),
		Families: []FamilySpec{{Name: "triangle", Coupling: 1, Operator: operator(t, 2, nil, []string{"1 + x + y"})}},
		Tracked: []TrackedSpec{
			{Name: "spin", Order: true, Operator: operator(t, 2, nil, []string{"1"})},
			{Name: "row", Operator: operator(t, 2, nil, []string{"line x"})},
		},
	}
	strengths := toricSpec(t, 0.6, 5, "X", "Y", "Z")
	strengths.Bath[1].Law = bath.Law{Kind: bath.Metropolis, Rate: 0.5}
	strengths.Bath[2].Law = bath.Law{Kind: bath.Power, Rate: 2, Exponent: 1}
	strengths.Families[1].Coupling = 0.5
	mixed := isingSpec(t, 0.4, false, 6, 6)
	mixed.Families = append(mixed.Families,
		FamilySpec{Name: "long", Coupling: 0.25, Operator: operator(t, 2, nil, []string{"1 + x^2"})},
		FamilySpec{Name: "square", Coupling: 0.5, Operator: operator(t, 2, nil, []string{"1 + x + y + x*y"})})
	signs := isingSpec(t, 0.5, false, 6, 6)
	signs.Families[0].Signs = make([]uint8, 36)
	for c := range signs.Families[0].Signs {
		signs.Families[0].Signs[c] = uint8(c * c / 3 % 2)
	}
	return map[string]Spec{
		"ising":       isingSpec(t, 0.4, false, 9, 8),
		"ising-1x2x3": isingSpec(t, 0.4, false, 1, 2, 3),
		"ising-3d":    isingSpec(t, 0.2, true, 4, 5, 3),
		"field":       field,
		"cubic-field": cubic,
		"anisotropic": anisotropic,
		"frustrated":  frustrated,
		"next":        next,
		"plaquettes":  plaquettes,
		"toric":       toricSpec(t, 0.7, 4, "X", "Y", "Z"),
		"toric-x":     toricSpec(t, 0.7, 5, "X"),
		"strengths":   strengths,
		"mixed":       mixed,
		"signs":       signs,
	}
}

// laneTrace runs a plan and returns all that can be seen of it.
func laneTrace(t *testing.T, p *lanePlan) string {
	t.Helper()
	e, err := newLanes(p, [32]byte{3}, 1, StartRandom)
	if err != nil {
		t.Fatal(err)
	}
	out := ""
	for range 5 {
		e.Advance(e.Time() + 1.3)
		if err := e.Audit(); err != nil {
			t.Fatal(err)
		}
		out += fmt.Sprint(e.Jumps(), e.Sums(nil), "\n")
	}
	patterns := make([]uint16, p.g.Addresses())
	for lane := range e.Lanes() {
		e.Patterns(lane, patterns)
		out += fmt.Sprintln(patterns)
	}
	return out
}

// Layouts and kernels are about speed: trajectories are the same.
func TestLaneLayoutsAgree(t *testing.T) {
	kernels := map[string]bool{}
	for name, s := range laneCases(t) {
		g := compiled(t, s)
		want := ""
		for _, flips := range []bool{false, true} {
			p, err := newLanePlanIn(g, flips)
			if err != nil {
				t.Fatal(name, err)
			}
			if p == nil {
				if name != "signs" {
					t.Errorf("%s: no layout by flips", name)
				}
				continue
			}
			kernels[fmt.Sprint(flips, p.kernel)] = true
			if want == "" {
				want = laneTrace(t, p)
			}
			if laneTrace(t, p) != want {
				t.Errorf("%s: flips %v, kernel %d: another trajectory", name, flips, p.kernel)
			}
			p.kernel = kernelAny
			if laneTrace(t, p) != want {
				t.Errorf("%s: flips %v: another trajectory with the general kernel", name, flips)
			}
			for z := range p.zoned {
				p.zoned[z].small = 0
			}
			if laneTrace(t, p) != want {
				t.Errorf("%s: flips %v: another trajectory with groups of any size", name, flips)
			}
		}
	}
	for _, k := range []string{
		fmt.Sprint(true, kernelFlips4), fmt.Sprint(true, kernelFlips8), fmt.Sprint(true, kernelAny),
		fmt.Sprint(false, kernelLevels4), fmt.Sprint(false, kernelLevels8), fmt.Sprint(false, kernelAny),
	} {
		if !kernels[k] {
			t.Errorf("no case for flips and kernel %s", k)
		}
	}
}

// The trajectories depend neither on what is tracked nor on how families are
// listed.
func TestLanesTrackingChangesNothing(t *testing.T) {
	run := func(s Spec, f int) string {
		e, err := NewLanes(compiled(t, s), [32]byte{7}, 3, StartRandom)
		if err != nil {
			t.Fatal(err)
		}
		e.Advance(20)
		out := make([]uint8, s.Lattice.Cells())
		e.Terms(f, 11, out)
		return fmt.Sprint(e.Jumps(), out)
	}
	s := toricSpec(t, 0.7, 6, "X", "Z")
	want := run(s, 1)
	s.Tracked = nil
	if run(s, 1) != want {
		t.Error("nothing tracked: another trajectory")
	}
	i := isingSpec(t, 0.4, false, 6, 5)
	want = run(i, 1)
	i.Tracked = append(i.Tracked, TrackedSpec{Name: "pair", Operator: operator(t, 2, nil, []string{"1 + x^2"})})
	if run(i, 1) != want {
		t.Error("pairs tracked: another trajectory")
	}
	slices.Reverse(i.Families)
	if run(i, 0) != want {
		t.Error("families listed in another order: another trajectory")
	}
}

// Means of all lanes against closed forms, with errors from bundles: one mean
// from each bundle.
func TestLanesExactMeans(t *testing.T) {
	ring := func(b float64, n int) float64 {
		th := math.Tanh(b)
		return (th + math.Pow(th, float64(n-1))) / (1 + math.Pow(th, float64(n)))
	}
	antiferro := isingSpec(t, 0.35, false, 8, 8)
	antiferro.Families[1].Coupling = -1
	for _, c := range []struct {
		name   string
		spec   Spec
		want   float64
		source string
	}{
		{"torus 8 at 0.35", isingSpec(t, 0.35, false, 8, 8), 0.9191479 / 2, "B. Kaufman, Phys. Rev. 76, 1232 (1949), evaluated"},
		{"torus 16 at 0.42", isingSpec(t, 0.42, false, 16, 16), 1.28240082 / 2, "B. Kaufman, Phys. Rev. 76, 1232 (1949), evaluated"},
		{"ring 3", isingSpec(t, 0.5, false, 3), ring(0.5, 3), "transfer matrix, textbook"},
		{"open chain 5", isingSpec(t, 0.5, true, 5), math.Tanh(0.5), "independent bonds, textbook"},
		{"toric 4 XYZ", toricSpec(t, 0.8, 4, "X", "Y", "Z"), ring(0.8, 16), "independent terms with one parity constraint, elementary"},
		{"torus 8, antiferromagnetic along y", antiferro, 0.9191479 / 2, "the same after turning every other row over"},
	} {
		g := compiled(t, c.spec)
		const bundles = 20
		var m, q float64
		for unit := range bundles {
			e, err := NewLanes(g, [32]byte{1}, unit, StartRandom)
			if err != nil {
				t.Fatal(err)
			}
			e.Advance(400)
			b := 0.0
			const samples = 40
			for range samples {
				e.Advance(e.Time() + 2)
				sums := e.Sums(nil)
				for l := 0; l < len(sums); l += len(sums) / e.Lanes() {
					b += float64(sums[l]) / float64(g.Families[0].Terms*e.Lanes()*samples)
				}
			}
			m += b / bundles
			q += b * b / bundles
		}
		se := math.Sqrt((q - m*m) / (bundles - 1))
		if math.Abs(m-c.want) > 4*se || se > 0.01*c.want {
			t.Errorf("%s: mean term %.5f(%.5f), want %.5f: %.1f standard errors (%s)", c.name, m, se, c.want, (m-c.want)/se, c.source)
		}
	}
}

// Starts that are states are those of the class engine, in every lane.
func TestLanesStarts(t *testing.T) {
	for name, s := range laneCases(t) {
		g := compiled(t, s)
		for _, start := range []Start{StartReference, StartUp, StartDown} {
			one, errOne := NewClasses(g, [32]byte{}, 0, start)
			all, err := NewLanes(g, [32]byte{}, 0, start)
			if (err == nil) != (errOne == nil) {
				t.Errorf("%s, %s: %v, for classes %v", name, start, err, errOne)
			}
			if err != nil || errOne != nil {
				continue
			}
			want, got := make([]uint16, g.Addresses()), make([]uint16, g.Addresses())
			one.Patterns(0, want)
			for lane := range all.Lanes() {
				all.Patterns(lane, got)
				if !slices.Equal(got, want) {
					t.Fatalf("%s, %s: lane %d has patterns %v, want %v", name, start, lane, got, want)
				}
			}
		}
	}
}

func TestLaneWords(t *testing.T) {
	for name, s := range laneCases(t) {
		g := compiled(t, s)
		made, err := NewLanes(g, [32]byte{2}, 0, StartRandom)
		if err != nil {
			t.Fatal(err)
		}
		e := made.(LaneWords)
		e.Advance(3)
		for f := range len(g.Families) + len(g.Lines) {
			n := g.Cells()
			if l := f - len(g.Families); l >= 0 {
				n = g.Lines[l].Positions
			}
			words, levels := make([]uint64, n), make([]uint8, n)
			e.Words(f, words)
			for lane := range e.Lanes() {
				e.Terms(f, lane, levels)
				for i, w := range words {
					if got := uint8(w >> lane & 1); got != levels[i] && !(levels[i] == Absent && got == 0) {
						t.Fatalf("%s: family %d at %d in lane %d: %d, want %d", name, f, i, lane, got, levels[i])
					}
				}
			}
		}
		var addresses []int32
		var slots []uint8
		for a := range g.Addresses() {
			for b := range g.Seats[a%len(g.Seats)].Slots {
				addresses, slots = append(addresses, int32(a)), append(slots, uint8(b))
			}
		}
		words, patterns := make([]uint64, len(slots)), make([]uint16, g.Addresses())
		e.SlotWords(addresses, slots, words)
		for lane := range e.Lanes() {
			e.Patterns(lane, patterns)
			for i, w := range words {
				if got, want := uint16(w>>lane&1), patterns[addresses[i]]>>slots[i]&1; got != want {
					t.Fatalf("%s: seat %d, slot %d in lane %d: %d, want %d", name, addresses[i], slots[i], lane, got, want)
				}
			}
		}
	}
}

// The audit sees a word that no move can have made, a wrong sum and a wrong
// clock.
func TestLanesAuditSees(t *testing.T) {
	g := compiled(t, toricSpec(t, 0.7, 4, "X"))
	for what, harm := range map[string]func(e *lanes){
		"a term":     func(e *lanes) { e.words[3] ^= 1 << 17 },
		"a sum":      func(e *lanes) { e.sums[5]++ },
		"an attempt": func(e *lanes) { e.done++ },
	} {
		made, err := NewLanes(g, [32]byte{}, 0, StartRandom)
		if err != nil {
			t.Fatal(err)
		}
		e := made.(*lanes)
		e.Advance(2)
		if err := e.Audit(); err != nil {
			t.Fatal(err)
		}
		harm(e)
		if e.Audit() == nil {
			t.Errorf("the audit passes over %s that is wrong", what)
		}
	}
}

func TestLaneLimits(t *testing.T) {
	var limit *LaneLimit
	potts := Spec{Lattice: testLattice(t, false, 4), Levels: 3, Sites: 1, Beta: 0.5}
	if _, err := NewLanes(compiled(t, potts), [32]byte{}, 0, StartRandom); !errors.As(err, &limit) {
		t.Errorf("three levels: %v", err)
	}
	many := isingSpec(t, 0.1, false, 40)
	many.Families = nil
	for r := range 7 {
		many.Families = append(many.Families, FamilySpec{
			Name: fmt.Sprint("bond-", r+1), Coupling: 1, Operator: operator(t, 1, nil, []string{fmt.Sprintf("1 + x^%d", r+1)}),
		})
	}
	if _, err := NewLanes(compiled(t, many), [32]byte{}, 0, StartRandom); !errors.As(err, &limit) || limit.Has != 14 {
		t.Errorf("fourteen bonds to a site: %v", err)
	}
	varied := isingSpec(t, 0.1, false, 40)
	varied.Families = varied.Families[:0]
	for r, j := range []float64{1, 0.3, 0.11, 0.047} {
		varied.Families = append(varied.Families, FamilySpec{
			Name: fmt.Sprint("bond-", r+1), Coupling: j, Operator: operator(t, 1, nil, []string{fmt.Sprintf("1 + x^%d", r+1)}),
		})
	}
	varied.Bath[0].Law.Kind = bath.Symmetric
	if _, err := NewLanes(compiled(t, varied), [32]byte{}, 0, StartRandom); !errors.As(err, &limit) {
		t.Errorf("81 rates: %v", err)
	}
	disorder := isingSpec(t, 0.5, false, 6)
	disorder.Families[0].Couplings = []float64{1, 2, 3, 4, 5, 6}
	if _, err := NewLanes(compiled(t, disorder), [32]byte{}, 0, StartRandom); err == nil {
		t.Error("couplings that vary in size were accepted")
	}
}

// A saved state does not depend on what has been asked about times in between.
func TestLanesSaveIgnoresQuestions(t *testing.T) {
	g := compiled(t, isingSpec(t, 0.4, false, 12, 12))
	run := func(ask bool) []byte {
		e, err := NewLanes(g, [32]byte{}, 0, StartRandom)
		if err != nil {
			t.Fatal(err)
		}
		for k := range 200 {
			e.Advance(float64(k) * 0.01)
			if ask {
				e.Sums(nil)
				e.Census(make([]int64, len(g.Shapes)<<g.Bits))
			}
		}
		return e.Save(nil)
	}
	if !bytes.Equal(run(true), run(false)) {
		t.Error("reading changes the state")
	}
}

func TestLanesAllocateNothing(t *testing.T) {
	g := compiled(t, toricSpec(t, 0.7, 8, "X", "Y", "Z"))
	e, err := NewLanes(g, [32]byte{}, 0, StartRandom)
	if err != nil {
		t.Fatal(err)
	}
	sums := make([]int64, 0, 64*8)
	census := make([]int64, len(g.Shapes)<<g.Bits)
	e.Census(census)
	if n := testing.AllocsPerRun(20, func() {
		e.Advance(e.Time() + 3.3)
		sums = e.Sums(sums[:0])
		e.Census(census)
	}); n != 0 {
		t.Errorf("%v allocations", n)
	}
}
