package exact_test

import (
	"errors"
	"math"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/exact"
	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

func newSystem(t *testing.T, s kinetic.Spec) *exact.System {
	t.Helper()
	sys, err := exact.NewSystem(s)
	if err != nil {
		t.Fatal(err)
	}
	return sys
}

func explore(t *testing.T, s *exact.System) *exact.States {
	t.Helper()
	st, err := s.Explore(1 << 18)
	if err != nil {
		t.Fatal(err)
	}
	return st
}

func spectrum(t *testing.T, s *exact.System) *exact.Spectrum {
	t.Helper()
	sp, err := explore(t, s).Spectrum()
	if err != nil {
		t.Fatal(err)
	}
	return sp
}

// must returns an observable that exists.
func must(o exact.Observable, err error) exact.Observable {
	if err != nil {
		panic(err)
	}
	return o
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.15g, want %.15g (off by %.2g)", what, got, want, got-want)
	}
}

// R. J. Glauber, J. Math. Phys. 4, 294 (1963): on the ring under heat-bath rates
// the Fourier modes of the spins decay at 1 - tanh(2 beta) cos k, the
// magnetisation slowest of all. The energy's slowest visible rate is
// 2 (1 - tanh(2 beta) cos(pi/N)): B. U. Felderhof, Rep. Math. Phys. 1, 215
// (1971), from memory.
func TestGlauberRing(t *testing.T) {
	for n := 2; n <= 8; n++ {
		for _, beta := range []float64{0, 0.3, 1.2} {
			s := newSystem(t, kinetictest.Ising(kinetictest.Lattice(n), beta, kinetictest.HeatBath))
			sp := spectrum(t, s)
			g := math.Tanh(2 * beta)
			near(t, "gap", sp.Gap(), 1-g, 1e-10)
			m := sp.Relaxation(must(s.Magnetization()))
			near(t, "magnetisation", m.TauInt, 1/(1-g), 1e-9)
			near(t, "slowest of the magnetisation", m.TauSlowest(0), 1/(1-g), 1e-9)
			near(t, "initial of the magnetisation", m.TauInitial(), 1/(1-g), 1e-9)
			for k := 1; k <= n/2; k++ {
				r := sp.Relaxation(must(s.Fourier(lattice.Offset{k}, 0+len(s.Spec.Families))))
				if len(r.Modes) != 1 {
					t.Errorf("Fourier mode %d of %d has %d rates", k, n, len(r.Modes))
				}
				near(t, "Fourier amplitude", r.Modes[0].Rate, 1-g*math.Cos(2*math.Pi*float64(k)/float64(n)), 1e-10)
			}
			if n > 2 && beta > 0 {
				e := sp.Relaxation(s.Energy())
				near(t, "energy", 1/e.TauSlowest(0), 2*(1-g*math.Cos(math.Pi/float64(n))), 1e-9)
			}
		}
	}
}

// Second eigenvalues of one random single-site update of the L x L torus at the
// critical point, 1 - gap/L^2: M. P. Nightingale, H. W. J. Bloete, Phys. Rev.
// Lett. 76, 4548 (1996), from memory.
func TestCriticalTorus(t *testing.T) {
	beta := math.Log(1+math.Sqrt2) / 2
	for _, c := range []struct {
		l    int
		want float64
	}{{2, 0.985702260395516}, {3, 0.997409385126011}} {
		s := newSystem(t, kinetictest.Ising(kinetictest.Lattice(c.l, c.l), beta, kinetictest.HeatBath))
		sp := spectrum(t, s)
		near(t, "second eigenvalue", 1-sp.Gap()/float64(c.l*c.l), c.want, 1e-13)
	}
}

