// Package bath holds the rate laws of the thermal generator: the rate G(w) at
// which a bath operator fires when the jump hands the bath the energy
//
//	w = E(before) - E(after).
//
// Every law obeys the condition of R. Kubo, J. Phys. Soc. Jpn. 12, 570 (1957)
// and P. C. Martin, J. Schwinger, Phys. Rev. 115, 1342 (1959),
//
//	G(-w) = exp(-beta w) G(w),
//
// which makes the Gibbs state stationary. Energies are exact rational numbers
// in the study's unit, beta is the inverse temperature in the inverse unit,
// k_B = 1; rates are in the unit of Law.Rate.
package bath
