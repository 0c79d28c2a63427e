package sources

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// decimal is how a number is written: no hexadecimal, no digit separators, no
// names of infinity.
var decimal = regexp.MustCompile(`^[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?$`)

// imaginary is how a number ends that was written as a complex one.
var imaginary = regexp.MustCompile(`[0-9.][ij]$`)

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
	case imaginary.MatchString(text):
		return "real and imaginary part stand in columns of their own"
	}
	return "write it like -0.0123 or 1.2e-3"
}

// between returns the cell's value, from lo to hi; the hint says what such a
// value is.
func (c csvCell) between(lo, hi float64, hint string) (float64, error) {
	x, err := c.number()
	if err != nil {
		return 0, err
	}
	if !(x >= lo && x <= hi) {
		return 0, c.fail(fmt.Sprintf("is outside %g to %g", lo, hi), hint)
	}
	return x, nil
}

// positive returns the cell's value, which is above 0.
func (c csvCell) positive(hint string) (float64, error) {
	x, err := c.number()
	if err != nil {
		return 0, err
	}
	if !(x > 0) {
		return 0, c.fail("is not above 0", hint)
	}
	return x, nil
}

// notNegative returns the cell's value, which is 0 or more.
func (c csvCell) notNegative(hint string) (float64, error) {
	x, err := c.number()
	if err != nil {
		return 0, err
	}
	if !(x >= 0) {
		return 0, c.fail("is below 0", hint)
	}
	return math.Abs(x), nil // -0 is 0
}

// maxCount is the greatest number of counts up to which all whole numbers can
// be told apart.
const maxCount = 1 << 53

// thousands is how a count is written with its digits in groups.
var thousands = regexp.MustCompile(`^[0-9]{1,3}(,[0-9]{3})+$`)

// count returns the cell's value, a number of events: whole, 0 or more.
func (c csvCell) count() (float64, error) {
	if thousands.MatchString(c.text) {
		return 0, c.fail("is not a number", "write thousands without a comma: "+strings.ReplaceAll(c.text, ",", ""))
	}
	x, err := c.notNegative("give the counts as they were counted, accidentals not subtracted")
	switch {
	case err != nil:
		return 0, err
	case x != math.Trunc(x):
		return 0, c.fail("is not a whole number", "give the counts as they were counted: not per second, accidentals not subtracted")
	case x > maxCount:
		return 0, c.fail("is too large", "check the exponent")
	}
	return x, nil
}

// index returns the cell's value, a whole number from 0 to most.
func (c csvCell) index(most int, hint string) (int, error) {
	n, err := strconv.Atoi(c.text)
	if err != nil || n < 0 || n > most {
		return 0, c.fail("is not a whole number from 0 to "+strconv.Itoa(most), hint)
	}
	return n, nil
}
