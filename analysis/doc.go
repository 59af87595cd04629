// Package analysis infers relaxation times, their errors and the decay of
// covariances in space from raw sums of stationary trajectories. It is numbers
// to numbers: it reads no files and prints nothing.
//
// [Infer] does one point of a study:
//
//  1. segments of trajectories are gathered into resampling blocks of at least
//     20 relaxation times; all errors come from leaving out one block at a time
//     and repeating the whole calculation;
//  2. covariances C_fg(t) are pooled with one grand mean and corrected for its
//     variance;
//  3. each observable gets tau_initial, tau_int and bounds on tau_slowest;
//  4. the set of observables gets its slow mode and a variational bound;
//  5. plane-summed covariances get their correlation length;
//  6. the tests of stationarity are made, and what was found wanting is said in
//     warnings with codes.
//
// [Compare] looks at all points of a study together: it corrects the tests for
// their number and fits trends in size and temperature.
//
// Symbols. C(t) = Cov(f(0), f(t)); E = E(f,f) = -C'(0) the Dirichlet form;
// lambda_k and c_k >= 0 the rates and weights of C(t) = sum_k c_k exp(-lambda_k t)
// (reversibility). Times are in the unit of the recorded step.
//
//	tau_initial = C(0)/E        <=  tau_int = (integral of C)/C(0)
//	                            <=  slowest time in f  <=  1/gap
//
// No finite set of observables certifies the gap: every relaxation time from
// data is a lower bound on 1/gap. A short correlation length is necessary for
// fast mixing, not sufficient.
//
// Every number is an [Estimate]: a value with its error, or the reason why
// there is none.
package analysis
