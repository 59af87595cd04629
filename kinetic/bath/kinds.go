package bath

import "strings"

// KindDoc is a law and what help texts say about it.
type KindDoc struct {
	Kind    Kind
	Formula string   // G(w), b being the inverse temperature
	Doc     string   // one line
	Keys    []string // of a study file, besides law
}

// Kinds lists the laws in the order in which help texts name them.
func Kinds() []KindDoc {
	return []KindDoc{
		{HeatBath, "rate/(1 + exp(-b w))", "each attempt redraws the site from its conditional Gibbs state; G(0) = rate/2", []string{"rate"}},
		{Metropolis, "rate min(1, exp(b w))", "a jump that does not raise the energy always happens; G(0) = rate", []string{"rate"}},
		{Power, "rate w |w|^(exponent-1) exp(-|w|/cutoff)/(1 - exp(-b w))", "bath of oscillators with a power spectrum; needs b > 0; G(0) = rate/b for exponent 1, else 0", []string{"rate", "exponent", "cutoff"}},
		{Symmetric, "rate exp(b w/2)", "both directions of a jump share one prefactor; grows without bound; G(0) = rate", []string{"rate"}},
		{Table, "rates at energies w >= 0, G(-w) = exp(-b w) G(w)", "measured or computed rates, at exactly the energies that occur", []string{"energies", "rates"}},
	}
}

func kindNames() string {
	var names []string
	for _, k := range Kinds() {
		names = append(names, string(k.Kind))
	}
	return strings.Join(names, ", ")
}
