package configs

import "sojourn/kinetic"

// autoEngine leaves the choice of the engine to this package.
const autoEngine = "auto"

// lawKeys are the keys of a law, in [bath] and in [[bath.operator]]. The law of
// an operator defaults to that of [bath].
func lawKeys(law, rate string) []Key {
	return []Key{
		{Name: "law", Type: Word, Words: laws, Default: law,
			Doc: "rate G(w) of a jump that hands the energy w to the bath; ohmic is power with exponent 1"},
		{Name: "rate", Type: Number, Range: positive, Default: rate, Scan: true,
			Needs: "not with table", Doc: "Gamma, or kappa of a power law: sets the unit of time"},
		{Name: "exponent", Type: Number, Range: oneUp, Scan: true, Needs: "with power",
			Doc: "p of a power law"},
		{Name: "cutoff", Type: Number, Range: positive, Scan: true, Needs: "power and ohmic only",
			Doc: "w_c: rates fall off as exp(-|w|/w_c); without it there is no cutoff"},
		{Name: "energies", Type: Numbers, Range: notNegative, Needs: "with table",
			Doc: "the energies w >= 0 that jumps can hand to the bath, increasing"},
		{Name: "rates", Type: Numbers, Range: notNegative, Needs: "with table",
			Doc: "G at these energies; G(-w) follows from detailed balance"},
	}
}

// powersKey says which powers of a bath operator there are.
func powersKey(otherwise string) Key {
	return Key{Name: "powers", Type: Integers, Range: oneUp, Default: otherwise, Needs: "more than 2 levels",
		Doc: "powers of X, Y = XZ and Z, each a bath operator of its own; inverses are added"}
}

// laws are the laws as a study names them.
var laws = []string{"heat-bath", "metropolis", "power", "ohmic", "symmetric", "table"}

// The kinds of observables.
const (
	kindEnergy        = "energy"
	kindMagnetization = "magnetization"
	kindTerms         = "terms"
	kindLocal         = "local"
	kindFourier       = "fourier"
	kindOperator      = "operator"
)

var kinds = []string{kindMagnetization, kindEnergy, kindTerms, kindLocal, kindFourier, kindOperator}

