package observables

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"sojourn/kinetic"
	"sojourn/kinetic/kinetictest"
	"sojourn/kinetic/lattice"
)

// This file computes by the plainest means, from the levels of all terms at
// every sample, what the recorder is to find.

// bundle runs several engines as the lanes of one.
type bundle struct{ lanes []kinetic.Engine }

// newBundle starts an engine at random: the class or composition engine, several
// of them as a bundle, or for 64 lanes the lane engine.
func newBundle(t testing.TB, g *kinetic.Generator, lanes int, seed byte) kinetic.Engine {
	t.Helper()
	b := &bundle{}
	start := kinetic.NewClasses
	switch {
	case lanes == 64:
		start = kinetic.NewLanes
	case g.Couplings != nil, g.Wide != nil:
		start = kinetic.NewComposition
	}
	for i := range lanes {
		e, err := start(g, [32]byte{seed}, i, kinetic.StartRandom)
		if limit := (*kinetic.LaneLimit)(nil); errors.As(err, &limit) {
			t.Skip(err)
		}
		if err != nil {
			t.Fatal(err)
		}
		if lanes == 64 {
			return e
		}
		b.lanes = append(b.lanes, e)
	}
	if lanes == 1 {
		return b.lanes[0]
	}
	return b
}

func (b *bundle) Advance(t float64) {
	for _, e := range b.lanes {
		e.Advance(t)
	}
}
func (b *bundle) Time() float64 { return b.lanes[0].Time() }
func (b *bundle) Lanes() int    { return len(b.lanes) }
func (b *bundle) Jumps() (n uint64) {
	for _, e := range b.lanes {
		n += e.Jumps()
	}
	return n
}
func (b *bundle) Sums(dst []int64) []int64 {
	for _, e := range b.lanes {
		dst = e.Sums(dst)
	}
	return dst
}
func (b *bundle) Energy(lane int) float64 { return b.lanes[lane].Energy(0) }
func (b *bundle) Census(dst []int64) {
	for _, e := range b.lanes {
		e.Census(dst)
	}
}
func (b *bundle) Terms(family, lane int, dst []uint8) { b.lanes[lane].Terms(family, 0, dst) }
func (b *bundle) WidePatterns(lane int, dst []uint64) {
	b.lanes[lane].(kinetic.WidePatterns).WidePatterns(0, dst)
}
func (b *bundle) Patterns(lane int, dst []uint16) { b.lanes[lane].Patterns(0, dst) }
func (b *bundle) Save(dst []byte) []byte          { panic("not needed") }
func (b *bundle) Restore([]byte) error            { panic("not needed") }
func (b *bundle) Audit() error                    { panic("not needed") }

