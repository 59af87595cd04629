package kinetic

import (
	"bytes"
	"crypto/sha256"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
)

// ErrSaved says that bytes given to Restore are not a state of this engine.
var ErrSaved = errors.New("not a saved state of this engine and generator")

// A saved state is the engine's name and format, the generator's fingerprint,
// a body, and eight bytes of the digest of all that.

// seal appends a saved state whose body is written by write.
func seal(dst []byte, head string, g *Generator, write func(b []byte) []byte) []byte {
	start := len(dst)
	dst = append(dst, head...)
	print := g.fingerprint()
	dst = write(append(dst, print[:]...))
	sum := sha256.Sum256(dst[start:])
	return append(dst, sum[:8]...)
}

// unseal checks a saved state of the given size and returns its body.
func unseal(src []byte, head string, g *Generator, size int) (*reader, error) {
	if len(src) != size {
		return nil, fmt.Errorf("%w: %d bytes, not %d", ErrSaved, len(src), size)
	}
	print := g.fingerprint()
	front := append([]byte(head), print[:]...)
	sum := sha256.Sum256(src[:size-8])
	if !bytes.HasPrefix(src, front) || !bytes.Equal(sum[:8], src[size-8:]) {
		return nil, fmt.Errorf("%w: wrong digest", ErrSaved)
	}
	return &reader{src[len(front) : size-8]}, nil
}

// reader takes numbers from the front of a byte slice of checked length.
type reader struct{ rest []byte }

func (r *reader) take(n int) []byte {
	b := r.rest[:n]
	r.rest = r.rest[n:]
	return b
}

func (r *reader) u64() uint64  { return binary.LittleEndian.Uint64(r.take(8)) }
func (r *reader) u32() uint32  { return binary.LittleEndian.Uint32(r.take(4)) }
func (r *reader) f64() float64 { return math.Float64frombits(r.u64()) }

// save appends stream, times, pending event, shares of the arena and unused
// tokens. What the arena lists follows from the tags.
func (l *listing) save(dst []byte) []byte {
	le := binary.LittleEndian
	pcg, err := l.src.pcg.MarshalBinary()
	if err != nil {
		panic("kinetic: " + err.Error())
	}
	dst = append(dst, pcg...)
	for _, v := range []uint64{
		math.Float64bits(l.next), math.Float64bits(l.now), l.jumps, l.nulls, uint64(l.head), uint64(l.left),
	} {
		dst = le.AppendUint64(dst, v)
	}
	for k := range l.rates {
		for _, v := range []uint32{l.first[k], l.end[k], l.bound[k], l.room[k]} {
			dst = le.AppendUint32(dst, v)
		}
	}
	for _, t := range l.queue {
		dst = le.AppendUint32(dst, t.class)
		dst = le.AppendUint32(dst, t.at)
		dst = le.AppendUint64(dst, t.rest)
	}
	return dst
}

// restore reads what save wrote, and makes an empty arena.
func (l *listing) restore(r *reader) error {
	if err := l.src.pcg.UnmarshalBinary(r.take(16)); err != nil {
		return fmt.Errorf("%w: %w", ErrSaved, err)
	}
	l.next, l.now = r.f64(), r.f64()
	l.jumps, l.nulls = r.u64(), r.u64()
	l.head, l.left = uint32(r.u64()), int(r.u64())
	weights := l.draw.weights[:0]
	top := uint32(0)
	for k, rate := range l.rates {
		l.first[k], l.end[k], l.bound[k], l.room[k] = r.u32(), r.u32(), r.u32(), r.u32()
		weights = append(weights, float64(l.bound[k]-l.first[k])*rate)
		top = l.room[k]
	}
	l.draw.set(weights)
	l.setScale()
	for i := range l.queue {
		l.queue[i] = token{r.u32(), r.u32(), r.u64()}
	}
	l.arena = make([]uint32, top)
	return nil
}

const savedClasses = "classes 1\n"

