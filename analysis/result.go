package analysis

// Options are the choices of an inference. The zero value is the default.
type Options struct {
	// WeightFloor is the share of the variance that the slowest mode is assumed
	// to carry in the two-sided interval of tau_slowest. Default 0.2.
	WeightFloor float64
	// Precision is the relative error that the advice on run lengths aims at.
	// Default 0.03.
	Precision float64
	// Epsilon is the distance from equilibrium, as a share of the first
	// distance, that approach times refer to. Default 0.05.
	Epsilon float64
}

// Result is everything inferred about one point.
type Result struct {
	// Beta, Size and Group repeat the point's place in the study.
	Beta  float64
	Size  []int
	Open  []bool
	Group string

	// Equilibrated is false if a test of stationarity rejected it. Infer sets
	// it from the point's own tests (Holm over the point); Compare again, over
	// the study.
	Equilibrated  bool
	Observables   []ObservableResult
	EnergyPerSite Estimate // JSON energy_per_site, energy_per_site_err
	SlowMode      SlowMode
	Decay         []Decay
	Curves        []Curve        // covariances in time, in the order of Point.Pairs
	Spatial       []SpatialCurve // covariances in space
	Approach      []Approach     // from prepared starts
	Tests         []Test
	Mixing        Mixing
	Advice        []Advice
	Warnings      []Warning // about the point as a whole
}

// ObservableResult is what was inferred about one observable. Its JSON keys are
// the names in the comments; an estimate that is not OK is left out, and its
// reason stands in Warnings.
type ObservableResult struct {
	Name     string
	Mean     Estimate // mean, mean_err
	Variance Estimate // variance, variance_err: the equilibrium variance C(0)
	Kurtosis Estimate // kurtosis, kurtosis_err: E(f-mean)^4 / Var^2

	Initial    Estimate // tau_initial, tau_initial_err
	Integrated Estimate // tau_int, tau_int_err, tau_int_low, tau_int_high
	// Model is a second value of tau_int, from sums of exponentials: smaller
	// error, but it rests on the model. JSON tau_int_model, tau_int_model_err.
	Model Estimate
	// Single is the relaxation time of an observable declared a single
	// exponential. JSON tau_single, tau_single_err. SingleTest compares it with
	// tau_initial, SingleLate with the decay at later times; their P is small
	// when the data contradict the declaration.
	Single                 Estimate
	SingleTest, SingleLate Test

	// Slowest is where the decay levels off within the data (an average over
	// plateaus of the effective time). It estimates from below and has no
	// two-sided error: only Value is meaningful. JSON tau_slowest.
	Slowest Estimate
	// SlowestBound: with 95 % confidence the slowest time in f is larger.
	// JSON tau_slowest_bound.
	SlowestBound Bound
	// SlowestInterval holds if the slowest mode carries at least WeightFloor of
	// the variance. JSON tau_slowest_low, tau_slowest_high, weight_floor; High
	// is left out when infinite.
	SlowestInterval Interval
	WeightFloor     float64
	// Switching is what flips between two wells say. JSON flips, flip_level,
	// tau_flips, tau_flips_low, tau_flips_high, tau_flips_bound.
	Switching Switching
	// Shape says which form the decay prefers: exponential, stretched, power.
	Shape Shape

	// Window is where the sum for tau_int stops, in units of time. JSON window.
	Window float64
	// FormulaErr is Wolff's standard error of tau_int (eq. 42 of the paper), a
	// cross-check of Integrated.Err; 0 where it does not apply. JSON
	// tau_int_err_formula.
	FormulaErr float64

	Warnings []Warning
}

// Warning is something to know about an estimate, with a stable code (see
// [WarningKinds]) and a sentence with the numbers.
type Warning struct {
	Code string
	Text string
}

// SlowMode is the slowest combination of the scalar observables.
type SlowMode struct {
	Tau   Estimate // tau, tau_err: plateau of the generalised eigenvalue
	Bound Bound    // tau_bound, confidence: one-sided lower bound on 1/gap
	// Rayleigh is the best Rayleigh quotient: the largest Var/E over linear
	// combinations, a variational lower bound on 1/gap. JSON tau_rayleigh,
	// tau_rayleigh_err, tau_rayleigh_bound.
	Rayleigh      Estimate
	RayleighBound Bound
	// Shares tells what the mode is made of: for each observable that took
	// part, the squared correlation with the mode.
	Shares []Share
	// Dropped names observables (or the number of combinations) left out, and
	// why.
	Dropped  []string
	Warnings []Warning
}

// Share is one observable's part in the slow mode.
type Share struct {
	Name  string
	Value float64 // squared correlation with the mode, 0 to 1
	Err   float64
}

