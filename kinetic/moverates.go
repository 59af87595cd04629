package kinetic

// MoveRates gives the rates of single moves where couplings vary in size from
// term to term, which the shapes cannot. It may be shared by goroutines.
type MoveRates struct{ r *seatRates }

// MoveRates returns the rates of a generator with varying couplings; it panics
// if there are none.
func (g *Generator) MoveRates() *MoveRates {
	if g.Couplings == nil {
		panic("kinetic: MoveRates of a generator whose couplings do not vary")
	}
	return &MoveRates{newSeatRates(g)}
}

// Rate returns the rate of a move of the seat at an address, whose shape and
// pattern are given, and the change of the energy by it.
func (m *MoveRates) Rate(address int, shape uint16, move int, pattern uint16) (rate, change float64) {
	rate, w := m.r.move(address, &m.r.moves[shape][move], uint32(pattern))
	return rate, -float64(w) * m.r.unit
}