// A product operator that m bath operators flip decays at beta = 0 as
// exp(-2 G(0) m t), for every model, size and law (elementary).
func TestInfiniteTemperature(t *testing.T) {
	for _, c := range []struct {
		law bath.Law
		g0  float64
	}{
		{bath.Law{Kind: bath.HeatBath, Rate: 1.5}, 0.75},
		{bath.Law{Kind: bath.Metropolis, Rate: 1.5}, 1.5},
		{bath.Law{Kind: bath.Symmetric, Rate: 1.5}, 1.5},
	} {
		s := newSystem(t, kinetictest.ToricCode(kinetictest.Lattice(2, 2), 0, "XY", c.law, "z"))
		sp := spectrum(t, s)
		// A plaquette has four links, each flipped by X and by Y; a star has four,
		// each flipped by Y; a loop along x two.
		for _, o := range []struct {
			obs exact.Observable
			m   float64
		}{{must(s.Local(1)), 8}, {must(s.Local(0)), 4}, {must(s.Line(0)), 4}} {
			r := sp.Relaxation(o.obs)
			near(t, "variance", r.Variance, 1, 1e-12)
			if len(r.Modes) != 1 {
				t.Fatalf("%d modes", len(r.Modes))
			}
			near(t, "rate", r.Modes[0].Rate, 2*c.g0*o.m, 1e-11)
			near(t, "C(0.3)", r.Covariance(0.3), math.Exp(-0.6*c.g0*o.m), 1e-12)
		}
	}
}

// The cluster ring under Z couplings: every term X times its neighbours' Z is
// flipped by the Z of its own site alone, and relaxes at G(w) + G(-w), w = 2J
// (elementary).
func TestClusterRing(t *testing.T) {
	law := bath.Law{Kind: bath.Power, Rate: 1, Exponent: 2}
	s := newSystem(t, kinetic.Spec{
		Lattice: kinetictest.Lattice(7), Levels: 2, Sites: 1, Beta: 0.8,
		Families: []kinetic.FamilySpec{{Name: "cluster", Coupling: 1.5,
			Operator: kinetictest.Operator(2, 1, []string{"1"}, []string{"x^-1 + x"})}},
		Bath: kinetictest.Paulis("Z", law),
	})
	sp := spectrum(t, s)
	up, _ := law.At(bath.Exact(-3), 0.8)
	down, _ := law.At(bath.Exact(3), 0.8)
	near(t, "gap", sp.Gap(), up+down, 1e-12)
	r := sp.Relaxation(s.Energy())
	if len(r.Modes) != 1 {
		t.Errorf("the energy has %d modes", len(r.Modes))
	}
	near(t, "mean energy", r.Mean, -7*1.5*math.Tanh(0.8*1.5), 1e-12)
	near(t, "tau", r.TauInt, 1/(up+down), 1e-12)
	if levels := sp.Levels(); len(levels) != 8 || levels[2].Multiplicity != 21 {
		t.Errorf("levels %v, want 7 independent two-state systems", levels)
	}
}

// Bare logical operators of the two-dimensional toric code lose their weight on
// the slowest mode with size: 0.93, 0.69 and 0.43 at beta = 1 for L = 2, 3, 4,
// computed independently.
func TestBareLogicals(t *testing.T) {
	for _, c := range []struct {
		l      int
		weight float64
	}{{2, 0.93}, {3, 0.69}, {4, 0.43}} {
		s := newSystem(t, kinetictest.ToricCode(kinetictest.Lattice(c.l, c.l), 1, "X", kinetictest.HeatBath, "z"))
		o := must(s.Line(0))
		o.Components, o.Norm = o.Components[:1], 1 // parallel loops are equivalent
		r, err := explore(t, s).Relaxation(o)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "weight on the slowest mode", r.Modes[0].Weight/r.Variance, c.weight, 0.005)
		if r.TauSlowest(0.2) != 1/r.Modes[0].Rate || r.TauSlowest(0.95) == r.TauSlowest(0) {
			t.Errorf("floors: %v, %v, %v", r.TauSlowest(0.2), r.TauSlowest(0.95), r.TauSlowest(0))
		}
	}
}

