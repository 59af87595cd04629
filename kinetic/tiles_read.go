package kinetic

import (
	"encoding/binary"
	"fmt"
	"math/bits"
)

func (e *tiles[P]) Sums(dst []int64) []int64 { return e.appendSums(dst) }
func (e *tiles[P]) Energy(int) float64       { return e.energy() }

func (e *tiles[P]) Census(dst []int64) { census(e.g, e.patterns, dst) }

func (e *tiles[P]) Terms(family, _ int, dst []uint8) {
	if l := family - len(e.g.Families); l >= 0 {
		e.readLine(l, dst)
		return
	}
	readTerms(e.g, family, e.patterns, dst)
}

func (e *tiles[P]) Patterns(_ int, dst []uint16) {
	for a, p := range e.patterns {
		dst[a] = uint16(p)
	}
}

// Audit checks the weights and lists of tiles, the levels and the sums.
func (e *tiles[P]) Audit() error {
	for i := range e.tile {
		t := &e.tile[i]
		if want := e.sumTile(i); want != t.weight {
			return fmt.Errorf("tile %d has weight %d, its seats add up to %d", i, t.weight, want)
		}
		if k := uint32(bits.Len64(t.weight)); k != t.octave || t.at < e.first[k] || t.at >= e.end[k] || e.arena[t.at] != uint32(i) {
			return fmt.Errorf("tile %d of octave %d is not where it says, at %d of octave %d", i, k, t.at, t.octave)
		}
	}
	if err := agree(e.g, e.patterns); err != nil {
		return err
	}
	return auditTally(&e.tally, e.patterns)
}

const savedTiles = "tiles 1\n"

// Save appends all that the trajectory depends on.
func (e *tiles[P]) Save(dst []byte) []byte {
	return seal(dst, savedTiles, e.g, func(b []byte) []byte {
		b = e.listing.save(b)
		for _, l := range e.lines {
			b = append(b, l...)
		}
		for i := range e.tile {
			b = binary.LittleEndian.AppendUint32(b, e.tile[i].at)
		}
		for _, p := range e.patterns {
			b = binary.LittleEndian.AppendUint16(b, uint16(p))
		}
		return b
	})
}

// Restore continues from a state that Save wrote, bit for bit. On error the
// engine is as it was.
func (e *tiles[P]) Restore(src []byte) error {
	r, err := unseal(src, savedTiles, e.g, len(e.Save(nil)))
	if err != nil {
		return err
	}
	if err := e.listing.restore(r); err != nil {
		return err
	}
	e.setTileScale()
	for _, l := range e.lines {
		copy(l, r.take(len(l)))
	}
	for i := range e.tile {
		e.tile[i].at = r.u32()
		e.arena[e.tile[i].at] = uint32(i)
	}
	for a := range e.patterns {
		e.patterns[a] = P(binary.LittleEndian.Uint16(r.take(2)))
	}
	for i := range e.tile {
		e.tile[i].weight = e.sumTile(i)
		e.tile[i].octave = uint32(bits.Len64(e.tile[i].weight))
	}
	e.tally = newTally(e.g, e.patterns, e.lines, e.hot.words)
	return nil
}
