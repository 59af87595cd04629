package main

import (
	"math"
	"testing"
)

// The rule and the examples 0.827(119), 0.827(367) -> 0.83(12), 0.8(4) are those
// of the Particle Data Group, Review of Particle Physics, Introduction, section
// on rounding.
func TestWithError(t *testing.T) {
	for _, c := range []struct {
		value, err float64
		want       string
	}{
		{0.827, 0.119, "0.83(12)"},
		{0.827, 0.367, "0.8(4)"},
		{12.4123, 0.0712, "12.41(7)"},
		{12.4123, 0.0951, "12.41(10)"},
		{1234.5, 20.3, "1234(20)"},
		{1234.5, 203, "1230(200)"},
		{12.345, 1.23, "12.3(1.2)"},
		{12.345, 4.6, "12(5)"},
		{-718.13, 0.42, "-718.1(4)"},
		{-0.001, 0.2, "0.00(20)"},
		{0.2, 3.1, "0.2(3.1)"},
		{1.2345e7, 2.1e5, "1.234(21)e7"},
		{1.2345e-5, 4e-7, "1.23(4)e-5"},
		{5, 0, "5.000(0)"},
		{math.NaN(), 1, "-"},
		{5, math.NaN(), "5.000"},
	} {
		if got := withError(c.value, c.err); got != c.want {
			t.Errorf("withError(%v, %v) = %s, want %s", c.value, c.err, got, c.want)
		}
	}
}

func TestPlainNumbers(t *testing.T) {
	for _, c := range []struct{ got, want string }{
		{plain(0), "0"},
		{plain(12.34567), "12.35"},
		{plain(123456), "123456"},
		{plain(1.5e9), "1.500e9"},
		{plain(2.5e-7), "2.500e-7"},
		{shortest(0.1), "0.1"},
		{shortest(1e21), "1e21"},
		{count(999999), "999999"},
		{count(1.2345e9), "1.23e9"},
		{bytesOf(1023), "1023 B"},
		{bytesOf(1536), "1.5 KiB"},
		{bytesOf(64 << 30), "64 GiB"},
		{duration(3.21), "3.2 s"},
		{duration(600), "10 min"},
		{duration(7200), "2.0 h"},
		{duration(864000), "10.0 days"},
		{threeDigits(1234.5), "1234"},
		{threeDigits(0.123456), "0.123"},
		{plural(1, "trajectory"), "1 trajectory"},
		{plural(3, "trajectory"), "3 trajectories"},
		{plural(0, "point"), "0 points"},
	} {
		if c.got != c.want {
			t.Errorf("got %q, want %q", c.got, c.want)
		}
	}
}