// Ring covariances at equilibrium by the transfer matrix (textbook):
// (t^r + t^(N-r))/(1 + t^N), t = tanh beta.
func TestRingCovariance(t *testing.T) {
	const n, beta = 8, 0.6
	s := newSystem(t, kinetictest.Ising(kinetictest.Lattice(n), beta, kinetictest.HeatBath))
	st := explore(t, s)
	k, err := st.Covariance(must(s.Local(1)))
	if err != nil {
		t.Fatal(err)
	}
	th := math.Tanh(beta)
	for r := range n {
		want := (math.Pow(th, float64(r)) + math.Pow(th, float64(n-r))) / (1 + math.Pow(th, n))
		near(t, "K(r)", k.At(lattice.Offset{r}), want, 1e-13)
		near(t, "plane sums", k.Planes(0)[r], want, 1e-13)
	}
	s = newSystem(t, kinetictest.Ising(kinetictest.Lattice(3, 4), 0.3, kinetictest.HeatBath))
	k, err = explore(t, s).Covariance(must(s.Local(2)))
	if err != nil {
		t.Fatal(err)
	}
	m, err := explore(t, s).Relaxation(must(s.Magnetization()))
	if err != nil {
		t.Fatal(err)
	}
	sum := 0.0
	for _, p := range k.Planes(1) {
		sum += p
	}
	// The variance of the magnetisation is the sum over all pairs of planes: 4
	// planes of 3 spins each.
	near(t, "sum over planes", 4*3*sum, m.Variance, 1e-11)
}

// Known traps: Y alone on the 2 x 2 toric code leaves 16 classes; where
// G(0) = 0, the ring of 4 has 5 and the 4 x 4 torus 37 (computed independently).
func TestClosedClasses(t *testing.T) {
	cubic := bath.Law{Kind: bath.Power, Rate: 1, Exponent: 3}
	for _, c := range []struct {
		name  string
		spec  kinetic.Spec
		scope exact.Scope
		want  int
	}{
		{"toric code, Y", kinetictest.ToricCode(kinetictest.Lattice(2, 2), 1, "Y", kinetictest.HeatBath, "zx"), exact.Everything, 16},
		{"toric code, Y, as moved", kinetictest.ToricCode(kinetictest.Lattice(2, 2), 1, "Y", kinetictest.HeatBath, "zx"), exact.Moved, 1},
		{"toric code, XZ", kinetictest.ToricCode(kinetictest.Lattice(2, 2), 1, "XZ", kinetictest.HeatBath, "zx"), exact.Everything, 1},
		{"ring", kinetictest.Ising(kinetictest.Lattice(4), 1, cubic), exact.Everything, 5},
		{"ring, G(0) > 0", kinetictest.Ising(kinetictest.Lattice(4), 1, kinetictest.HeatBath), exact.Everything, 1},
		{"torus", kinetictest.Ising(kinetictest.Lattice(4, 4), 1, cubic), exact.Moved, 37},
	} {
		s := newSystem(t, c.spec)
		classes, err := s.ClosedClasses(c.scope, 1<<16)
		if err != nil {
			t.Fatal(err)
		}
		states, weight := 0, 0.0
		for _, k := range classes {
			states += k.States
			weight += k.Weight
		}
		total := s.TotalSize()
		if c.scope == exact.Moved {
			total = s.OrbitSize()
		}
		if len(classes) != c.want || int64(states) != total.Int64() {
			t.Errorf("%s: %d classes with %d of %s states, want %d", c.name, len(classes), states, total, c.want)
		}
		near(t, c.name+": weight", weight, 1, 1e-12)
	}
	s := newSystem(t, kinetictest.Ising(kinetictest.Lattice(4), 1, cubic))
	if n := explore(t, s).Len(); n != 12 {
		t.Errorf("the reference of the frozen ring reaches %d states, want 12", n)
	}
}

