package kinetic

import (
	"crypto/sha256"
	"encoding/binary"
	"math"
	"math/bits"

	//lint:ignore SA1019 its PCG is the generator of record: streams must not change with a library
	"golang.org/x/exp/rand"
)

// StreamRevision changes whenever the same seed would give another trajectory.
const StreamRevision = 1

// source is a stream of random numbers, PCG XSL RR 128/64.
type source struct {
	pcg rand.PCGSource
}

// newSource returns the stream of one unit: all 128 bits of the state come from
// SHA-256(seed, unit, purpose).
func newSource(seed [32]byte, unit int, purpose string) source {
	var s source
	h := sha256.New()
	h.Write(seed[:])
	h.Write(binary.LittleEndian.AppendUint64(nil, uint64(unit)))
	h.Write([]byte(purpose))
	if err := s.pcg.UnmarshalBinary(h.Sum(nil)[:16]); err != nil {
		panic("kinetic: " + err.Error())
	}
	return s
}

func (s *source) next() uint64 { return s.pcg.Uint64() }

// uniform returns a number in [0, 1) from 53 random bits.
func uniform(u uint64) float64 { return float64(int64(u>>11)) * 0x1p-53 }

// below returns an index below n and 64 bits that are uniform given the index,
// to within n/2^64.
func (s *source) below(n uint64) (index, rest uint64) { return bits.Mul64(s.next(), n) }

// exponential returns an exponential variate of mean 1 by the ziggurat method
// (G. Marsaglia, W. W. Tsang, J. Stat. Softw. 5(8) (2000)) with 256 layers: the
// low byte of a number chooses the layer, its high 53 bits the abscissa.
func (s *source) exponential() float64 {
	u := s.next()
	layer := u & 255
	x := uniform(u) * zigguratX[layer]
	if x < zigguratX[layer+1] {
		return x
	}
	return s.exponentialEdge(int(layer), x)
}

//go:noinline
func (s *source) exponentialEdge(layer int, x float64) float64 {
	tail := 0.0
	for {
		if layer == 0 {
			// Beyond the base layer the law repeats itself, shifted.
			tail += zigguratX[1]
		} else if zigguratF[layer]+uniform(s.next())*(zigguratF[layer+1]-zigguratF[layer]) < math.Exp(-x) {
			return tail + x
		}
		u := s.next()
		layer = int(u & 255)
		x = uniform(u) * zigguratX[layer]
		if x < zigguratX[layer+1] {
			return tail + x
		}
	}
}

// zigguratX holds the right ends of the layers, widest first, and zigguratF the
// density there. The edge of the base layer and the common area are those of
// the cited paper for 256 layers, to double precision.
var zigguratX, zigguratF [257]float64

func init() {
	const edge, area = 7.69711747013104972, 0.0039496598225815571993
	zigguratX[0] = area / math.Exp(-edge)
	zigguratX[1] = edge
	zigguratF[1] = math.Exp(-edge)
	for i := 1; i < 255; i++ {
		zigguratX[i+1] = -math.Log(area/zigguratX[i] + math.Exp(-zigguratX[i]))
		zigguratF[i+1] = math.Exp(-zigguratX[i+1])
	}
	zigguratF[256] = 1
}
