package bath

import (
	"bytes"
	"errors"
	"math"
	"math/big"
	"strings"
	"testing"
)

func near(got, want, relative float64) bool {
	return got == want || math.Abs(got-want) <= relative*math.Abs(want)
}

func at(t *testing.T, l Law, w, beta float64) float64 {
	t.Helper()
	g, err := l.At(Exact(w), beta)
	if err != nil {
		t.Fatalf("%v at w = %v, beta = %v: %v", l, w, beta, err)
	}
	return g
}

// The laws against other forms of the same functions.
func TestRates(t *testing.T) {
	for _, beta := range []float64{1e-3, 0.35, 1, 2.5} {
		for _, w := range []float64{-8, -4, -0.5, -1e-6, 1e-6, 0.1, 2, 4, 8} {
			x := beta * w
			for _, c := range []struct {
				law  Law
				want float64
			}{
				{Law{Kind: HeatBath, Rate: 3}, 3 * (1 + math.Tanh(x/2)) / 2},
				{Law{Kind: Metropolis, Rate: 3}, 3 * math.Exp(min(0, x))},
				{Law{Kind: Symmetric, Rate: 3}, 3 * math.Sqrt(math.Exp(x))},
				// w (n(w) + 1) for absorption, |w| n(|w|) for emission, n the Bose
				// function; n + 1/2 = coth(x/2)/2.
				{Law{Kind: Power, Rate: 3, Exponent: 1}, 3 * w * (1/math.Tanh(x/2) + 1) / 2},
				{Law{Kind: Power, Rate: 3, Exponent: 3}, 3 * w * w * w * (1/math.Tanh(x/2) + 1) / 2},
				{Law{Kind: Power, Rate: 3, Exponent: 2.5, Cutoff: 5},
					3 * w * math.Pow(math.Abs(w), 1.5) * math.Exp(-math.Abs(w)/5) * (1/math.Tanh(x/2) + 1) / 2},
			} {
				// 1 + tanh and coth - 1 cancel for negative x; their error grows like exp(-x).
				if got := at(t, c.law, w, beta); !near(got, c.want, 1e-14*(1+math.Exp(-x))) {
					t.Errorf("%+v, w = %v, beta = %v: got %v, want %v", c.law, w, beta, got, c.want)
				}
			}
		}
	}
}

func TestZeroEnergy(t *testing.T) {
	for _, c := range []struct {
		law  Law
		want float64
	}{
		{Law{Kind: HeatBath, Rate: 2}, 1},
		{Law{Kind: Metropolis, Rate: 2}, 2},
		{Law{Kind: Symmetric, Rate: 2}, 2},
		{Law{Kind: Power, Rate: 2, Exponent: 1}, 4},
		{Law{Kind: Power, Rate: 2, Exponent: 1, Cutoff: 3}, 4},
		{Law{Kind: Power, Rate: 2, Exponent: 1.5}, 0},
		{Law{Kind: Power, Rate: 2, Exponent: 3}, 0},
		{Law{Kind: Table, Energies: []float64{0, 4}, Rates: []float64{0.25, 1}}, 0.25},
	} {
		if got := at(t, c.law, 0, 0.5); got != c.want {
			t.Errorf("%+v: G(0) = %v, want %v", c.law, got, c.want)
		}
	}
	// 0.1 + 0.2 - 0.3 is zero energy, not 5.55e-17.
	w := new(big.Rat).Add(Exact(0.1), Exact(0.2))
	w.Sub(w, Exact(0.3))
	if g, err := (Law{Kind: Power, Rate: 1, Exponent: 3}).At(w, 1); err != nil || g != 0 {
		t.Errorf("G(0.1 + 0.2 - 0.3) = %v, %v", g, err)
	}
}

