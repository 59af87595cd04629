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

// savedClasses opens a saved state of the class engine.
const savedClasses = "classes 1\n"

// Save appends what the trajectory depends on: tags, stream, times, pending
// event, bounds and unused tokens. The arena follows from the tags, the sums from
// the levels.
func (e *classes[T]) Save(dst []byte) []byte {
	start := len(dst)
	dst = append(dst, savedClasses...)
	print := e.g.fingerprint()
	dst = append(dst, print[:]...)
	le := binary.LittleEndian
	u64 := func(v uint64) { dst = le.AppendUint64(dst, v) }
	pcg, err := e.src.pcg.MarshalBinary()
	if err != nil {
		panic("kinetic: " + err.Error())
	}
	dst = append(dst, pcg...)
	u64(math.Float64bits(e.next))
	u64(math.Float64bits(e.now))
	u64(e.jumps)
	u64(e.nulls)
	u64(uint64(e.head))
	u64(uint64(e.left))
	for k := range e.g.Rates {
		for _, v := range []uint32{e.first[k], e.end[k], e.bound[k], e.room[k]} {
			dst = le.AppendUint32(dst, v)
		}
	}
	for _, t := range e.queue {
		dst = le.AppendUint32(dst, t.class)
		dst = le.AppendUint32(dst, t.at)
		u64(t.rest)
	}
	for _, l := range e.lines {
		dst = append(dst, l...)
	}
	for _, tag := range e.tags {
		u64(uint64(tag))
	}
	sum := sha256.Sum256(dst[start:])
	return append(dst, sum[:8]...)
}

// Restore continues from a state that Save wrote, bit for bit. On error the
// engine is as it was.
func (e *classes[T]) Restore(src []byte) error {
	size := len(e.Save(nil))
	if len(src) != size {
		return fmt.Errorf("%w: %d bytes, not %d", ErrSaved, len(src), size)
	}
	sum := sha256.Sum256(src[:size-8])
	print := e.g.fingerprint()
	head := append([]byte(savedClasses), print[:]...)
	if !bytes.Equal(sum[:8], src[size-8:]) || !bytes.HasPrefix(src, head) {
		return fmt.Errorf("%w: wrong digest", ErrSaved)
	}
	r := reader{src[len(head) : size-8]}
	if err := e.src.pcg.UnmarshalBinary(r.take(16)); err != nil {
		return fmt.Errorf("%w: %w", ErrSaved, err)
	}
	e.next = math.Float64frombits(r.u64())
	e.now = math.Float64frombits(r.u64())
	e.jumps, e.nulls = r.u64(), r.u64()
	e.head, e.left = uint32(r.u64()), int(r.u64())
	weights := e.draw.weights[:0]
	top := uint32(0)
	for k, rate := range e.g.Rates {
		e.first[k], e.end[k], e.bound[k], e.room[k] = r.u32(), r.u32(), r.u32(), r.u32()
		weights = append(weights, float64(e.bound[k]-e.first[k])*rate)
		top = e.room[k]
	}
	e.draw.set(weights)
	e.setScale()
	for i := range e.queue {
		e.queue[i] = token{r.u32(), r.u32(), r.u64()}
	}
	for _, l := range e.lines {
		copy(l, r.take(len(l)))
	}
	for a := range e.tags {
		e.tags[a] = T(r.u64())
	}
	e.arena = make([]uint32, top)
	for a, tag := range e.tags {
		e.arena[tag>>e.hot.bits] = uint32(a)
	}
	e.tally = newTally(e.g, e.tags, e.lines, e.hot.words)
	return nil
}

// fingerprint identifies the tables that a saved state belongs to.
func (g *Generator) fingerprint() [32]byte {
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
	h.Write(buf)
	return [32]byte(h.Sum(nil))
}

// reader takes numbers from the front of a byte slice of checked length.
type reader struct{ rest []byte }

func (r *reader) take(n int) []byte {
	b := r.rest[:n]
	r.rest = r.rest[n:]
	return b
}

func (r *reader) u64() uint64 { return binary.LittleEndian.Uint64(r.take(8)) }
func (r *reader) u32() uint32 { return binary.LittleEndian.Uint32(r.take(4)) }
