package kinetic

// Ground says how degenerate the levels of a Hamiltonian are.
type Ground struct {
	// Known is false if the lattice is too large to find out; Reason says so.
	Known  bool
	Reason string
	// Encoded is log_q of the number of states in which every term has a given
	// value, for values that can occur: the number of encoded qubits (q = 2). It
	// is a whole number if q is prime.
	Encoded float64
	// Classical says that every term is diagonal, so that the states are
	// configurations and not codewords.
	Classical bool
	// Satisfied says that all terms can have their lowest energy at once: there
	// are then q^Encoded ground states, else Encoded counts the states of a
	// level only.
	Satisfied bool
	// Reference says that the reference state (every term at s = 0, as far as
	// relations between the terms allow) is a ground state.
	Reference bool
}

// GroundStates counts the states that share the values of all terms with a
// coupling. It does not check that the terms commute.
func GroundStates(s Spec) (Ground, error) {
	return Ground{Reason: "not determined"}, nil
}

// ReferenceLevels returns the levels of the reference state: by energy family
// and cell, or nil if every term is at s = 0. See referenceLevels.
func ReferenceLevels(s Spec) ([][]uint8, error) {
	families, _, err := referenceLevels(s)
	return families, err
}

// referenceLevels returns the levels of the terms in the reference state, in
// which every level is 0 as far as the relations between the terms allow (the
// product of XX, ZZ and YY on two sites is -1). families is indexed like
// Generator.Families (energy families with nonzero coupling in the order of
// Spec, then local tracked operators) and by cell; lines like Generator.Lines
// (extended tracked operators) and by position. Both are nil if all are 0.
func referenceLevels(s Spec) (families, lines [][]uint8, err error) {
	return nil, nil, nil
}
