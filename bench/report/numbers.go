package report

import (
	"math"
	"strconv"
	"strings"

	"codeassay/bench"
)

// absent stands in tables for what could not be computed.
const absent = "–"

// mostDecimals of bits/s are enough for any recording's interval.
const mostDecimals = 4

// decimals are those that the interval supports: its half-width shows two
// significant digits where they begin below 3.55, else one (common practice in
// physics). Without an interval the value shows three.
func decimals(value, low, high bench.Number) int {
	half := float64(high-low) / 2
	if !low.Known() || !high.Known() || half <= 0 {
		return significant(float64(value), 3, mostDecimals)
	}
	if half/math.Pow(10, math.Floor(math.Log10(half))) < 3.55 {
		return significant(half, 2, mostDecimals)
	}
	return significant(half, 1, mostDecimals)
}

// significant is the number of decimals that shows x to so many digits.
func significant(x float64, digits, most int) int {
	if x == 0 || math.IsNaN(x) || math.IsInf(x, 0) {
		return 1
	}
	return min(max(digits-1-int(math.Floor(math.Log10(math.Abs(x)))), 0), most)
}

// fixed writes n with so many decimals, never as minus zero. Beyond nine digits,
// which no rate of an ensemble has, it turns to powers of ten.
func fixed(n bench.Number, decimals int) string {
	if !n.Known() {
		return absent
	}
	x := float64(n)
	if math.Abs(x) >= 1e9 {
		return strconv.FormatFloat(x, 'g', 3, 64)
	}
	s := strconv.FormatFloat(x, 'f', decimals, 64)
	if strings.HasPrefix(s, "-") && strings.Trim(s, "-0.") == "" {
		return s[1:]
	}
	return s
}

// bits writes a number of bits/s to the digits that its interval supports.
func bits(value, low, high bench.Number) string {
	return fixed(value, decimals(value, low, high))
}

// span writes an interval around value.
func span(value, low, high bench.Number) string {
	if !low.Known() || !high.Known() {
		return absent
	}
	d := decimals(value, low, high)
	return fixed(low, d) + " to " + fixed(high, d)
}

// digits writes n to so many significant digits, without powers of ten.
func digits(n bench.Number, of int) string {
	return fixed(n, significant(float64(n), of, 9))
}

// trimmed is digits without trailing zeros: for settings such as 20 Hz.
func trimmed(n bench.Number, of int) string {
	s := digits(n, of)
	if strings.Contains(s, ".") {
		s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	}
	return s
}

// percent writes a share.
func percent(n bench.Number, of int) string {
	if !n.Known() {
		return absent
	}
	return trimmed(n*100, of) + " %"
}

// probability writes a p-value.
func probability(p bench.Number) string {
	if p.Known() && p < 1e-4 {
		return "< 0.0001"
	}
	return digits(p, 2)
}

// count writes a whole number with its thousands set apart.
func count(n int64) string {
	s := strconv.FormatInt(n, 10)
	sign := ""
	if n < 0 {
		sign, s = "-", s[1:]
	}
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "," + s[i:]
	}
	return sign + s
}

// counted is "1 segment" or "3 segments".
func counted(n int64, one string) string {
	if n == 1 {
		return "1 " + one
	}
	return count(n) + " " + one + "s"
}
