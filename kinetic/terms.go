package kinetic

import (
	"slices"

	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// SiteFactor is the share of one site in a term: X^X Z^Z with powers in
// 0..q-1, not both 0.
type SiteFactor struct {
	Site int // cell*Sites + site of the cell
	X, Z int
}

// Term returns the operator o at the given cell as it stands on the lattice, in
// increasing order of site: offsets are folded back along periodic axes and the
// powers that meet on one site are added mod q; factors that cancel are left
// out. A term without factors is a constant (1 + x on an axis of length 1).
//
// At open edges ok is false if a factor lies outside, or on a site that is
// absent, along an axis with the rule Drop (or ""); with Truncate the factors
// inside remain, and ok is false only if none of the operator's factors lies
// inside.
//
// An operator with an extent is multiplied over all cells of its axes; the
// coordinates of cell along them do not matter.
func (s Spec) Term(o pauli.Operator, cut Cut, cell int) (factors []SiteFactor, ok bool) {
	return s.AppendTerm(nil, o, cut, cell)
}

// AppendTerm appends to dst what Term returns. If ok is false it returns dst
// as it was.
func (s Spec) AppendTerm(dst []SiteFactor, o pauli.Operator, cut Cut, cell int) (factors []SiteFactor, ok bool) {
	start := len(dst)
	at := s.Lattice.Coord(cell)
	var last lattice.Offset // last coordinate along each axis of the extent
	for a := range at {
		if o.Extent[a] {
			at[a] = 0
			last[a] = s.Lattice.Size[a] - 1
		}
	}
	inside := false
	keep := cut.rules()
	var run lattice.Offset
	for {
		var dropped, some bool
		dst, dropped, some = s.appendFactors(dst, o, at.Add(run), &keep)
		if dropped {
			return dst[:start], false
		}
		inside = inside || some
		a := 0
		for a < lattice.MaxAxes && run[a] == last[a] {
			run[a] = 0
			a++
		}
		if a == lattice.MaxAxes {
			break
		}
		run[a]++
	}
	if !inside && !isIdentity(o) {
		// Nothing of the operator is left, which is not the same as factors
		// that cancel.
		return dst[:start], false
	}
	return dst[:start+len(fold(dst[start:], s.Levels))], true
}

// appendFactors appends the operator's factors around the cell at the given
// position, unfolded. dropped is true if one lies outside along an axis that
// does not truncate, some is true if one lies inside.
func (s Spec) appendFactors(dst []SiteFactor, o pauli.Operator, at lattice.Offset, truncate *[lattice.MaxAxes]bool) (out []SiteFactor, dropped, some bool) {
	for part, list := range [2][]pauli.Polynomial{o.X, o.Z} {
		for site, p := range list {
			for _, m := range p {
				c, outside, ok := wrapSite(s.Lattice, s.Absent, at, m.Exp, site)
				if !ok {
					for a := range outside {
						dropped = dropped || outside[a] && !truncate[a]
					}
					continue
				}
				some = true
				f := SiteFactor{Site: s.Lattice.Index(c)*s.Sites + site}
				if part == 0 {
					f.X = m.Coeff
				} else {
					f.Z = m.Coeff
				}
				dst = append(dst, f)
			}
		}
	}
	return dst, dropped, some
}

// isIdentity reports whether all polynomials of o are 0.
func isIdentity(o pauli.Operator) bool {
	for _, list := range [2][]pauli.Polynomial{o.X, o.Z} {
		for _, p := range list {
			if len(p) > 0 {
				return false
			}
		}
	}
	return true
}

// fold sorts factors by site and adds the powers on equal sites mod q, in place.
func fold(f []SiteFactor, q int) []SiteFactor {
	slices.SortFunc(f, func(a, b SiteFactor) int { return a.Site - b.Site })
	n := 0
	for i := 0; i < len(f); {
		g := f[i]
		for i++; i < len(f) && f[i].Site == g.Site; i++ {
			g.X += f[i].X
			g.Z += f[i].Z
		}
		g.X %= q
		g.Z %= q
		if g.X != 0 || g.Z != 0 {
			f[n] = g
			n++
		}
	}
	return f[:n]
}

// Positions returns how many instances of o there are: the cells of the axes
// outside its extent.
func (s Spec) Positions(o pauli.Operator) int {
	n := 1
	for a, size := range s.Lattice.Size {
		if !o.Extent[a] {
			n *= size
		}
	}
	return n
}

// PositionCell returns the cell of instance p of o, with coordinate 0 along its
// extent. Instances are numbered like cells of the remaining axes, the first
// of them fastest; without an extent the instance is the cell.
func (s Spec) PositionCell(o pauli.Operator, p int) int {
	var c lattice.Offset
	for a, size := range s.Lattice.Size {
		if !o.Extent[a] {
			c[a] = p % size
			p /= size
		}
	}
	return s.Lattice.Index(c)
}

// Commutator returns the exponent c in A B = w^c B A, w = exp(2 pi i/q), of
// two terms in increasing order of site: 0 if they commute.
func Commutator(a, b []SiteFactor, q int) int {
	c := 0
	for i, j := 0, 0; i < len(a) && j < len(b); {
		switch {
		case a[i].Site < b[j].Site:
			i++
		case a[i].Site > b[j].Site:
			j++
		default:
			c += a[i].Z*b[j].X - a[i].X*b[j].Z
			i++
			j++
		}
	}
	return ((c % q) + q) % q
}
