// Package kinetic compiles the thermal generator of a commuting lattice
// Hamiltonian into tables, and draws exact continuous-time jump trajectories
// from them.
//
// The weak-coupling generator (E. B. Davies, Commun. Math. Phys. 39, 91
// (1974)), restricted to the terms of the Hamiltonian and the tracked
// operators, is a Markov chain: each bath operator on each site fires at rate
// G(w), w being the energy handed to the bath, and changes a few nearby terms.
//
// A site has q levels, 2 to 16. A term is a product of powers of generalised Pauli
// operators, Z X = w X Z with w = exp(2 pi i/q); its level s says that its
// eigenvalue is w^s, and a bath operator adds to it, mod q. For q > 2 each bath
// operator comes with its inverse. What tables by pattern cannot hold is then
// computed ([Wide]).
//
// A [Spec] says what the Hamiltonian and the bath are; [Compile] turns it into
// a [Generator]; an [Engine] runs it. Energies are in the study's unit, times
// in the inverse of the bath's base rate, k_B = 1. The package knows nothing of
// study files, tables or statistics.
package kinetic