func TestLimits(t *testing.T) {
	s := newSystem(t, kinetictest.Ising(kinetictest.Lattice(5, 5), 0.4, kinetictest.HeatBath))
	_, err := s.Explore(1 << 20)
	var many *exact.TooManyStatesError
	if !errors.As(err, &many) || many.Total.Int64() != 1<<25 || many.Reached != 0 {
		t.Errorf("2^25 states: %v", err)
	}
	s = newSystem(t, kinetictest.Ising(kinetictest.Lattice(4, 4), 0.4, bath.Law{Kind: bath.Power, Rate: 1, Exponent: 3}))
	if _, err = s.Explore(1000); !errors.As(err, &many) || many.Reached != 1000 {
		t.Errorf("beyond 1000 of 65500 states: %v", err)
	}
	if _, err = s.ClosedClasses(exact.Everything, 1000); !errors.As(err, &many) {
		t.Errorf("classes of 2^16 states: %v", err)
	}
	large := kinetictest.Ising(kinetictest.Lattice(20, 20), 0.4, kinetictest.HeatBath)
	if _, err = newSystem(t, large).Explore(1 << 20); err == nil || err.Error() != "the lattice has 2^400 states, more than the limit of 1048576" {
		t.Errorf("2^400 states: %v", err)
	}
}

// Operators that do not commute are refused with their places.
func TestCommutation(t *testing.T) {
	s := kinetictest.ToricCode(kinetictest.Lattice(2, 3), 1, "X", kinetictest.HeatBath, "z")
	s.Tracked = append(s.Tracked, kinetic.TrackedSpec{Name: "half", Operator: kinetictest.Operator(2, 2, nil, []string{"1", "0"})})
	_, err := exact.NewSystem(s)
	var not *exact.CommutationError
	if !errors.As(err, &not) || not.A != "star" || not.B != "half" {
		t.Errorf("a single Z next to the stars: %v", err)
	}
	open, err := lattice.New([]int{3, 3}, []bool{true, true})
	if err != nil {
		t.Fatal(err)
	}
	s = kinetictest.ToricCode(open, 1, "X", kinetictest.HeatBath, "")
	s.Families[0].Cut = kinetic.Truncate
	if _, err = exact.NewSystem(s); err != nil {
		t.Errorf("stars cut at rough edges: %v", err)
	}
	// X Z Z X on a chain ends in X alone, next to X Z Z.
	chain, err := lattice.New([]int{6}, []bool{true})
	if err != nil {
		t.Fatal(err)
	}
	xzzx := kinetic.FamilySpec{Name: "xzzx", Coupling: 1, Operator: kinetictest.Operator(2, 1, []string{"1 + x^3"}, []string{"x + x^2"})}
	s = kinetic.Spec{Lattice: chain, Levels: 2, Sites: 1, Beta: 1, Families: []kinetic.FamilySpec{xzzx}}
	if _, err = exact.NewSystem(s); err != nil {
		t.Errorf("X Z Z X dropped at the ends: %v", err)
	}
	s.Families[0].Cut = kinetic.Truncate
	if _, err = exact.NewSystem(s); !errors.As(err, &not) || not.A != "xzzx" || not.B != "xzzx" {
		t.Errorf("X Z Z X cut at the ends: %v", err)
	}
}

// 0.1 + 0.2 - 0.3 is zero energy: a jump between such levels is frozen under a
// law with G(0) = 0.
func TestEnergiesAreExact(t *testing.T) {
	z := kinetictest.Operator(2, 1, nil, []string{"1"})
	s := newSystem(t, kinetic.Spec{
		Lattice: kinetictest.Lattice(1), Levels: 2, Sites: 1, Beta: 1,
		Families: []kinetic.FamilySpec{
			{Name: "a", Coupling: 0.1, Operator: z}, {Name: "b", Coupling: 0.2, Operator: z}, {Name: "c", Coupling: -0.3, Operator: z},
		},
		Bath: kinetictest.Paulis("X", bath.Law{Kind: bath.Power, Rate: 1, Exponent: 3}),
	})
	if st := explore(t, s); st.Len() != 1 {
		t.Errorf("%d states connected by a jump of energy 0.1 + 0.2 - 0.3", st.Len())
	}
	if g := s.Gain(0, s.Reference); g.Sign() != 0 {
		t.Errorf("energy %s", g)
	}
}

