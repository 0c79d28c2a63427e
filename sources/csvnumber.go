package sources

import (
	"math"
	"regexp"
	"strconv"
	"strings"
)

// decimal is how a number is written: no hexadecimal, no digit separators, no
// names of infinity.
var decimal = regexp.MustCompile(`^[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?$`)

func isNumber(text string) bool { return decimal.MatchString(text) }

// number returns the cell's value, which is finite.
func (c csvCell) number() (float64, error) {
	if isNumber(c.text) {
		x, err := strconv.ParseFloat(c.text, 64)
		if err != nil {
			return 0, c.fail("is too large", "check the exponent")
		}
		return x, nil
	}
	if x, err := strconv.ParseFloat(c.text, 64); err == nil && (math.IsNaN(x) || math.IsInf(x, 0)) {
		return 0, c.fail("is not a finite number", "give the measured value")
	}
	return 0, c.fail("is not a number", numberHint(c.text))
}

// numberHint guesses what a person meant by a text that is not a number.
func numberHint(text string) string {
	switch {
	case text == "":
		return "give every value; write 0 where it is zero"
	case strings.Contains(text, ";"):
		return "separate columns by commas, not semicolons"
	case isNumber(strings.Replace(text, ",", ".", 1)):
		return "write a decimal point: " + strings.Replace(text, ",", ".", 1)
	case strings.ContainsAny(text, "−–"):
		return "write the minus sign as -"
	case strings.ContainsAny(text, "ij"):
		return "real and imaginary part stand in columns of their own"
	}
	return "write it like -0.0123 or 1.2e-3"
}

// index returns the cell's value, a whole number from 0 to most.
func (c csvCell) index(most int, hint string) (int, error) {
	n, err := strconv.Atoi(c.text)
	if err != nil || n < 0 || n > most {
		return 0, c.fail("is not a whole number from 0 to "+strconv.Itoa(most), hint)
	}
	return n, nil
}