// Save appends all that the trajectory depends on.
func (e *classes[T]) Save(dst []byte) []byte {
	return seal(dst, savedClasses, e.g, func(b []byte) []byte {
		b = e.listing.save(b)
		for _, l := range e.lines {
			b = append(b, l...)
		}
		for _, tag := range e.tags {
			b = binary.LittleEndian.AppendUint64(b, uint64(tag))
		}
		return b
	})
}

// Restore continues from a state that Save wrote, bit for bit. On error the
// engine is as it was.
func (e *classes[T]) Restore(src []byte) error {
	r, err := unseal(src, savedClasses, e.g, len(e.Save(nil)))
	if err != nil {
		return err
	}
	if err := e.listing.restore(r); err != nil {
		return err
	}
	for _, l := range e.lines {
		copy(l, r.take(len(l)))
	}
	for a := range e.tags {
		e.tags[a] = T(r.u64())
		e.arena[e.tags[a]>>e.hot.bits] = uint32(a)
	}
	e.tally = newTally(e.g, e.tags, e.lines, e.hot.words)
	return nil
}

const savedComposition = "composition 2\n"

// Save appends all that the trajectory depends on.
func (e *composition) Save(dst []byte) []byte {
	return seal(dst, savedComposition, e.g, func(b []byte) []byte {
		b = e.listing.save(b)
		for _, l := range e.lines {
			b = append(b, l...)
		}
		for _, tag := range e.tags {
			b = binary.LittleEndian.AppendUint64(b, tag)
		}
		return b
	})
}

// Restore continues from a state that Save wrote, bit for bit. On error the
// engine is as it was.
func (e *composition) Restore(src []byte) error {
	r, err := unseal(src, savedComposition, e.g, len(e.Save(nil)))
	if err != nil {
		return err
	}
	if err := e.listing.restore(r); err != nil {
		return err
	}
	for _, l := range e.lines {
		copy(l, r.take(len(l)))
	}
	for a := range e.tags {
		e.tags[a] = r.u64()
		e.arena[e.tags[a]>>tagAt] = uint32(a)
	}
	patterns := e.patterns()
	e.tally = newTally(e.g, patterns, e.lines, e.hot.words)
	e.heat = e.sumEnergy(patterns)
	return nil
}

// fingerprint identifies the tables that a saved state belongs to. It is taken
// once: every Save needs it.
func (g *Generator) fingerprint() [32]byte {
	g.printed.Do(func() { g.print = g.digest() })
	return g.print
}

func (g *Generator) digest() [32]byte {
	h := sha256.New()
	le := binary.LittleEndian
	buf := le.AppendUint64(nil, uint64(g.Addresses()))
	for _, n := range g.Lattice.Size {
		buf = le.AppendUint64(buf, uint64(n))
	}
	for _, r := range g.Rates {
		buf = le.AppendUint64(buf, math.Float64bits(r))
	}
	for _, t := range g.Tables {
		buf = le.AppendUint32(buf, t)
	}
	for _, t := range g.Touch {
		buf = le.AppendUint32(buf, uint32(t.Delta))
		buf = le.AppendUint32(buf, t.Table)
	}
	for _, hit := range g.Hits {
		buf = le.AppendUint64(buf, uint64(hit.Line))
	}
	for _, levels := range g.Reference {
		buf = append(buf, levels...)
	}
	if g.Wide != nil {
		for _, l := range g.Wide.rates {
			for i, r := range l.rate {
				buf = le.AppendUint64(buf, uint64(l.keys[i]))
				buf = le.AppendUint64(buf, math.Float64bits(r))
			}
		}
		for _, s := range g.Wide.slots {
			buf = append(buf, s.shift, s.change)
		}
	}
	if g.Couplings != nil {
		buf = le.AppendUint64(buf, math.Float64bits(g.Spec.Beta))
		for _, b := range g.Spec.Bath {
			buf = b.Law.AppendCanonical(buf)
		}
		buf = le.AppendUint64(buf, math.Float64bits(g.Couplings.Unit))
		for _, j := range g.Couplings.J {
			for _, v := range j {
				buf = le.AppendUint32(buf, uint32(v))
			}
		}
	}
	h.Write(buf)
	return [32]byte(h.Sum(nil))
}
