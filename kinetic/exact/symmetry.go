package exact

import (
	"fmt"
	"math/bits"
	"slices"
)

// symmetry is an abelian group that leaves the generator as it is: translations
// along some axes, and flips that change levels of tracked operators only and
// are themselves translation invariant (the global spin flip, logical
// operators). Two levels per site.
type symmetry struct {
	move [][]int32 // translations, the identity first: instance -> instance
	flip [][]uint8 // flips, the identity first: added to the levels
	// odd[f] tells that the functions looked at change sign under flip f.
	odd []bool
}

func (g *symmetry) order() int { return len(g.move) * len(g.flip) }

// symmetryOf returns the symmetries under which every component of the
// observables is invariant, or under a flip changes its sign, all in the same
// way.
func (s *System) symmetryOf(observables []Observable) (*symmetry, error) {
	if s.Spec.Levels != 2 {
		return nil, fmt.Errorf("symmetries are used for two levels per site, not %d", s.Spec.Levels)
	}
	g := &symmetry{move: [][]int32{identity(len(s.Instances))}}
	for a := range s.Spec.Lattice.Axes {
		t, ok := s.translation(a)
		if !ok || !invariant(t, observables) {
			continue
		}
		g.extend(t, s.Spec.Lattice.Size[a])
	}
	var basis [][]uint8
	if !s.Frozen() { // else a flip may lead out of the class of the reference state
		basis = s.flips(g)
	}
	g.flip, g.odd = [][]uint8{make([]uint8, len(s.Instances))}, []bool{false}
	for _, f := range basis {
		sign, ok := parity(f, observables)
		if !ok || len(g.flip) >= 64 {
			continue
		}
		for i := range len(g.flip) {
			sum := slices.Clone(g.flip[i])
			for k, x := range f {
				sum[k] ^= x
			}
			g.flip = append(g.flip, sum)
			g.odd = append(g.odd, g.odd[i] != (sign < 0))
		}
	}
	return g, nil
}

// fits reports whether an observable transforms as those that the group was made
// for.
func (g *symmetry) fits(o Observable) bool {
	for _, t := range g.move {
		if !invariant(t, []Observable{o}) {
			return false
		}
	}
	for f, flip := range g.flip {
		if f == 0 {
			continue
		}
		if sign, ok := parity(flip, []Observable{o}); !ok || (sign < 0) != g.odd[f] {
			return false
		}
	}
	return true
}

func identity(n int) []int32 {
	p := make([]int32, n)
	for i := range p {
		p[i] = int32(i)
	}
	return p
}

// extend multiplies the group of translations by the powers of t, of which
// there are n.
func (g *symmetry) extend(t []int32, n int) {
	old := len(g.move)
	for i := old; i < old*n; i++ {
		before := g.move[i-old]
		after := make([]int32, len(t))
		for k := range after {
			after[k] = t[before[k]]
		}
		g.move = append(g.move, after)
	}
}

// translation returns where a step along an axis takes each instance. ok is
// false where that is no symmetry: at an open axis, or if energies, reference
// levels or jumps differ from place to place.
func (s *System) translation(axis int) (t []int32, ok bool) {
	l := s.Spec.Lattice
	if l.Open[axis] || l.Size[axis] == 1 {
		return nil, false
	}
	t = make([]int32, len(s.Instances))
	for _, k := range s.Kinds {
		cells := transverse(l, k.extent)
		number := map[[4]int]int32{}
		for i := k.First; i < k.First+k.Count; i++ {
			number[cells[s.Instances[i].Position]] = int32(i)
		}
		for i := k.First; i < k.First+k.Count; i++ {
			at := cells[s.Instances[i].Position]
			if !k.extent[axis] {
				at[axis] = (at[axis] + 1) % l.Size[axis]
			}
			to, exists := number[at]
			if !exists || !slices.Equal(s.Instances[i].Energy, s.Instances[to].Energy) || s.Reference[i] != s.Reference[to] {
				return nil, false
			}
			t[i] = to
		}
	}
	return t, s.movesAlong(axis, t)
}

