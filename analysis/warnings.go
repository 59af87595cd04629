package analysis

import "fmt"

// WarningKind describes one warning code. Codes are stable.
type WarningKind struct {
	Code      string
	Meaning   string
	Threshold string // "" where there is none
	// Note marks remarks: findings and reasons of absence that throw no doubt on
	// the numbers that are there.
	Note bool
}

// Codes of warnings, and of the reasons why estimates are missing.
const (
	codeFewUnits      = "few_units"
	codeShortTotal    = "short_total"
	codeShortSpan     = "short_span"
	codeCoarseStep    = "coarse_step"
	codeNoise         = "noise"
	codeConstant      = "constant"
	codeNoData        = "no_data"
	codeErrorsDiffer  = "errors_differ"
	codeChain         = "chain_violated"
	codeDrift         = "drift"
	codeStarts        = "starts_disagree"
	codeStartsUnknown = "starts_not_compared"
	codeInhomogeneous = "inhomogeneous"
	codeSingle        = "not_single"
	codeSingleLate    = "single_at_late_times"
	codePlateau       = "plateau_not_reached"
	codeBarelySeen    = "slow_mode_barely_seen"
	codeCloseRates    = "close_rates"
	codeReduced       = "observables_reduced"
	codeNoDecay       = "no_decay_in_lattice"
	codeSmallLattice  = "small_lattice"
	codeWeightFloor   = "weight_floor"
	codeNotMeaningful = "not_meaningful"
	codeNotReached    = "equilibrium_not_reached"
	codeLowerBound    = "lower_bound"
	codeSwitching     = "two_wells"
	codeFrozen        = "frozen"
	codePoorFit       = "poor_fit"
	codeExtrapolated  = "extrapolated"
	codeSamples       = "samples_missing"
)

// WarningKinds lists every warning code that results can carry.
var WarningKinds = []WarningKind{
	{codeFewUnits, "too few resampling blocks for an error that can be trusted", "refused below 4; fit-based values refused below 8, doubtful below 16", false},
	{codeShortTotal, "the total time of all trajectories is short against the relaxation time", "doubtful below 160 tau, refused below 40 tau", false},
	{codeShortSpan, "one trajectory is short against the relaxation time", "doubtful below 20 tau; refused where lags (a quarter of the span) end while they may leave out 0.4 of the standard error", false},
	{codeCoarseStep, "the time between samples is long against the initial relaxation time", "doubtful above 0.5 tau_initial, refused above 1.6 tau_initial", false},
	{codeNoise, "the covariance cannot be told from noise", "", false},
	{codeConstant, "the observable did not change", "", true},
	{codeNoData, "nothing was recorded that the estimate could be made from", "", false},
	{codeErrorsDiffer, "resampling and Wolff's formula give different errors of tau_int", "a factor above 1.5 with at least 16 blocks", false},
	{codeChain, "tau_initial <= tau_int <= tau_slowest does not hold within errors", "3 standard errors", false},
	{codeDrift, "the mean drifts along the recorded span", "5 % over the study (Holm)", false},
	{codeStarts, "trajectories from different starts disagree", "5 % over the study (Holm)", false},
	{codeStartsUnknown, "trajectories from different starts could not be compared", "fewer than 2 units of one start", false},
	{codeInhomogeneous, "an average over positions was taken where positions are not equivalent", "open axes", false},
	{codeSingle, "declared a single exponential, but the data contradict it", "5 %", false},
	{codeSingleLate, "declared a single exponential: a part decays faster at first, but not later within errors", "5 %", true},
	{codePlateau, "no plateau: the slow mode's time still grows at the last usable lag", "fewer than 3 valid points, or a rise above 2 standard errors", false},
	{codeBarelySeen, "the observables hardly overlap with the slow mode", "largest share below 0.2", false},
	{codeCloseRates, "two slow rates lie close together and may not be resolved: the time is a lower bound", "within a factor of 2", false},
	{codeReduced, "observables were left out of the slow mode", "constant, or a correlation-matrix eigenvalue below 0.05", true},
	{codeNoDecay, "the covariance in space does not decay within the lattice", "fitted length above half the lattice", true},
	{codeSmallLattice, "the lattice is small against the correlation length", "L below 6 xi", false},
	{codeWeightFloor, "the interval of tau_slowest assumes that the slowest mode carries a stated share of the variance", "", true},
	{codeNotMeaningful, "the quantity has no meaning here", "", true},
	{codeNotReached, "the mean did not come close to its limit within the recorded time", "", false},
	{codeLowerBound, "the value is a lower bound on 1/gap", "", true},
	{codePoorFit, "no form fits the trend", "best chi^2 above its degrees of freedom by 4 standard deviations", false},
	{codeExtrapolated, "a time lies beyond what was recorded clearly and was extrapolated", "", true},
	{codeSwitching, "the observable has two wells, and its flips between them take over from C(t)", "a span below 20 tau", false},
	{codeSamples, "an average over samples of random couplings lacks some of them", "", false},
	{codeFrozen, "no jumps happened in a trajectory", "", false},
}

var warningKinds = func() map[string]*WarningKind {
	m := make(map[string]*WarningKind, len(WarningKinds))
	for i := range WarningKinds {
		k := &WarningKinds[i]
		if m[k.Code] != nil {
			panic("analysis: warning code listed twice: " + k.Code)
		}
		m[k.Code] = k
	}
	return m
}()

// Note reports whether the warning is a remark, which throws no doubt on the
// numbers that are there.
func (w Warning) Note() bool {
	k := warningKinds[w.Code]
	return k != nil && k.Note
}

// known returns code, which must be in the table.
func known(code string) string {
	if warningKinds[code] == nil {
		panic("analysis: warning code not listed: " + code)
	}
	return code
}

func warn(code, format string, args ...any) Warning {
	return Warning{Code: known(code), Text: fmt.Sprintf(format, args...)}
}