// schema is every table and key of a study file but for the parameters of
// built-in Hamiltonians.
var schema = []Section{
	{Name: "", Doc: "", Keys: []Key{
		{Name: "title", Type: Text, Doc: "one line for people"},
	}},
	{Name: "lattice", Doc: "The box of cells.", Keys: []Key{
		{Name: "size", Short: "size", Type: Integers, Range: oneUp, Scan: true,
			Needs: "needed, here or in a scan", Doc: "cells along each axis, 1 to 4 axes"},
		{Name: "boundary", Type: WordOrWords, Words: []string{"periodic", "open"}, Default: "periodic",
			Doc: "for all axes, or one word per axis"},
	}},
	{Name: "hamiltonian", Doc: "The commuting Hamiltonian: a built-in one with its parameters, or custom.", Keys: []Key{
		{Name: "model", Type: Name, Needs: "needed", Doc: "a built-in Hamiltonian (see sojourn models), or custom"},
		{Name: "levels", Type: Integer, Range: Range{Set: true, Min: 2, Max: 16}, Default: "2", Needs: "custom; a parameter of some models",
			Doc: "q, levels of a site"},
		{Name: "sites_per_cell", Type: Integer, Range: Range{Set: true, Min: 1, Max: 64}, Default: "1", Needs: "custom only",
			Doc: "sites in each cell"},
	}},
	{Name: "hamiltonian.family", Repeated: true, Doc: "One term per cell of a custom Hamiltonian: -coupling times a product of Pauli operators.", Keys: []Key{
		{Name: "name", Type: Name, Needs: "needed", Doc: "what observables call it"},
		{Name: "x", Type: Polynomials, Doc: "sites on which the term has an X"},
		{Name: "z", Type: Polynomials, Doc: "sites on which the term has a Z"},
		{Name: "coupling", Type: Number, Default: "1", Scan: true, Doc: "J; J > 0 favours the value +1"},
		{Name: "energies", Type: WordOrNumbers, Words: []string{"clock", "potts"}, Default: "clock",
			Doc: "energy of level s: -J cos(2 pi s/q), which for two levels is -J and J; -J at s = 0 and 0 elsewhere; or J times one number for each level"},
		{Name: "cut", Type: WordOrWords, Words: []string{"drop", "truncate"}, Default: "drop",
			Doc: "at open edges a term that would leave the lattice, or meet an absent site, is absent or keeps the factors inside; for all axes, or one word per axis"},
		{Name: "group", Type: Name, Doc: "families of one group can be asked for together"},
	}},
	{Name: "hamiltonian.tracked", Repeated: true, Doc: "An operator without energy whose value is followed; it commutes with every term.", Keys: []Key{
		{Name: "name", Type: Name, Needs: "needed", Doc: "what observables call it"},
		{Name: "x", Type: Polynomials, Doc: "as in a family, or \"line x\", \"plane x y\": the product along whole axes"},
		{Name: "z", Type: Polynomials, Doc: "likewise"},
		{Name: "order", Type: Flag, Default: "false", Doc: "its sum over the lattice is the magnetization"},
	}},
	{Name: "hamiltonian.absent", Repeated: true, Doc: "A site that the cells at one open edge of a custom Hamiltonian lack.", Keys: []Key{
		{Name: "site", Type: Integer, Range: notNegative, Needs: "needed", Doc: "site of the cell, counted from 0"},
		{Name: "axis", Type: Word, Words: []string{"x", "y", "z", "w"}, Needs: "needed", Doc: "axis that ends at the edge"},
		{Name: "end", Type: Word, Words: []string{"first", "last"}, Needs: "needed", Doc: "cells with the first coordinate along it, or the last"},
	}},
	{Name: "hamiltonian.disorder", Repeated: true, Single: true, Doc: "Couplings that vary from term to term, drawn at random; with a single table also written [hamiltonian.disorder]. Each sample makes every point of the scan once.", Keys: []Key{
		{Name: "of", Type: Name, Default: "all terms of several sites", Needs: "several tables, or a custom model of several families", Doc: "a family or a group"},
		{Name: "kind", Type: Word, Words: []string{gaussian, plusMinus}, Needs: "needed",
			Doc: "gaussian: J is normally distributed, whatever the family's coupling; plus-minus: the family's coupling, or minus that"},
		{Name: "mean", Type: Number, Needs: "with gaussian", Scan: true, Doc: "of J"},
		{Name: "sd", Type: Number, Range: positive, Needs: "with gaussian", Scan: true, Doc: "standard deviation of J"},
		{Name: "probability", Type: Number, Range: Range{Set: true, Min: 0, Max: 1}, Needs: "with plus-minus", Scan: true, Doc: "of -J"},
		{Name: "samples", Type: Integer, Range: Range{Set: true, Min: 1, Max: maxPoints}, Default: "1",
			Doc: "draws of all random couplings, numbered from 0 in the column hamiltonian_disorder_sample; the same at all other scanned values"},
		{Name: "seed", Type: Integer, Range: seedRange, Default: "1", Scan: true, Doc: "of the random couplings"},
	}},
	{Name: "bath", Doc: "The thermal bath and its coupling to the sites.", Keys: append([]Key{
		{Name: "beta", Short: "beta", Type: Number, Range: notNegative, Scan: true,
			Needs: "needed, here or in a scan", Doc: "inverse temperature, in inverse energy units"}},
		append(lawKeys("heat-bath", "1"),
			Key{Name: "couples", Type: Words, Words: []string{"X", "Y", "Z"}, later: []string{"XX"}, Default: `["X"]`, Needs: "not with [[bath.operator]]",
				Doc: "the bath operators on each site, all with this law"},
			powersKey("those of the model, or [1]"))...)},
	{Name: "bath.operator", Repeated: true, Doc: "One bath operator with a strength and law of its own; what it leaves out is taken from [bath].",
		Keys: append(append([]Key{
			{Name: "on", Type: Word, Words: []string{"X", "Y", "Z"}, later: []string{"XX"}, Needs: "needed", Doc: "the operator that couples a site to the bath"}},
			lawKeys("that of [bath]", "that of [bath]")...),
			powersKey("those of [bath]"),
			Key{Name: "sites", Type: Integers, Range: notNegative, Doc: "sites of the cell that it acts on, counted from 0; without it, all"})},
	{Name: "trajectory", Doc: "How many trajectories, from where and how long.", Keys: []Key{
		{Name: "count", Short: "count", Type: Integer, Range: countRange, Default: "16", Scan: true,
			Doc: "independent units per point"},
		{Name: "start", Type: Word, Words: []string{"reference", "random", "up", "down", "both"}, later: []string{"equilibrium"}, Default: "random",
			Doc: "the first state; both takes up in even units and down in odd ones, or without spins reference and random"},
		{Name: "settle", Short: "settle", Type: Number, Range: notNegative, Default: "100/G", Scan: true,
			Doc: "time discarded; G is the largest rate of one bath operator"},
		{Name: "span", Short: "span", Type: Number, Range: positive, Default: "4000/G", Scan: true, Doc: "time recorded"},
		{Name: "step", Short: "step", Type: Number, Range: positive, Default: "0.25/G", Scan: true, Doc: "time between samples"},
		{Name: "seed", Type: Integer, Range: seedRange, Default: "1", Scan: true, Doc: "of all random numbers"},
		{Name: "engine", Type: Word, Words: append([]string{autoEngine}, kinetic.EngineNames()...), Default: autoEngine, Doc: "how trajectories are drawn"},
	}},
	{Name: "observable", Repeated: true, Doc: "A quantity to record. Without any: energy, and magnetization or else the tracked lines that the bath changes.", Keys: []Key{
		{Name: "kind", Type: Word, Words: kinds, Needs: "needed", Doc: "what it measures"},
		{Name: "family", Type: Name, Needs: "terms, local, fourier", Doc: "a family, a group of families, or a tracked operator"},
		{Name: "tracked", Type: Name, Needs: "operator", Doc: "a tracked operator that runs along whole axes"},
		{Name: "wavevector", Type: Integers, Needs: "fourier", Doc: "in units of 2 pi / length, one integer per axis"},
		{Name: "name", Type: Name, Default: "the kind with its parameter", Doc: "label in tables"},
		{Name: "single", Type: Flag, Default: "false", Doc: "declares that its autocorrelation is a single exponential"},
	}},
	{Name: "pair", Repeated: true, Doc: "Two observables whose cross-covariance is recorded. Without any: all pairs of energy, magnetization and terms.", Keys: []Key{
		{Name: "of", Type: Names, Needs: "needed", Doc: "the labels of two observables"},
	}},
	{Name: "covariance", Doc: "Covariance in space of one family or tracked operator. Leave out for none.", Keys: []Key{
		{Name: "of", Type: Name, Needs: "needed", Doc: "a family or a tracked operator"},
		{Name: "every", Type: Number, Range: positive, Default: "10/G", Scan: true, Doc: "time between snapshots"},
		{Name: "limit", Type: Integer, Range: Range{Set: true, Min: 1, Max: 1024}, Default: "8", Scan: true,
			Doc: "displacements up to this many cells along each axis"},
	}},
	{Name: "scan", Doc: "Lists of values; every combination is one point, the first key varying slowest. Keys are dotted names of numbers (\"hamiltonian.field\", \"bath.operator.X.rate\") or short names. Sizes are lists, or integers for equal axes.", Keys: nil},
	{Name: "case", Repeated: true, Doc: "A scan of its own, where one setting does not fit all points; values may be single or lists.", Keys: nil},
}