func compile(t testing.TB, spec kinetic.Spec) *kinetic.Generator {
	t.Helper()
	g, err := kinetic.Compile(spec)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func opened(l lattice.Lattice, axes ...int) lattice.Lattice {
	for _, a := range axes {
		l.Open[a] = true
	}
	return l
}

// levelsOf reads all families by cell and all lines by position.
func levelsOf(g *kinetic.Generator, e kinetic.Engine, lane int) [][]uint8 {
	var out [][]uint8
	for f := range g.Families {
		dst := make([]uint8, g.Cells())
		e.Terms(f, lane, dst)
		out = append(out, dst)
	}
	for l := range g.Lines {
		dst := make([]uint8, g.Lines[l].Positions)
		e.Terms(len(g.Families)+l, lane, dst)
		out = append(out, dst)
	}
	return out
}

// part is one term or position in a component, and what it adds by its level.
type part struct {
	row, at int // in the levels
	value   []float64
}

// plainly is an observable as a sum over terms, by component.
type plainly struct {
	components [][]part
	norm       float64
}

// worth returns the real and the imaginary part of what a term of a family, or a
// position of a line, is worth by its level, times a complex weight;
// complexValued tells whether it is complex at weight 1.
func worth(g *kinetic.Generator, row int, weight complex128) (re, im []float64, complexValued bool) {
	for s := range g.Levels {
		v := complex(math.Cos(2*math.Pi*float64(s)/float64(g.Levels)), math.Sin(2*math.Pi*float64(s)/float64(g.Levels)))
		switch {
		case g.Levels == 2:
			v = complex(1-2*float64(s), 0)
		case row < len(g.Families) && g.Families[row].Energy != nil:
			v = complex(-g.Families[row].Energy[s]/g.Spec.Families[row].Coupling, 0)
		default:
			complexValued = true
		}
		re = append(re, real(weight*v))
		im = append(im, imag(weight*v))
	}
	return re, im, complexValued
}

func plain(g *kinetic.Generator, o Observable, levels [][]uint8) plainly {
	p := plainly{norm: 1}
	each := func(rows []int, add func(row, at int)) {
		for _, row := range rows {
			for at, s := range levels[row] {
				if s != kinetic.Absent {
					add(row, at)
				}
			}
		}
	}
	singles := 0.0
	single := func(row, at int) {
		singles++
		re, im, two := worth(g, row, 1)
		p.components = append(p.components, []part{{row, at, re}})
		if two {
			p.components = append(p.components, []part{{row, at, im}})
		}
	}
	switch o.Kind {
	case Energy:
		p.components = [][]part{nil}
		for f := range g.Families {
			if g.Families[f].Energy == nil {
				continue
			}
			each([]int{f}, func(row, at int) {
				value := g.Families[f].Energy
				if g.Couplings != nil {
					j := float64(g.Couplings.J[f][at]) * g.Couplings.Unit
					value = []float64{-j, j}
				}
				p.components[0] = append(p.components[0], part{row, at, value})
			})
		}
	case Magnetization, Terms:
		p.components = [][]part{nil}
		each(o.Families, func(row, at int) {
			re, im, two := worth(g, row, 1)
			p.components[0] = append(p.components[0], part{row, at, re})
			if two {
				if len(p.components) == 1 {
					p.components = append(p.components, nil)
				}
				p.components[1] = append(p.components[1], part{row, at, im})
			}
		})
	case Operator:
		each([]int{len(g.Families) + o.Line}, single)
		p.norm = singles
	case Local:
		for _, f := range o.Families {
			lo, hi := span(g, levels[f])
			each([]int{f}, func(row, at int) {
				for a, x := range g.Lattice.Coord(at) {
					if g.Lattice.Open[a] && x != (lo[a]+hi[a])/2 {
						return
					}
				}
				single(row, at)
			})
		}
		p.norm = singles
	case Fourier:
		p.components = make([][]part, 2)
		for _, f := range o.Families {
			lo, hi := span(g, levels[f])
			each([]int{f}, func(row, at int) {
				phase := 0.0
				for a, x := range g.Lattice.Coord(at) {
					from := float64(x)
					if g.Lattice.Open[a] {
						from -= float64(lo[a]+hi[a]) / 2
					}
					phase += 2 * math.Pi * float64(o.Wavevector[a]) / float64(g.Lattice.Size[a]) * from
				}
				re, im, _ := worth(g, row, cmplx.Rect(1, phase))
				p.components[0] = append(p.components[0], part{row, at, re})
				p.components[1] = append(p.components[1], part{row, at, im})
			})
		}
	default:
		panic("unknown kind")
	}
	return p
}

// span returns the smallest and largest coordinates of a family's terms.
func span(g *kinetic.Generator, levels []uint8) (lo, hi lattice.Offset) {
	lo = g.Lattice.Size
	for c, s := range levels {
		if s != kinetic.Absent {
			for a, x := range g.Lattice.Coord(c) {
				lo[a], hi[a] = min(lo[a], x), max(hi[a], x)
			}
		}
	}
	return lo, hi
}

// values returns the components in a state.
func (p plainly) values(levels [][]uint8) []float64 {
	out := make([]float64, len(p.components))
	for i, c := range p.components {
		for _, t := range c {
			out[i] += t.value[levels[t.row][t.at]]
		}
	}
	return out
}

// everything asks for all that a generator has, single terms of groups aside.
func everything(t testing.TB, g *kinetic.Generator) []Observable {
	t.Helper()
	requests := []Request{{Name: "energy", Kind: Energy}}
	for i, f := range g.Families {
		if f.Terms == 0 {
			continue
		}
		if f.Order {
			requests = append(requests, Request{Name: "magnetization", Kind: Magnetization})
		}
		k := lattice.Offset{1}
		if g.Lattice.Axes > 1 {
			k[1] = 2
		}
		requests = append(requests,
			Request{Name: "terms-" + f.Name, Kind: Terms, Family: f.Name},
			Request{Name: "fourier-" + f.Name, Kind: Fourier, Family: f.Name, Wavevector: k},
			Request{Name: "along-" + f.Name, Kind: Fourier, Family: f.Name, Wavevector: lattice.Offset{1}},
			Request{Name: "uniform-" + f.Name, Kind: Fourier, Family: f.Name},
		)
		if !disordered(g, []int{i}) {
			requests = append(requests, Request{Name: "local-" + f.Name, Kind: Local, Family: f.Name})
		}
		if g.Lattice.Axes > 1 {
			requests = append(requests, Request{Name: "across-" + f.Name, Kind: Fourier, Family: f.Name, Wavevector: lattice.Offset{0, 1}})
		}
	}
	for _, l := range g.Lines {
		if positions(l) == 0 {
			continue
		}
		requests = append(requests, Request{Name: l.Name, Kind: Operator, Tracked: l.Name})
	}
	obs, err := Bind(g, requests)
	if err != nil {
		t.Fatal(err)
	}
	return obs
}

// allPairs returns each observable with itself and all pairs of scalars.
func allPairs(obs []Observable) [][2]int {
	var out [][2]int
	for i := range obs {
		for j := i; j < len(obs); j++ {
			if i == j || obs[i].Scalar() && obs[j].Scalar() {
				out = append(out, [2]int{i, j})
			}
		}
	}
	return out
}

func record(t testing.TB, e kinetic.Engine, g *kinetic.Generator, obs []Observable, plan Plan) Unit {
	t.Helper()
	u, err := Record(context.Background(), e, g, obs, allPairs(obs), plan, Label{Unit: 3, Start: "random", Engine: "classes"}, nil)
	if err != nil {
		t.Fatal(err)
	}
	return u
}

// near reports whether two numbers agree to rounding, on the given scale.
func near(a, b, scale float64) bool { return math.Abs(a-b) <= 1e-11*math.Max(1, math.Abs(scale)) }

// cases are generators of every kind: lengths 1, 2, odd, prime, beyond a word;
// periodic and open; several sites and moves; lines.
func cases(t testing.TB) map[string]*kinetic.Generator {
	law := kinetictest.HeatBath
	specs := map[string]kinetic.Spec{
		"ring 7":           kinetictest.Ising(kinetictest.Lattice(7), 0.4, law),
		"ring 131":         kinetictest.Ising(kinetictest.Lattice(131), 0.4, law),
		"chain 67":         kinetictest.Ising(opened(kinetictest.Lattice(67), 0), 0.4, law),
		"torus 5 x 7":      kinetictest.Ising(kinetictest.Lattice(5, 7), 0.3, law),
		"torus 64 x 3":     kinetictest.Ising(kinetictest.Lattice(64, 3), 0.3, law),
		"torus 66 x 2":     kinetictest.Ising(kinetictest.Lattice(66, 2), 0.3, law),
		"torus 1 x 9":      kinetictest.Ising(kinetictest.Lattice(1, 9), 0.3, law),
		"cylinder 9 x 6":   kinetictest.Ising(opened(kinetictest.Lattice(9, 6), 1), 0.3, law),
		"square 8 x 6":     kinetictest.Ising(opened(kinetictest.Lattice(8, 6), 0, 1), 0.3, law),
		"slab 4 x 3 x 5":   kinetictest.Ising(opened(kinetictest.Lattice(4, 3, 5), 2), 0.2, law),
		"torus 3^4":        kinetictest.Ising(kinetictest.Lattice(3, 3, 3, 3), 0.1, law),
		"toric 4 x 5, XYZ": kinetictest.ToricCode(kinetictest.Lattice(4, 5), 0.7, "XYZ", law, "zx"),
		"toric 3 x 2, X":   kinetictest.ToricCode(kinetictest.Lattice(3, 2), 0.7, "X", law, "z"),
		"planar 5 x 4":     kinetictest.ToricCode(opened(kinetictest.Lattice(5, 4), 0, 1), 0.7, "XZ", law, ""),
	}
	for i := range uint64(8) {
		specs[fmt.Sprint("random ", i)] = kinetictest.RandomSpec(i+1, kinetictest.Larger)
	}
	for _, q := range []int{3, 4, 6} {
		specs[fmt.Sprintf("Potts %d, 5 x 4", q)] = kinetictest.Potts(q, kinetictest.Lattice(5, 4), 0.5, law)
		specs[fmt.Sprintf("Potts %d, chain", q)] = kinetictest.Potts(q, opened(kinetictest.Lattice(7), 0), 0.5, law)
	}
	for i := range uint64(6) {
		q := 3 + int(i)%3
		specs[fmt.Sprintf("random %d, %d levels", i, q)] = kinetictest.RandomLevels(i+1, q, kinetictest.Larger)
	}
	// Patterns beyond tables.
	specs["Potts 9, 4 x 3"] = kinetictest.Potts(9, kinetictest.Lattice(4, 3), 0.9, law)
	specs["Potts 9, square 3 x 4"] = kinetictest.Potts(9, opened(kinetictest.Lattice(3, 4), 0, 1), 0.9, law)
	clock := kinetictest.Potts(9, kinetictest.Lattice(4, 3), 0.9, law)
	for i := range clock.Families {
		clock.Families[i].Shape = kinetic.ClockShape(9)
	}
	specs["clock 9, 4 x 3"] = clock
	signs := kinetictest.Ising(kinetictest.Lattice(6, 5), 0.5, law)
	signs.Families[0].Signs = make([]uint8, 30)
	sizes := kinetictest.Ising(opened(kinetictest.Lattice(6, 5), 1), 0.5, law)
	sizes.Families[1].Couplings = make([]float64, 30)
	for c := range 30 {
		signs.Families[0].Signs[c] = uint8(c * c % 3 % 2)
		sizes.Families[1].Couplings[c] = float64(c%7) - 2.25
	}
	specs["random signs"], specs["random sizes"] = signs, sizes
	specs["planar 4 x 3"] = kinetictest.PlanarCode(4, 3, 0.5, "XYZ", law)
	out := make(map[string]*kinetic.Generator)
	for name, s := range specs {
		out[name] = compile(t, s)
	}
	return out
}