// movesAlong reports whether a step along an axis maps the jumps on each other.
func (s *System) movesAlong(axis int, t []int32) bool {
	l := s.Spec.Lattice
	at := map[[2]int]int{}
	for m, mv := range s.Moves {
		at[[2]int{mv.Bath, mv.Site}] = m
	}
	for _, mv := range s.Moves {
		cell := l.Coord(mv.Site / s.Spec.Sites)
		cell[axis] = (cell[axis] + 1) % l.Size[axis]
		to, ok := at[[2]int{mv.Bath, l.Index(cell)*s.Spec.Sites + mv.Site%s.Spec.Sites}]
		if !ok || len(s.Moves[to].Changes) != len(mv.Changes) {
			return false
		}
		for _, c := range mv.Changes {
			if !slices.Contains(s.Moves[to].Changes, Change{int(t[c.Instance]), c.Add}) {
				return false
			}
		}
	}
	return true
}

// invariant reports whether a translation leaves every component as it is.
func invariant(t []int32, observables []Observable) bool {
	for _, o := range observables {
		for _, c := range o.Components {
			value := map[int][]float64{}
			for _, p := range c {
				value[p.Instance] = p.Value
			}
			for _, p := range c {
				if !slices.Equal(value[int(t[p.Instance])], p.Value) {
					return false
				}
			}
		}
	}
	return true
}

// parity returns the sign that every component takes under a flip; ok is false
// if they differ or are none.
func parity(flip []uint8, observables []Observable) (sign int, ok bool) {
	for _, o := range observables {
		for _, c := range o.Components {
			for _, p := range c {
				now := 1
				if flip[p.Instance] != 0 {
					if p.Value[0] != -p.Value[1] {
						return 0, false
					}
					now = -1
				}
				if sign == 0 {
					sign = now
				}
				if now != sign {
					return 0, false
				}
			}
		}
	}
	return sign, sign != 0
}

// flips returns a basis of the changes that jumps add up to, that leave every
// energy, and that every translation of the group leaves.
func (s *System) flips(g *symmetry) [][]uint8 {
	var rows [][]uint8
	for _, m := range s.Moves {
		row := make([]uint8, len(s.Instances))
		for _, c := range m.Changes {
			row[c.Instance] = c.Add
		}
		rows = append(rows, row)
	}
	rows = kernel(rows, func(row []uint8) []uint8 {
		var energy []uint8
		for i, x := range row {
			if s.Instances[i].Energy != nil {
				energy = append(energy, x)
			}
		}
		return energy
	})
	for _, t := range g.move {
		rows = kernel(rows, func(row []uint8) []uint8 {
			change := slices.Clone(row)
			for i, x := range row {
				change[t[i]] ^= x
			}
			return change
		})
	}
	return rows
}

// kernel returns a basis of the combinations over Z_2 of rows that a linear map
// takes to 0.
func kernel(rows [][]uint8, image func(row []uint8) []uint8) [][]uint8 {
	type pair struct{ row, image bitset }
	var out [][]uint8
	seen := map[int]pair{} // by leading bit of the image
	for _, row := range rows {
		p := pair{pack(row), pack(image(row))}
		for {
			lead := p.image.lead()
			if lead < 0 {
				break
			}
			q, ok := seen[lead]
			if !ok {
				seen[lead] = p
				break
			}
			p.row.add(q.row)
			p.image.add(q.image)
		}
		if p.image.lead() < 0 && p.row.lead() >= 0 {
			out = append(out, p.row.unpack(len(row)))
		}
	}
	return independent(out)
}

// independent leaves out rows that are sums of earlier ones.
func independent(rows [][]uint8) [][]uint8 {
	seen := map[int]bitset{}
	var out [][]uint8
	for _, row := range rows {
		b := pack(row)
		for {
			lead := b.lead()
			if lead < 0 {
				break
			}
			if q, ok := seen[lead]; ok {
				b.add(q)
				continue
			}
			seen[lead] = b
			out = append(out, row)
			break
		}
	}
	return out
}

// bitset is a vector over Z_2.
type bitset []uint64

func pack(row []uint8) bitset {
	b := make(bitset, (len(row)+63)/64)
	for i, x := range row {
		b[i/64] |= uint64(x) << (i % 64)
	}
	return b
}

func (b bitset) add(c bitset) {
	for i := range b {
		b[i] ^= c[i]
	}
}

// lead returns the position of the first 1, -1 for 0.
func (b bitset) lead() int {
	for i, w := range b {
		if w != 0 {
			return 64*i + bits.TrailingZeros64(w)
		}
	}
	return -1
}

func (b bitset) unpack(n int) []uint8 {
	row := make([]uint8, n)
	for i := range row {
		row[i] = uint8(b[i/64] >> (i % 64) & 1)
	}
	return row
}
