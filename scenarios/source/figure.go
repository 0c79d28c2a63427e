package source

import (
	"math"
	"strconv"

	"pairspan/sources"
)

// number is a figure for JSON: null instead of NaN or infinity.
func number(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}

// exactly is a figure without a standard deviation.
func exactly(x float64) Figure { return Figure{Value: number(x)} }

// estimated is a fitted figure.
func estimated(e sources.Estimate) Figure { return Figure{number(e.Value), number(e.SD)} }

// perArm is a fitted figure of each arm.
func perArm(e [2]sources.Estimate) PerArm { return PerArm{estimated(e[0]), estimated(e[1])} }

// Text returns the figure for people: its value with its standard deviation, the
// last digit that of the deviation's second; "not known" without a value.
func (f Figure) Text() string { return f.scaled(1, "") }

// PerCent returns a fraction for people, in per cent.
func (f Figure) PerCent() string { return f.scaled(100, " %") }

func (f Figure) scaled(by float64, unit string) string {
	if f.Value == nil {
		return "not known"
	}
	value := *f.Value * by
	if f.SD == nil || !(*f.SD > 0) {
		return three(value) + unit
	}
	const digits = 2
	sd := *f.SD * by
	places := digits - 1 - int(math.Floor(math.Log10(sd)))
	if rounded, _ := strconv.ParseFloat(strconv.FormatFloat(sd, 'e', digits-1, 64), 64); rounded >= math.Pow(10, float64(digits-places)) {
		places-- // 0.0996 is 0.10
	}
	if large := math.Max(math.Abs(value), sd); places < 0 || large >= 1e7 || large < 1e-3 {
		return scientific(value, sd) + unit
	}
	return strconv.FormatFloat(value, 'f', places, 64) + " +- " + strconv.FormatFloat(sd, 'f', places, 64) + unit
}

// scientific writes value and deviation with a common power of ten.
func scientific(value, sd float64) string {
	power := math.Floor(math.Log10(math.Max(math.Abs(value), sd)))
	unit := math.Pow(10, power)
	places := max(0, 1+int(power-math.Floor(math.Log10(sd))))
	return "(" + strconv.FormatFloat(value/unit, 'f', places, 64) + " +- " + strconv.FormatFloat(sd/unit, 'f', places, 64) + ")e" + strconv.Itoa(int(power))
}

// three returns a figure of three significant digits, without an exponent where
// it is short enough to read.
func three(x float64) string { return significant(x, 3) }

func significant(x float64, digits int) string {
	const longest = 1e7
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'e', digits-1, 64), 64)
	if math.Abs(rounded) >= longest || rounded != 0 && math.Abs(rounded) < 1e-3 {
		return strconv.FormatFloat(rounded, 'g', -1, 64)
	}
	return strconv.FormatFloat(rounded, 'f', -1, 64)
}

// perCent writes a fraction with one place.
func perCent(x float64) string { return strconv.FormatFloat(100*x, 'f', 1, 64) + " %" }
