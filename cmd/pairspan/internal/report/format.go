package report

import (
	"math"
	"strconv"
	"strings"
)

// nbsp keeps a number and its unit on one line.
const nbsp = "\u00a0"

// slash stands between a figure of Alice's and one of Bob's.
const slash = nbsp + "/" + nbsp

// none stands in a table cell where a figure does not apply.
const none = "–"

var superscripts = strings.NewReplacer("0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴",
	"5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹", "-", "⁻")

// digits writes v with n significant digits and no trailing zeros; numbers
// outside 1e-4 to 1e7 get a power of ten. It is text for people, not for files.
func digits(v float64, n int) string {
	if v == 0 || math.IsNaN(v) || math.IsInf(v, 0) {
		if v == 0 {
			return "0"
		}
		return none
	}
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(v, 'e', n-1, 64), "e")
	power, err := strconv.Atoi(exponent)
	if err != nil {
		return none
	}
	if power < -4 || power >= 7 {
		return minus(trimZeros(mantissa) + "×10" + superscripts.Replace(strconv.Itoa(power)))
	}
	rounded, err := strconv.ParseFloat(mantissa+"e"+exponent, 64)
	if err != nil {
		return none
	}
	return minus(trimZeros(strconv.FormatFloat(rounded, 'f', max(0, n-1-power), 64)))
}

// decimals writes v with n places, and never a negative zero.
func decimals(v float64, n int) string {
	s := strconv.FormatFloat(v, 'f', n, 64)
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	return minus(s)
}

func trimZeros(s string) string {
	if !strings.Contains(s, ".") {
		return s
	}
	return strings.TrimRight(strings.TrimRight(s, "0"), ".")
}

// minus sets the true minus sign.
func minus(s string) string { return strings.Replace(s, "-", "−", 1) }

// grouped writes v with n significant digits, in groups of three from ten
// thousand on. Units never change with size: a column stays comparable.
func grouped(v float64, n int) string {
	r := roundTo(v, n)
	if math.Abs(r) < 1e4 || math.Abs(r) >= 1e10 || math.IsNaN(r) {
		return digits(v, n)
	}
	whole := strconv.FormatFloat(math.Abs(r), 'f', 0, 64)
	for at := len(whole) - 3; at > 0; at -= 3 {
		whole = whole[:at] + nbsp + whole[at:]
	}
	if r < 0 {
		whole = "−" + whole
	}
	return whole
}

// roundTo returns v rounded to n significant digits.
func roundTo(v float64, n int) float64 {
	r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'e', n-1, 64), 64)
	if err != nil {
		return v
	}
	return r
}

func bitRate(v float64) string { return grouped(v, 3) + nbsp + "bit/s" }
func countHz(v float64) string { return grouped(v, 3) + nbsp + "Hz" }
func km(v float64) string      { return digits(v, 3) + nbsp + "km" }
func picosec(v float64) string { return digits(v, 3) + nbsp + "ps" }
func perCent(v float64) string { return perCentBare(v) + nbsp + "%" }

// share writes a fraction that is no error rate.
func share(v float64) string { return digits(100*v, 3) + nbsp + "%" }

func decibels(v float64) string { return decibelsBare(v) + nbsp + "dB" }

// perCentBare writes a fraction in per cent: one place, or two digits below one.
func perCentBare(v float64) string {
	if p := 100 * v; math.Abs(roundTo(p, 2)) < 1 {
		return digits(p, 2)
	}
	return decimals(100*v, 1)
}

// decibelsBare writes one place, or two digits below a tenth.
func decibelsBare(v float64) string {
	if math.Abs(v) < 0.1 {
		return digits(v, 2)
	}
	return decimals(v, 1)
}

// against writes a rate with as many digits as it takes to tell it from the
// need: 255.8 of 256 must not read as 256 of 256.
func against(rate float64, need *float64) string {
	for n := 3; n < 7; n++ {
		s := grouped(rate, n)
		if need == nil || rate == *need || s != grouped(*need, n) {
			return s + nbsp + "bit/s"
		}
	}
	return grouped(rate, 7) + nbsp + "bit/s"
}

// orNone formats a figure that may not apply.
func orNone(v *float64, format func(float64) string) string {
	if v == nil {
		return none
	}
	return format(*v)
}

// listOf joins with commas and a last "or".
func listOf(parts []string, last string) string {
	if len(parts) < 2 {
		return strings.Join(parts, "")
	}
	return strings.Join(parts[:len(parts)-1], ", ") + " " + last + " " + parts[len(parts)-1]
}
