package kinetic

import (
	"sojourn/kinetic/lattice"
)

// link is a translation-invariant set of edges: from every cell's vertex a to
// vertex b of the cell at offset by.
type link struct {
	a, b int
	by   lattice.Offset
}

// translationRank returns the rank of the terms over Z_2 on a periodic lattice
// of any size, where it follows from counting connected components: every
// operator is of X or of Z alone, and among those of a letter each has at most
// two factors (terms are edges between sites), or each site is in at most two
// (sites are edges between terms). ok is false otherwise.
func translationRank(s Spec) (rank int, ok bool) {
	if s.Levels != 2 || !s.Lattice.Periodic() {
		return 0, false
	}
	for letter := range 2 {
		// members[f] are the sites of family f, homes[i] the families of site i.
		members := make([][]endpoint, 0, len(s.Families))
		homes := make([][]endpoint, s.Sites)
		for _, f := range s.Families {
			var list []endpoint
			for _, factor := range f.Operator.Factors() {
				if factor.X != 0 && factor.Z != 0 {
					return 0, false
				}
				if (factor.Z != 0) == (letter == 1) {
					list = append(list, endpoint{factor.Site, factor.Exp})
					homes[factor.Site] = append(homes[factor.Site], endpoint{len(members), factor.Exp.Neg()})
				}
			}
			if len(list) > 0 && len(list) < len(f.Operator.Factors()) {
				return 0, false // mixes X and Z
			}
			if len(list) > 0 {
				members = append(members, list)
			}
		}
		switch {
		case atMostTwo(members):
			rank += graphRank(s.Lattice, s.Sites, members)
		case atMostTwo(homes):
			rank += graphRank(s.Lattice, len(members), homes)
		default:
			return 0, false
		}
	}
	return rank, true
}

// endpoint is a vertex in the cell at an offset.
type endpoint struct {
	vertex int
	at     lattice.Offset
}

func atMostTwo(lists [][]endpoint) bool {
	for _, l := range lists {
		if len(l) > 2 {
			return false
		}
	}
	return true
}

// graphRank returns the rank of the incidence matrix of a graph with the given
// number of vertices per cell, whose edges have the given ends; an edge with
// one end leads outside. It is the number of vertices less that of the
// components without a way outside.
func graphRank(l lattice.Lattice, vertices int, edges [][]endpoint) int {
	var links []link
	outside := make([]bool, vertices)
	for _, e := range edges {
		switch len(e) {
		case 1:
			outside[e[0].vertex] = true
		case 2:
			links = append(links, link{e[0].vertex, e[1].vertex, e[1].at.Add(e[0].at.Neg())})
		}
	}
	closed := 0
	place := make([]*lattice.Offset, vertices) // of a vertex against the first of its component
	for start := range vertices {
		if place[start] != nil {
			continue
		}
		place[start] = new(lattice.Offset)
		component := []int{start}
		leads := false
		var cycles []lattice.Offset
		for i := 0; i < len(component); i++ {
			v := component[i]
			leads = leads || outside[v]
			for _, k := range links {
				for range 2 { // both ways
					if k.a == v {
						to := place[v].Add(k.by)
						if place[k.b] == nil {
							place[k.b] = &to
							component = append(component, k.b)
						} else {
							cycles = append(cycles, to.Add(place[k.b].Neg()))
						}
					}
					k = link{k.b, k.a, k.by.Neg()}
				}
			}
		}
		if !leads {
			closed += cosets(l, cycles)
		}
	}
	return vertices*l.Cells() - closed
}

// cosets returns the index in Z^4 of the lattice that the given offsets and the
// periods of l span: the components into which walks by these offsets split
// the cells.
func cosets(l lattice.Lattice, offsets []lattice.Offset) int {
	var rows []lattice.Offset
	for _, o := range offsets {
		rows = append(rows, reduce(o, l, 0))
	}
	for a, n := range l.Size {
		var period lattice.Offset
		period[a] = n
		rows = append(rows, period)
	}
	index := 1
	for a := range lattice.MaxAxes {
		// Euclid's algorithm along axis a leaves one row with an entry there.
		for {
			best := -1
			more := false
			for i, r := range rows {
				if r[a] != 0 && (best < 0 || abs(r[a]) < abs(rows[best][a])) {
					best = i
				}
			}
			for i := range rows {
				if i != best && rows[i][a] != 0 {
					factor := rows[i][a] / rows[best][a]
					for b := range rows[i] {
						rows[i][b] -= factor * rows[best][b]
					}
					rows[i] = reduce(rows[i], l, a+1)
					more = more || rows[i][a] != 0
				}
			}
			if !more {
				index *= abs(rows[best][a])
				rows = append(rows[:best], rows[best+1:]...)
				break
			}
		}
	}
	return index
}

// reduce brings the coordinates from axis first on below the periods, which
// are at most 2^40 together, so that products of two do not overflow.
func reduce(o lattice.Offset, l lattice.Lattice, first int) lattice.Offset {
	for a := first; a < lattice.MaxAxes; a++ {
		o[a] %= l.Size[a]
	}
	return o
}

func abs(x int) int { return max(x, -x) }