// Rates where intermediate numbers leave the range of doubles.
func TestExtremes(t *testing.T) {
	for _, c := range []struct {
		law           Law
		w, beta, want float64
		relative      float64
	}{
		{law: Law{Kind: HeatBath, Rate: 1}, w: 1e6, beta: 1, want: 1},
		{law: Law{Kind: HeatBath, Rate: 1}, w: -1e6, beta: 1, want: 0},
		{law: Law{Kind: HeatBath, Rate: 1}, w: -710, beta: 1, want: math.Exp(-710), relative: 1e-12},
		{law: Law{Kind: Metropolis, Rate: 1}, w: 1e300, beta: 1e300, want: 1},
		{law: Law{Kind: Metropolis, Rate: 1}, w: -1e300, beta: 1e300, want: 0},
		{law: Law{Kind: Power, Rate: 1, Exponent: 1}, w: -1e6, beta: 1, want: 0},
		{law: Law{Kind: Power, Rate: 1, Exponent: 1}, w: 1e6, beta: 1, want: 1e6},
		{law: Law{Kind: Power, Rate: 1, Exponent: 2}, w: -720, beta: 1, want: 720 * 720 * math.Exp(-720), relative: 1e-9},
		{law: Law{Kind: Power, Rate: 1, Exponent: 1}, w: 1e-200, beta: 1e-200, want: 1e200, relative: 1e-15},
		{law: Law{Kind: Power, Rate: 1, Exponent: 1}, w: -1e-200, beta: 1e-200, want: 1e200, relative: 1e-15},
		{law: Law{Kind: Power, Rate: 1, Exponent: 2, Cutoff: 1}, w: 1e200, beta: 1, want: 0},
		{law: Law{Kind: Power, Rate: 1, Exponent: 2, Cutoff: 1}, w: -1e200, beta: 1, want: 0},
		{law: Law{Kind: Symmetric, Rate: 1}, w: -1e6, beta: 1, want: 0},
	} {
		if got := at(t, c.law, c.w, c.beta); !near(got, c.want, c.relative) {
			t.Errorf("%+v, w = %v, beta = %v: got %v, want %v", c.law, c.w, c.beta, got, c.want)
		}
	}
	if g, err := (Law{Kind: Symmetric, Rate: 1}).At(Exact(1e6), 1); err == nil {
		t.Errorf("exp(5e5) gave %v and no error", g)
	}
}

func TestCheckKMS(t *testing.T) {
	var energies []*big.Rat
	for e := 1e-9; e < 1e4; e *= 7 {
		energies = append(energies, Exact(e), Exact(-e))
	}
	energies = append(energies, new(big.Rat), Exact(0.3), Exact(4))
	for _, beta := range []float64{0, 1e-3, 0.44, 5} {
		for _, l := range []Law{
			{Kind: HeatBath, Rate: 2},
			{Kind: Metropolis, Rate: 2},
			{Kind: Power, Rate: 2, Exponent: 1},
			{Kind: Power, Rate: 2, Exponent: 2.25, Cutoff: 3},
			{Kind: Symmetric, Rate: 2},
		} {
			list := energies
			if l.Kind == Power && beta == 0 {
				continue
			}
			if l.Kind == Symmetric {
				list = nil
				for _, w := range energies {
					if math.Abs(beta*float(w)) < 1400 { // exp(709) is the largest double
						list = append(list, w)
					}
				}
			}
			if err := CheckKMS(l, beta, list); err != nil {
				t.Errorf("beta = %v: %v", beta, err)
			}
		}
		l := Law{Kind: Table, Energies: []float64{0, 0.3, 4}, Rates: []float64{1, 0.5, 0.25}}
		if err := CheckKMS(l, beta, energies[len(energies)-3:]); err != nil {
			t.Errorf("beta = %v: %v", beta, err)
		}
	}
}

