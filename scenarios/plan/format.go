package plan

import (
	"math"
	"strconv"
)

// Figures for people: three significant digits, never a unit that changes.

// bare returns a figure of three significant digits, without an exponent
// where it is short enough to read.
func bare(x float64) string { return digits(x, 3) }

// digits is bare with so many significant digits.
func digits(x float64, n int) string {
	const longest = 1e7
	x = round(x, n)
	if abs(x) >= longest || x != 0 && abs(x) < 1e-3 {
		return strconv.FormatFloat(x, 'g', -1, 64)
	}
	return strconv.FormatFloat(x, 'f', -1, 64)
}

// against returns a rate with as many digits as it takes to tell it from the
// need: 255.8 of 256 must not read as 256 of 256.
func against(rate, need float64) string {
	const most = 9
	for n := 3; n < most; n++ {
		if s := digits(rate, n); rate == need || s != digits(need, n) {
			return s
		}
	}
	return digits(rate, most)
}

// two returns a figure of two significant digits, whole above ten.
func two(x float64) string {
	if abs(x) >= 10 {
		return bare(x)
	}
	return strconv.FormatFloat(math.Round(x*10)/10, 'f', 1, 64)
}

// round returns x with so many significant digits.
func round(x float64, digits int) float64 {
	r, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'e', digits-1, 64), 64)
	return r
}

func bps(x float64) string      { return bare(x) + " bit/s" }
func distance(x float64) string { return bare(x) + " km" }
func plain(x float64) string    { return strconv.FormatFloat(x, 'g', -1, 64) }

func perCent(x float64) string { return strconv.FormatFloat(100*x, 'f', 1, 64) + " %" }

// perCents names the QBER of both bases, once where they show the same.
func perCents(q QBER) string {
	if k, c := perCent(q.Key), perCent(q.Check); k != c {
		return k + " (key basis) and " + c + " (check basis)"
	}
	return perCent(q.Key)
}
