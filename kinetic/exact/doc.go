// Package exact computes, without sampling, what trajectories of a thermal
// generator estimate: on lattices small enough to list every state.
//
// A state is the list of levels of all terms of the Hamiltonian and of all
// tracked operators. [NewSystem] folds and cuts the operators on the real
// lattice and finds what every jump of the bath does to them, by commutation;
// [System.Explore] lists the class of the reference state under jumps of
// positive rate and the transition rates within it; [States] then gives
// eigenvalues, covariances in time and space, and relaxation times.
//
// Reversibility (the KMS condition, G(-w) = exp(-beta w) G(w)) makes the
// generator L symmetric in the Gibbs scalar product. With pi the Gibbs weights,
//
//	H = -D L D^-1,  D = diag(sqrt(pi)),
//
// is a real symmetric matrix whose eigenvalues 0 = lambda_0 < lambda_1 <= ...
// are the relaxation rates; lambda_1 is the gap. An observable f has the
// covariance
//
//	C(t) = sum_k c_k exp(-lambda_k t),  c_k = <v_k, D (f - <f>)>^2.
//
// The package works from [kinetic.Spec] and shares neither tables nor code with
// the compiler of [kinetic.Generator], so that each can be held against the
// other. Energies are in the study's unit, times in the inverse of the bath's
// base rate, k_B = 1.
//
// It does not know coherences: 1/gap is the relaxation time of the commuting
// observables, a lower bound on that of the full quantum generator.
package exact
