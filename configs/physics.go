package configs

import (
	"bytes"
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"math"
	"slices"

	"sojourn/kinetic"
	"sojourn/kinetic/bath"
	"sojourn/kinetic/lattice"
	"sojourn/kinetic/pauli"
)

// Generator compiles the point's thermal generator.
func (p *Point) Generator() (*kinetic.Generator, error) { return kinetic.Compile(p.Draw()) }

// identify computes the stream digest and the key.
func (p *Point) identify(list []requested, h *hamiltonian) {
	stream := canonical{text: []byte("sojourn stream 1\n")}
	stream.hamiltonian(p.Spec)
	stream.disorder(p)
	stream.bath(p.Spec)
	stream.string(p.Trajectory.Start)
	stream.int(p.Trajectory.Seed)
	p.Stream = sha256.Sum256(stream.text)

	key := canonical{text: []byte("sojourn point 1\n")}
	key.text = append(key.text, p.Stream[:]...)
	key.int(kinetic.StreamRevision)
	key.string(p.Trajectory.EngineName)
	key.float(p.Trajectory.Settle)
	key.float(p.Trajectory.Span)
	key.float(p.Trajectory.Step)
	key.int(int64(len(list)))
	for _, o := range list {
		key.observable(o, p.Spec.Lattice)
	}
	for _, pair := range p.Pairs {
		key.int(int64(pair[0]))
		key.int(int64(pair[1]))
	}
	if c := p.Covariance; c != nil {
		key.string(c.Of)
		key.operators(h.operatorsOf(c.Of), p.Spec.Lattice)
		key.float(c.Every)
		key.int(int64(c.Limit))
	}
	sum := sha256.Sum256(key.text)
	p.Key = hex.EncodeToString(sum[:8])
}

// operatorsOf returns the operators with energy of a family or group, or a
// tracked operator.
func (h *hamiltonian) operatorsOf(name string) []pauli.Operator {
	var out []pauli.Operator
	for _, f := range h.family(name) {
		if f.Coupling != 0 {
			out = append(out, f.Operator)
		}
	}
	if t, ok := h.tracked(name); ok && out == nil {
		out = append(out, t.Operator)
	}
	return out
}

// canonical builds bytes that depend on the physics alone. Every item has a
// fixed length or says its own, so that different physics cannot give the same
// bytes.
type canonical struct{ text []byte }

func (c *canonical) int(i int64) { c.text = binary.BigEndian.AppendUint64(c.text, uint64(i)) }

// float appends the bits of x; -0 and 0 are the same number.
func (c *canonical) float(x float64) { c.int(int64(math.Float64bits(x + 0))) }

func (c *canonical) string(s string) {
	c.int(int64(len(s)))
	c.text = append(c.text, s...)
}

// sorted appends blocks of bytes in increasing order.
func (c *canonical) sorted(blocks [][]byte) {
	slices.SortFunc(blocks, bytes.Compare)
	c.int(int64(len(blocks)))
	for _, b := range blocks {
		c.string(string(b))
	}
}

// hamiltonian appends the lattice and the terms with energy, without names and
// in an order of their own.
func (c *canonical) hamiltonian(s kinetic.Spec) {
	c.int(int64(s.Levels))
	c.int(int64(s.Sites))
	c.int(int64(s.Lattice.Axes))
	for a, n := range s.Lattice.Lengths() {
		c.int(int64(n))
		c.flag(s.Lattice.Open[a])
	}
	var terms [][]byte
	for _, f := range s.Families {
		if f.Coupling == 0 {
			continue
		}
		t := canonical{}
		t.operator(f.Operator, s.Lattice)
		t.float(f.Coupling)
		for _, x := range f.Shape {
			t.float(x)
		}
		for a, open := range s.Lattice.Open {
			if open {
				t.string(string(f.Cut.Along(a)))
			}
		}
		if f.Signs != nil {
			t.string("signs" + string(f.Signs))
		}
		if f.Couplings != nil {
			t.string("couplings")
			for _, x := range f.Couplings {
				t.float(x)
			}
		}
		terms = append(terms, t.text)
	}
	c.sorted(terms)
	c.absent(s)
}

// absent appends the sites that are missing at open edges, if there are any.
func (c *canonical) absent(s kinetic.Spec) {
	var sites [][]byte
	for _, m := range s.Absent {
		if !s.Lattice.Open[m.Axis] {
			continue
		}
		x := canonical{}
		x.int(int64(m.Site))
		x.int(int64(m.Axis))
		x.flag(m.Last)
		sites = append(sites, x.text)
	}
	if sites != nil {
		c.string("absent")
		c.sorted(sites)
	}
}

func (c *canonical) flag(b bool) {
	if b {
		c.int(1)
	} else {
		c.int(0)
	}
}

// operator appends an operator. On a torus translates are the same family;
// where there are edges an operator's cell decides which terms exist.
func (c *canonical) operator(op pauli.Operator, l lattice.Lattice) {
	if l.Periodic() {
		op = op.Normal()
	}
	c.string(string(op.AppendCanonical(nil)))
}

func (c *canonical) operators(list []pauli.Operator, l lattice.Lattice) {
	var blocks [][]byte
	for _, op := range list {
		o := canonical{}
		o.operator(op, l)
		blocks = append(blocks, o.text)
	}
	c.sorted(blocks)
}

// bath appends the temperature and the bath operators, without names and in an
// order of their own.
func (c *canonical) bath(s kinetic.Spec) {
	c.float(s.Beta)
	var operators [][]byte
	for _, b := range s.Bath {
		o := canonical{}
		o.int(int64(b.X))
		o.int(int64(b.Z))
		for site := range s.Sites {
			o.flag(b.Sites == nil || slices.Contains(b.Sites, site))
		}
		o.law(b.Law)
		operators = append(operators, o.text)
	}
	c.sorted(operators)
}

// law appends the parameters that the kind of law has.
func (c *canonical) law(l bath.Law) {
	c.string(string(l.Kind))
	switch l.Kind {
	case bath.Table:
		for i, e := range l.Energies {
			c.float(e)
			c.float(l.Rates[i])
		}
	case bath.Power:
		c.float(l.Rate)
		c.float(l.Exponent)
		c.float(l.Cutoff)
	default:
		c.float(l.Rate)
	}
}

// observable appends what is recorded, with its label: labels are in the
// tables.
func (c *canonical) observable(o requested, l lattice.Lattice) {
	c.string(o.Name)
	c.string(o.Kind)
	c.operators(o.operators, l)
	for _, k := range o.Wavevector {
		c.int(int64(k))
	}
}
