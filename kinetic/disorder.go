package kinetic

import (
	"crypto/sha256"
	"encoding/binary"
	"math"
)

// DisorderRevision changes whenever the same seed would give other couplings.
const DisorderRevision = 1

// Disorder draws the random couplings of one family in one sample. They depend
// on the seed, the sample, the family's operator and the cell, and on nothing
// else: not on temperature, bath or size, so that one sample can be studied at
// every temperature, and not on the other families.
type Disorder struct{ src source }

// NewDisorder returns the stream of random couplings of a family in a sample.
// family identifies the operator.
func NewDisorder(seed int64, sample int, family []byte) *Disorder {
	text := binary.LittleEndian.AppendUint64([]byte("disorder"), uint64(seed))
	return &Disorder{newSource(sha256.Sum256(append(text, family...)), sample, "couplings")}
}

// Signs draws by cell whether a coupling is turned round (1), which happens
// with the given probability.
func (d *Disorder) Signs(cells int, probability float64) []uint8 {
	signs := make([]uint8, cells)
	for c := range signs {
		if uniform(d.src.next()) < probability {
			signs[c] = 1
		}
	}
	return signs
}

// Normal draws by cell from the normal law of a mean and a standard deviation.
// The numbers are whole multiples of a power of ten, a billionth of mean and
// nine standard deviations together or less: energies are then exact, and the
// same on machines whose logarithms differ in the last place. None lies more
// than nine standard deviations from the mean.
func (d *Disorder) Normal(cells int, mean, sd float64) []float64 {
	const digits = 9
	bound := math.Abs(mean) + 9*sd
	power := math.MinInt32
	if bound > 0 {
		for power = -300; math.Pow10(power) < bound; power++ {
		}
		power -= digits
	}
	values := make([]float64, cells)
	for c := range values {
		values[c] = roundTo(mean+sd*normal(d.src.next()), power)
	}
	return values
}

// normal returns the standard normal variate of 64 random bits, by inversion.
func normal(u uint64) float64 {
	// The middle of one of 2^52 equal parts of (0, 1/2), and a sign.
	x := math.Sqrt2 * math.Erfinv(1-(float64(u>>12)+0.5)*0x1p-52)
	if u&1 == 0 {
		return -x
	}
	return x
}

// roundTo rounds x to a multiple of a power of ten.
func roundTo(x float64, power int) float64 {
	switch {
	case x == 0 || power < -300:
		return x
	case power < 0:
		scale := math.Pow10(-power)
		return math.Round(x*scale)/scale + 0
	}
	unit := math.Pow10(power)
	return math.Round(x/unit)*unit + 0
}
