// Package observables records what a trajectory shows: covariances in time and
// in space, moments, Dirichlet forms and decay from a prepared start, all as
// raw sums that pool by addition.
//
// [Bind] resolves requested quantities against a compiled generator, and
// [Record] drives one engine through one unit (a trajectory, or a bundle of
// lanes) and returns its sums as a [Unit]. The tables that hold them are
// described by [Tables].
//
// # Course of a unit
//
//  1. From time 0 the engine runs for the settling time. Observables are read at
//     the times of [TransientTimes].
//  2. Samples are taken at settle + k*step, k = 0..n-1, n = round(span/step).
//     The n samples fall into [MomentSegments] equal segments for moments and
//     [PairSegments] for pairs of times.
//  3. At a stride of samples the Dirichlet forms are read from the census of
//     patterns, and snapshots of the lattice give the spatial covariance.
//
// # Symbols
//
//	beta          inverse temperature, 1/energy
//	t, settle,    time, in the inverse of the bath's base rate: one attempt per
//	span, step    site, bath operator and unit of time at G = 1
//	s_r           value of the term on the cell at r: +1 or -1 for two levels
//	f, g          observables: totals over the lattice
//	lag           time between the members of a pair, in steps
//	C_fg(t)       <f(0) g(t)> - <f><g>
//	E(f,g)        1/2 < sum_a r_a (Delta_a f)(Delta_a g) > = -C_fg'(0)
//	K(d)          <s_r s_(r+d)> - <s_r><s_(r+d)>
//
// The generator satisfies detailed balance, so C_fg(t) = C_gf(t): both orders
// of a cross pair are counted. An observable with several components (see
// [Observable]) enters with the sum over components of the products, divided
// by its norm.
//
// # What is exact
//
// Pairs are products at true lags, of single samples: nothing is averaged over
// time before it is multiplied. Scalars are accumulated as differences from
// their value in the first sample and expanded to sums about zero with 256-bit
// arithmetic, rounded once: the rounding of a covariance in a row is about
// 2^-53 of the mean squared, not of the number of samples. Spins are counted
// in integers. Rows are the same bit for bit whenever the engine's trajectory
// is; neither time of day nor the pieces in which the engine is advanced enter.
//
// With q > 2 levels a term of level s has the value -E(s)/J, and a tracked operator
// the eigenvalue exp(2 pi i s/q): products of complex values are Re f^* g, and
// their means stand in the records as the sum of real and imaginary part, one of
// which vanishes.
//
// No statistics are done here: means, errors and fits are the reader's.
package observables
