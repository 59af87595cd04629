package main

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// withError prints a value and its standard error as 12.41(7): the digits in
// brackets are the error in units of the last digits shown. The error keeps two
// digits if they are between 10 and 35 and one otherwise (Particle Data Group,
// Review of Particle Physics, Introduction, section on rounding).
func withError(value, err float64) string {
	switch {
	case math.IsNaN(value) || math.IsInf(value, 0):
		return "-"
	case math.IsNaN(err) || math.IsInf(err, 0):
		return plain(value)
	case err <= 0:
		return plain(value) + "(0)"
	}
	power := 0
	size := math.Max(math.Abs(value), err)
	if size >= 1e6 || size < 1e-3 {
		power = int(math.Floor(math.Log10(size)))
		scale := math.Pow(10, float64(power))
		value, err = value/scale, err/scale
	}
	decimals := errorDecimals(err)
	if decimals < 0 {
		unit := math.Pow(10, float64(-decimals))
		value, err = math.Round(value/unit)*unit, math.Round(err/unit)*unit
		decimals = 0
	}
	mantissa := strconv.FormatFloat(value, 'f', decimals, 64)
	var digits string
	if err >= 0.95 && decimals > 0 {
		digits = strconv.FormatFloat(err, 'f', decimals, 64)
	} else {
		digits = strconv.FormatFloat(err*math.Pow(10, float64(decimals)), 'f', 0, 64)
	}
	if isZero(mantissa) {
		mantissa = strings.TrimPrefix(mantissa, "-")
	}
	s := mantissa + "(" + digits + ")"
	if power != 0 {
		s += "e" + strconv.Itoa(power)
	}
	return s
}

// errorDecimals returns how many decimals show an error to the precision that
// it deserves; negative: digits left of the point that are rounded away.
func errorDecimals(err float64) int {
	exponent := int(math.Floor(math.Log10(err)))
	lead := err / math.Pow(10, float64(exponent)) // 1 <= lead < 10
	switch {
	case lead < 3.55:
		return 1 - exponent
	case lead < 9.5:
		return -exponent
	}
	return -exponent // 0.095..0.1 shows as 0.10
}

func isZero(s string) bool {
	return strings.Trim(s, "-0.") == ""
}

// plain prints a number without an error to four significant digits.
func plain(x float64) string {
	switch {
	case math.IsNaN(x) || math.IsInf(x, 0):
		return "-"
	case x == 0:
		return "0"
	case math.Abs(x) >= 1e6 || math.Abs(x) < 1e-3:
		return shortExponent(strconv.FormatFloat(x, 'e', 3, 64))
	}
	decimals := 3 - int(math.Floor(math.Log10(math.Abs(x))))
	return strconv.FormatFloat(x, 'f', max(decimals, 0), 64)
}

// shortest prints a parameter with as many digits as tell it apart.
func shortest(x float64) string {
	return shortExponent(strconv.FormatFloat(x, 'g', -1, 64))
}

func shortExponent(s string) string {
	mantissa, exponent, found := strings.Cut(s, "e")
	if !found {
		return s
	}
	n, err := strconv.Atoi(exponent)
	if err != nil {
		return s
	}
	return mantissa + "e" + strconv.Itoa(n)
}

// count prints a number of things: whole below a million, else 1.23e9.
func count(n float64) string {
	if math.Abs(n) < 1e6 {
		return strconv.FormatFloat(math.Round(n), 'f', 0, 64)
	}
	return shortExponent(strconv.FormatFloat(n, 'e', 2, 64))
}

// speed prints a number per second to three digits.
func speed(x float64) string {
	if x < 1e4 {
		return count(x) + "/s"
	}
	return shortExponent(strconv.FormatFloat(x, 'e', 2, 64)) + "/s"
}

// bytesOf prints a size in binary units.
func bytesOf(n int64) string {
	const units = "KMGTPE"
	if n < 1024 {
		return fmt.Sprintf("%d B", n)
	}
	x := float64(n) / 1024
	i := 0
	for x >= 1000 && i < len(units)-1 {
		x /= 1024
		i++
	}
	if x < 10 {
		return fmt.Sprintf("%.1f %ciB", x, units[i])
	}
	return fmt.Sprintf("%.0f %ciB", x, units[i])
}

// duration prints seconds for people.
func duration(seconds float64) string {
	switch {
	case math.IsNaN(seconds) || seconds < 0:
		return "-"
	case seconds < 1:
		return fmt.Sprintf("%.2g s", seconds)
	case seconds < 10:
		return fmt.Sprintf("%.1f s", seconds)
	case seconds < 100:
		return fmt.Sprintf("%.0f s", seconds)
	case seconds < 100*60:
		return fmt.Sprintf("%.0f min", seconds/60)
	case seconds < 72*3600:
		return fmt.Sprintf("%.1f h", seconds/3600)
	}
	return fmt.Sprintf("%.1f days", seconds/86400)
}