func TestTable(t *testing.T) {
	l := Law{Kind: Table, Energies: []float64{0, 0.3, 4}, Rates: []float64{1, 0.5, 0.25}}
	w := new(big.Rat).Add(Exact(0.1), Exact(0.2))
	if g, err := l.At(w, 1); err != nil || g != 0.5 {
		t.Errorf("G(0.1 + 0.2) = %v, %v", g, err)
	}
	if g := at(t, l, -4, 2); !near(g, 0.25*math.Exp(-8), 1e-15) {
		t.Errorf("G(-4) = %v", g)
	}
	_, err := l.At(Exact(-8), 1)
	var missing *MissingEnergyError
	if !errors.As(err, &missing) || missing.Energy.Cmp(Exact(8)) != 0 || !strings.Contains(err.Error(), "energy 8, which occurs; it lists 0, 0.3, 4") {
		t.Errorf("a missing energy gives %v", err)
	}
}

func TestValidate(t *testing.T) {
	for _, c := range []struct {
		law  Law
		beta float64
		says string // "" for a valid law
	}{
		{Law{Kind: HeatBath, Rate: 1}, 0, ""},
		{Law{Kind: Power, Rate: 1, Exponent: 1}, 0.1, ""},
		{Law{Kind: Table, Energies: []float64{0, 4}, Rates: []float64{0, 1}}, 1, ""},
		{Law{}, 1, `no law ""; there are heat-bath, metropolis`},
		{Law{Kind: "glauber", Rate: 1}, 1, `no law "glauber"`},
		{Law{Kind: HeatBath}, 1, "rate is 0"},
		{Law{Kind: HeatBath, Rate: -1}, 1, "rate is -1"},
		{Law{Kind: HeatBath, Rate: math.NaN()}, 1, "rate is NaN"},
		{Law{Kind: HeatBath, Rate: math.Inf(1)}, 1, "rate is +Inf"},
		{Law{Kind: HeatBath, Rate: 1}, -1, "beta is -1"},
		{Law{Kind: HeatBath, Rate: 1}, math.Inf(1), "beta is +Inf"},
		{Law{Kind: Power, Rate: 1, Exponent: 1}, 0, "no rates at beta = 0"},
		{Law{Kind: Power, Rate: 1}, 1, "exponent is 0"},
		{Law{Kind: Power, Rate: 1, Exponent: 0.5}, 1, "exponent is 0.5"},
		{Law{Kind: Power, Rate: 1, Exponent: 1, Cutoff: -2}, 1, "cutoff is -2"},
		{Law{Kind: Table}, 1, "no energies"},
		{Law{Kind: Table, Energies: []float64{1}, Rates: []float64{1, 2}}, 1, "1 energies and 2 rates"},
		{Law{Kind: Table, Energies: []float64{-1}, Rates: []float64{1}}, 1, "energy -1"},
		{Law{Kind: Table, Energies: []float64{2, 2}, Rates: []float64{1, 1}}, 1, "energies must increase"},
		{Law{Kind: Table, Energies: []float64{1, 2}, Rates: []float64{1, -1}}, 1, "rate -1"},
		{Law{Kind: Table, Energies: []float64{1, 2}, Rates: []float64{0, 0}}, 1, "nothing ever happens"},
	} {
		err := c.law.Validate(c.beta)
		if c.says == "" && err != nil || c.says != "" && (err == nil || !strings.Contains(err.Error(), c.says)) {
			t.Errorf("%+v at beta = %v: got %v, want %q", c.law, c.beta, err, c.says)
		}
	}
	both := Law{Kind: Power, Rate: -1, Exponent: 0.5}.Validate(1)
	if !strings.Contains(both.Error(), "rate") || !strings.Contains(both.Error(), "exponent") {
		t.Errorf("of two faults, got %v", both)
	}
}

func TestCanonical(t *testing.T) {
	a := Law{Kind: HeatBath, Rate: 1}
	b := Law{Kind: HeatBath, Rate: 1, Exponent: 2} // not used by the law
	c := Law{Kind: Metropolis, Rate: 1}
	if !bytes.Equal(a.AppendCanonical(nil), b.AppendCanonical(nil)) {
		t.Error("a number that the law does not use enters its canonical form")
	}
	if bytes.Equal(a.AppendCanonical(nil), c.AppendCanonical(nil)) {
		t.Error("two laws share a canonical form")
	}
}