// A cold bath whose rates underflow would look irreversible.
func TestUnderflow(t *testing.T) {
	if _, err := exact.NewSystem(kinetictest.Ising(kinetictest.Lattice(4), 200, kinetictest.HeatBath)); err == nil {
		t.Error("rates of exp(-800) were accepted")
	}
}

// The two routes to a relaxation: all eigenvectors, and Lanczos steps from the
// observable.
func TestRoutesAgree(t *testing.T) {
	for seed := range uint64(40) {
		s := newSystem(t, kinetictest.RandomSpec(seed, kinetictest.Size{MinStates: 4, MaxStates: 128, MaxCells: 8}))
		st := explore(t, s)
		sp, err := st.Spectrum()
		if err != nil {
			t.Fatal(err)
		}
		var all []exact.Observable
		all = append(all, s.Energy())
		for _, k := range s.Kinds {
			var o exact.Observable
			if k.Line {
				o, err = s.Line(k.Index)
			} else {
				o, err = s.Local(k.Index)
			}
			if err == nil {
				all = append(all, o)
			}
		}
		for _, o := range all {
			a := sp.Relaxation(o)
			b, err := st.Relaxation(o)
			if err != nil {
				t.Fatal(err)
			}
			tolerance := 1e-8 * (1 + a.TauSlowest(0))
			near(t, o.Name+" tau_int", b.TauInt, a.TauInt, tolerance)
			for _, floor := range []float64{0.2, 0.01, 0} {
				near(t, o.Name+" tau_slowest", b.TauSlowest(floor), a.TauSlowest(floor), tolerance)
			}
			for _, x := range []float64{0, 0.3, 1, 5} {
				near(t, o.Name+" C(t)", b.Covariance(x), a.Covariance(x), 1e-9*(1+a.Variance))
			}
			// Var/E(f,f) <= tau_int <= slowest time in f <= 1/gap.
			if a.Variance > 0 && !(a.TauInitial() <= a.TauInt*(1+1e-12) && a.TauInt <= a.TauSlowest(0)*(1+1e-9) && a.TauSlowest(0) <= (1+1e-9)/sp.Gap()) {
				t.Errorf("%s: %v, %v, %v, %v do not increase", o.Name, a.TauInitial(), a.TauInt, a.TauSlowest(0), 1/sp.Gap())
			}
			near(t, o.Name+" variance", a.Covariance(0), a.Variance, 1e-10*(1+a.Variance))
		}
	}
}

// The lowest levels by block Lanczos against the full spectrum, multiplicities
// included.
func TestLowest(t *testing.T) {
	specs := []kinetic.Spec{
		kinetictest.Ising(kinetictest.Lattice(8), 0.4, kinetictest.HeatBath),
		kinetictest.Ising(kinetictest.Lattice(2, 4), 0.4, kinetictest.HeatBath),
		kinetictest.ToricCode(kinetictest.Lattice(2, 2), 0.5, "XZ", kinetictest.HeatBath, ""),
		kinetictest.Ising(kinetictest.Lattice(2), 0.4, kinetictest.HeatBath),
	}
	for seed := range uint64(40) {
		specs = append(specs, kinetictest.RandomSpec(seed, kinetictest.Size{MinStates: 4, MaxStates: 256, MaxCells: 8}))
	}
	for i, spec := range specs {
		s := newSystem(t, spec)
		st := explore(t, s)
		sp, err := st.Spectrum()
		if err != nil {
			t.Fatal(err)
		}
		want := sp.Levels()[1:]
		got, err := st.Lowest(4)
		if err != nil {
			t.Errorf("%d: %d states: %v", i, st.Len(), err)
			continue
		}
		if len(got) != min(4, len(want)) {
			t.Errorf("%d: %d levels of %d", i, len(got), len(want))
			continue
		}
		for k, l := range got {
			if l.Multiplicity != want[k].Multiplicity && !(l.AtLeast && l.Multiplicity == 18 && want[k].Multiplicity > 18) || math.Abs(l.Rate-want[k].Rate) > 1e-10*want[k].Rate {
				t.Errorf("%d, %d states: level %d is %+v, want %+v", i, st.Len(), k, l, want[k])
			}
		}
	}
}
