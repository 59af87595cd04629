package bath

// Float returns G(w) for an energy that is not one of a list: of couplings that
// vary from term to term. The law must be valid at beta and not a table.
func (l *Law) Float(w, beta float64) float64 {
	switch l.Kind {
	case HeatBath:
		return l.Rate * heatBath(beta*w)
	case Metropolis:
		return l.Rate * metropolis(beta*w)
	case Symmetric:
		return l.Rate * symmetric(beta*w)
	case Power:
		return l.Rate * power(w, beta, l.Exponent, l.Cutoff)
	}
	panic("bath: Float of a table")
}