// Decay is the decay in space of one family along one axis.
type Decay struct {
	Of           string
	Axis         int
	Xi           Estimate // xi, xi_err: correlation length of plane sums
	SecondMoment Estimate // xi_second_moment, xi_second_moment_err
	// Amplitude c normalised by the variance: K(r) <= c K(0) exp(-r/xi) where
	// the fit holds.
	Amplitude Estimate
	From, To  int  // distances over which the fit has weight
	NoDecay   bool // the covariance does not decay within the lattice: a finding
	Warnings  []Warning
}

// Curve is a pooled covariance in time, corrected for the variance of the mean.
type Curve struct {
	F, G  string
	Times []float64
	C     []float64
	Err   []float64 // one standard error; 0 with fewer than two blocks
	Pairs []int64   // pairs of samples
	// Rate is the effective rate -d ln C/dt between this time and the next, for
	// plots (F = G only); NaN-free: RateErr is -1 where C is not positive.
	Rate    []float64
	RateErr []float64
}

// SpatialCurve is a covariance in space: plane sums by distance along Axis, or
// (Axis -1) points by displacement.
type SpatialCurve struct {
	Of            string
	Axis          int
	Displacements [][]int // one entry each for planes: the distance
	K             []float64
	Err           []float64
}

// Approach is the relaxation of a mean from a prepared start. For starts up and
// down taken together Start is "up-down" and the mean is half the difference.
type Approach struct {
	Observable string
	Start      string
	Times      []float64
	Mean       []float64
	Err        []float64
	Limit      Estimate // equilibrium mean that it is compared with
	// Time is when the mean has come within Epsilon of the limit, in units of
	// its first distance, and stays there within errors.
	Time    Estimate
	Epsilon float64
	// Tau is the time of the last exponential decay seen; for up-down of an
	// attractive model it estimates 1/gap.
	Tau Estimate
	// Coupling (up-down only) is when half the difference of the two total
	// magnetisations falls to 1/4: where jumps preserve order (ferromagnets with
	// single-spin rates), an upper bound of the mixing time to distance 1/4.
	Coupling Estimate
	Warnings []Warning
}

// Mixing bounds the time to come within Distance of equilibrium, in total
// variation, from every start.
type Mixing struct {
	Distance float64
	Lower    Bound    // follows from the lower bound on 1/gap
	Volume   Estimate // upper bound, only if tau of the slow mode is 1/gap
	Text     string
}

// Test is a significance test.
type Test struct {
	Kind       string // drift, starts, single
	Observable string
	Statistic  float64 // Student's t
	Dof        float64
	P          float64 // two-sided, on its own
	Adjusted   float64 // Holm-corrected over all tests of its kind in the study
	Rejected   bool    // Adjusted below 0.05
	OK         bool    // false: could not be made
	Reason     string
}

// Advice says how long to run for a stated precision.
type Advice struct {
	Observable string
	Quantity   string  // tau_int
	Precision  float64 // relative error aimed at
	Total      float64 // total time of all trajectories, in units of time
	TauTotal   float64 // the same in units of the relaxation time
	Factor     float64 // times what was run
	Jumps      float64 // 0 if unknown
	Seconds    float64 // processor time, 0 if unknown
	Text       string
}

// Comparison is what all points of a study say together.
type Comparison struct {
	Trends   []Trend
	Warnings []Warning
}

// Trend is a quantity against a parameter, all others fixed.
type Trend struct {
	Quantity   string // tau_int, tau_slow_mode, xi, approach
	Observable string
	Against    string // length, beta, xi
	Group      string // what is fixed
	Points     []TrendPoint
	Models     []TrendModel // by decreasing weight
	Regime     string       // in words that do not overclaim
	Warnings   []Warning
}

// TrendPoint is one point of a trend.
type TrendPoint struct {
	Result int // index into the results compared
	X      float64
	Y, Err float64
}

// TrendModel is one form fitted to a trend.
type TrendModel struct {
	Name       string // constant, logarithm, power, ...
	Formula    string
	Parameters []Parameter
	Chi2       float64
	Dof        int
	Weight     float64 // among the models fitted, from the information criterion
}

// Parameter is a fitted parameter.
type Parameter struct {
	Name       string
	Value, Err float64
}

// Shape compares forms of the decay of C(t)/C(0) at the recorded lags.
type Shape struct {
	OK     bool
	Reason string
	// Prefers is exponential (one or two are not contradicted), stretched, power,
	// or not exponential (stretched or power).
	Prefers string
	Forms   []TrendModel // by decreasing weight
}
