// Sojourn draws exact trajectories of the thermal dynamics of commuting lattice
// Hamiltonians, records autocorrelations, and fits relaxation times and the
// decay of covariances in space. See `sojourn help` and the README.
//
// The command wires the rooms together and holds no physics: a study is read by
// configs, compiled by kinetic, recorded by observables into the archive, and
// judged by analysis. What others' programs rely on (verbs, flags, exit codes,
// keys, columns) stands in tables of this package, from which help, README and
// tests are made.
package main
