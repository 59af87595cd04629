package configs

import (
	"encoding/binary"
	"fmt"
	"math"

	"sojourn/kinetic"
)

// Disorder says how the couplings of some families vary from term to term.
type Disorder struct {
	Of          string // a family, a group, or all families of more than one site
	Families    []int  // indices into Spec.Families
	Kind        string // gaussian, plus-minus
	Mean, SD    float64
	Probability float64 // of -J
	Seed        int64
}

// The kinds of disorder.
const (
	gaussian  = "gaussian"
	plusMinus = "plus-minus"
)

// sampleName is the name under which samples are scanned.
const sampleName = "hamiltonian.disorder.sample"

// nominal is a coupling as large as most: it stands for those that are drawn
// where the answer must not depend on the sample.
func (d Disorder) nominal() float64 { return math.Abs(d.Mean) + 2*d.SD }

// text is the disorder in words.
func (d Disorder) text() string {
	if d.Kind == plusMinus {
		return fmt.Sprintf("plus-minus, probability %s, seed %d", formatNumber(d.Probability), d.Seed)
	}
	return fmt.Sprintf("gaussian, mean %s, sd %s, seed %d", formatNumber(d.Mean), formatNumber(d.SD), d.Seed)
}

// Draw returns the Spec with the random couplings of the point's sample. They
// depend on the seed of the disorder, the sample, the family's operator and the
// cell: the sample is the same one at every temperature, whatever the bath.
func (p *Point) Draw() kinetic.Spec {
	s := p.Spec
	if p.Disorder == nil {
		return s
	}
	keys := operatorKeys(s)
	s.Families = append([]kinetic.FamilySpec(nil), s.Families...)
	for _, d := range p.Disorder {
		for _, f := range d.Families {
			stream := kinetic.NewDisorder(d.Seed, p.Sample, keys[f])
			if d.Kind == plusMinus {
				s.Families[f].Signs = stream.Signs(s.Lattice.Cells(), d.Probability)
			} else {
				s.Families[f].Couplings = stream.Normal(s.Lattice.Cells(), d.Mean, d.SD)
			}
		}
	}
	return s
}

// DrawnBytes estimates the memory that the random couplings of the point take as
// long as it is compiled.
func (p *Point) DrawnBytes() float64 {
	const sign, coupling = 2, 12
	cells := 1.0
	for _, n := range p.Spec.Lattice.Lengths() {
		cells *= float64(n)
	}
	sum := 0.0
	for _, d := range p.Disorder {
		each := sign
		if d.Kind == gaussian {
			each = coupling
		}
		sum += float64(each*len(d.Families)) * cells
	}
	return sum
}

// operatorKeys identifies the families of a spec by their operators, and those
// with the same operator by their order.
func operatorKeys(s kinetic.Spec) [][]byte {
	var keys [][]byte
	seen := map[string]int{}
	for _, f := range s.Families {
		key := f.Operator.AppendCanonical(nil)
		n := seen[string(key)]
		seen[string(key)]++
		keys = append(keys, binary.AppendUvarint(key, uint64(n)))
	}
	return keys
}

// nominalSpec is the spec with couplings of one size in place of random ones,
// on a lattice of its own.
func (p *Point) nominalSpec() kinetic.Spec {
	s := p.Spec
	s.Lattice = shortened(s)
	s.Families = append([]kinetic.FamilySpec(nil), s.Families...)
	for _, d := range p.Disorder {
		for _, f := range d.Families {
			if d.Kind != gaussian {
				continue
			}
			s.Families[f].Couplings = make([]float64, s.Lattice.Cells())
			for c := range s.Families[f].Couplings {
				s.Families[f].Couplings[c] = d.nominal()
			}
		}
	}
	return s
}

// varies reports whether couplings vary in size.
func (p *Point) varies() bool {
	for _, d := range p.Disorder {
		if d.Kind == gaussian {
			return true
		}
	}
	return false
}

// disorder appends how couplings are drawn, by operator, and the sample. A
// translate of an operator has its couplings elsewhere: it is another one here.
func (c *canonical) disorder(p *Point) {
	if p.Disorder == nil {
		return
	}
	c.string("disorder")
	c.int(kinetic.DisorderRevision)
	c.int(int64(p.Sample))
	keys := operatorKeys(p.Spec)
	var blocks [][]byte
	for _, d := range p.Disorder {
		for _, f := range d.Families {
			x := canonical{}
			x.string(string(keys[f]))
			x.string(d.Kind)
			x.float(d.Mean)
			x.float(d.SD)
			x.float(d.Probability)
			x.int(d.Seed)
			blocks = append(blocks, x.text)
		}
	}
	c.sorted(blocks)
}

// engine is the engine that was asked for, or for auto one that can run couplings
// of the point's kind.
func (p *Point) engine() string {
	switch {
	case p.Trajectory.Engine != autoEngine:
		return p.Trajectory.Engine
	case p.varies():
		return kinetic.CompositionEngine
	}
	return kinetic.ClassEngine
}
