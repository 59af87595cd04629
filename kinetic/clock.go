package kinetic

import (
	"math"
	"math/big"
)

// ClockShape returns cos(2 pi s/q) for s = 0..q-1: the energies of a clock model
// over -J. The values are decimals of 15 digits chosen so that every linear
// relation between cosines with rational coefficients holds for them exactly,
// and sums of energies that are equal are found equal: cos(2 pi s/q) and that
// of q - s are the same number, 0, 1/2 and 1 are themselves, and for q = 5 the
// five add up to 0. They differ from cosines by at most a few 1e-15. It panics
// for q below 2 or above 64.
func ClockShape(q int) []float64 {
	if q < 2 || q > 64 {
		panic("kinetic: a clock of fewer than 2 or more than 64 levels")
	}
	shape := make([]float64, q)
	for s, row := range cosines(q) {
		// 2 cos(2 pi s/q) = row[0] + sum_j row[j] 2 cos(2 pi j/q).
		sum := big.NewRat(int64(row[0]), 2)
		for j := 1; j < len(row); j++ {
			digits := math.Round(math.Cos(2*math.Pi*float64(j)/float64(q)) * 1e15)
			sum.Add(sum, big.NewRat(int64(row[j])*int64(digits), 1e15))
		}
		shape[s], _ = sum.Float64()
		shape[(q-s)%q] = shape[s]
	}
	return shape
}

// cosines expresses v_s = 2 cos(2 pi s/q), s = 0..q/2, by whole numbers in the
// basis 1, v_1 .. v_(d-1) of the field they span, where 2d is the degree of the
// cyclotomic polynomial. Divided by z^d that polynomial, a palindrome, reads
// v_d + a_(d-1) v_(d-1) + ... + a_0 = 0, and v_(s+1) = v_1 v_s - v_(s-1).
func cosines(q int) [][]int {
	phi := cyclotomic(q)
	d := max(1, (len(phi)-1)/2)
	// next is v_d: for q = 2 that is v_1 = -2, which the polynomial z + 1 gives
	// as twice its root.
	next := make([]int, d)
	if q == 2 {
		next[0] = -2
	} else {
		for j := range next {
			next[j] = -phi[d-j]
		}
	}
	rows := make([][]int, q/2+1)
	rows[0] = make([]int, d)
	rows[0][0] = 2
	for s := 1; s < len(rows); s++ {
		rows[s] = make([]int, d)
		switch {
		case s < d:
			rows[s][s] = 1
		case s == d:
			copy(rows[s], next)
		default:
			timesFirst(rows[s], rows[s-1], next)
			for j, x := range rows[s-2] {
				rows[s][j] -= x
			}
		}
	}
	return rows
}

// timesFirst adds v_1 times a row to dst.
func timesFirst(dst, row, next []int) {
	d := len(row)
	raise := func(j, n int) { // adds n v_j
		switch {
		case j == 0:
			dst[0] += 2 * n
		case j < d:
			dst[j] += n
		default:
			for k, x := range next {
				dst[k] += n * x
			}
		}
	}
	raise(1, row[0])
	for j := 1; j < d; j++ {
		raise(j+1, row[j])
		raise(j-1, row[j])
	}
}

// cyclotomic returns the coefficients of the q-th cyclotomic polynomial, lowest
// first: z^q - 1 divided by those of all proper divisors.
func cyclotomic(q int) []int {
	p := make([]int, q+1)
	p[0], p[q] = -1, 1
	for n := 1; n < q; n++ {
		if q%n != 0 {
			continue
		}
		by := cyclotomic(n)
		quotient := make([]int, len(p)-len(by)+1)
		for i := len(quotient) - 1; i >= 0; i-- {
			quotient[i] = p[i+len(by)-1] // monic
			for j, c := range by {
				p[i+j] -= quotient[i] * c
			}
		}
		p = quotient
	}
	return p
}
