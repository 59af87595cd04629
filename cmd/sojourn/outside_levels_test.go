package main

import (
	"fmt"
	"math"
	"testing"
)

// levelStudy writes a study of one point with 32 units of a model.
func levelStudy(size, hamiltonian, bath, times, rest string) string {
	return fmt.Sprintf("[lattice]\nsize = %s\n[hamiltonian]\n%s\n[bath]\n%s\n[trajectory]\ncount = 32\nseed = 77\n%s\n%s",
		size, hamiltonian, bath, times, rest)
}

func observe(kinds ...string) string {
	text := ""
	for _, k := range kinds {
		text += "[[observable]]\n" + k + "\n"
	}
	return text
}

// The Potts ring by its transfer matrix (textbook): partition function
// (e^b + q - 1)^N + (q - 1)(e^b - 1)^N, and covariances of the spins that fall off
// by the ratio of the two from one site to the next.
func TestOutsidePottsRing(t *testing.T) {
	const q, n, beta = 3.0, 48, 1.2
	for _, m := range measure(t, "", levelStudy("[48]", "model = \"potts\"", "beta = 1.2", "settle = 60.0\nspan = 1500.0\nstep = 0.5",
		observe("kind = \"energy\"", "kind = \"terms\"\nfamily = \"bond\"", "kind = \"magnetization\"")+"[covariance]\nof = \"spin\"\nevery = 2.0\n")) {
		lnZ := func(b float64) float64 {
			return n*math.Log(math.Exp(b)+q-1) + math.Log1p((q-1)*math.Pow((math.Exp(b)-1)/(math.Exp(b)+q-1), n))
		}
		const h = 1e-5
		energy := -(lnZ(beta+h) - lnZ(beta-h)) / (2 * h)
		m.hold(t, "mean energy", m.observable(t, "energy").Mean, energy, onePercent)
		m.hold(t, "satisfied bonds", m.observable(t, "terms-bond").Mean, -energy, onePercent)
		ratio := (math.Exp(beta) - 1) / (math.Exp(beta) + q - 1)
		// The complex sum of the spins varies by the sum of their covariances.
		variance := n * ((1 + ratio) / (1 - ratio)) // up to ratio^48
		m.hold(t, "variance of the magnetization", m.observable(t, "magnetization").Variance, variance, 0.03)
		if len(m.result.Decay) != 1 {
			t.Fatalf("%d decays", len(m.result.Decay))
		}
		m.hold(t, "xi", m.result.Decay[0].Xi, -1/math.Log(ratio), 0.03)
	}
}

// At beta = 0 a Potts spin goes to each other level at G(0) = 1/2, and everything
// made of one spin decays at q/2 (elementary).
func TestOutsideHotPotts(t *testing.T) {
	for _, m := range measure(t, "", levelStudy("[6, 5]", "model = \"potts\"\nlevels = 5", "beta = 0.0", "settle = 10.0\nspan = 600.0\nstep = 0.1",
		observe("kind = \"magnetization\"", "kind = \"local\"\nfamily = \"spin\"", "kind = \"fourier\"\nfamily = \"spin\"\nwavevector = [1, 2]"))) {
		for _, name := range []string{"magnetization", "local-spin", "fourier-spin-1-2"} {
			o := m.observable(t, name)
			m.hold(t, "tau_int of "+name, o.Integrated, 0.4, threePercent)
			m.hold(t, "tau_initial of "+name, o.Initial, 0.4, threePercent)
			scale := 30.0
			if name == "local-spin" {
				scale = 1
			}
			m.holdCurve(t, name, func(t float64) float64 { return scale * math.Exp(-2.5*t) })
		}
	}
}

// The Potts model of two levels is the Ising model of half the coupling, energies
// counted from another zero; the clock model of four levels is two of them, of
// which each of the moves X and X^-1 turns one. On a ring both forget their
// magnetization after 1/(1 - tanh beta) (R. J. Glauber, J. Math. Phys. 4, 294
// (1963)).
func TestOutsideLevelsThatAreIsing(t *testing.T) {
	const beta, n = 0.8, 24.0
	th := math.Tanh(beta / 2)
	bond := (th + math.Pow(th, n-1)) / (1 + math.Pow(th, n)) // <s s'>
	for _, c := range []struct {
		model  string
		energy float64
	}{
		{"model = \"potts\"\nlevels = 2", -n * (1 + bond) / 2},
		{"model = \"clock\"\nlevels = 4", -n * bond},
	} {
		for _, m := range measure(t, "", levelStudy("[24]", c.model, "beta = 0.8", "settle = 60.0\nspan = 1500.0\nstep = 0.25",
			observe("kind = \"energy\"", "kind = \"magnetization\""))) {
			m.hold(t, "mean energy", m.observable(t, "energy").Mean, c.energy, onePercent)
			m.hold(t, "tau_int of the magnetization", m.observable(t, "magnetization").Integrated, 1/(1-math.Tanh(beta)), threePercent)
			m.hold(t, "tau_initial of the magnetization", m.observable(t, "magnetization").Initial, 1/(1-math.Tanh(beta)), threePercent)
		}
	}
}

// Terms of the planar code are independent: their mean is tanh(beta). Plaquettes
// of the toric code over Z_q have one relation, that their levels add up to 0: with
// w(s) = exp(beta cos(2 pi s/q)), W_k = sum_s w(s) cos(2 pi k s/q) and U_k the same
// sum with another factor cos(2 pi s/q), their mean on N cells is
// sum_k U_k W_k^(N-1) / sum_k W_k^N (elementary).
func TestOutsideCodesOfLevels(t *testing.T) {
	for _, m := range measure(t, "", levelStudy("[5, 4]", "model = \"planar-code\"", "beta = 0.7\ncouples = [\"X\", \"Y\", \"Z\"]", "settle = 20.0\nspan = 600.0\nstep = 0.2",
		observe("kind = \"terms\"\nfamily = \"plaquette\"", "kind = \"terms\"\nfamily = \"star\"", "kind = \"energy\""))) {
		m.hold(t, "plaquettes", m.observable(t, "terms-plaquette").Mean, 15*math.Tanh(0.7), onePercent)
		m.hold(t, "stars", m.observable(t, "terms-star").Mean, 16*math.Tanh(0.7), onePercent)
		m.hold(t, "energy", m.observable(t, "energy").Mean, -31*math.Tanh(0.7), onePercent)
	}
	const q, n, beta = 3, 6.0, 1.1
	above, below := 0.0, 0.0
	for k := range q {
		w, u := 0.0, 0.0
		for s := range q {
			v := math.Cos(2 * math.Pi * float64(s) / q)
			x := math.Exp(beta*v) * math.Cos(2*math.Pi*float64(k*s)/q)
			w += x
			u += v * x
		}
		above += u * math.Pow(w, n-1)
		below += math.Pow(w, n)
	}
	for _, m := range measure(t, "", levelStudy("[3, 2]", "model = \"toric-code\"\nlevels = 3", "beta = 1.1\ncouples = [\"X\", \"Z\"]", "settle = 30.0\nspan = 2000.0\nstep = 0.25",
		observe("kind = \"terms\"\nfamily = \"plaquette\"", "kind = \"terms\"\nfamily = \"star\""))) {
		m.hold(t, "plaquettes", m.observable(t, "terms-plaquette").Mean, n*above/below, onePercent)
		m.hold(t, "stars", m.observable(t, "terms-star").Mean, n*above/below, onePercent)
	}
}
