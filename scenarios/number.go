package scenarios

import (
	"math"
	"regexp"
	"strconv"
	"strings"
)

// number is a figure as a person wrote it, with its standard deviation; sd
// is NaN where none is stated.
type number struct{ value, sd float64 }

var (
	decimal    = regexp.MustCompile(`^[-+]?(\.[0-9]+|[0-9]+(\.[0-9]*)?)([eE][-+]?[0-9]+)?$`)
	octal      = regexp.MustCompile(`^[-+]?0[0-9]`)
	otherBase  = regexp.MustCompile(`(?i)^[-+]?0[xob][0-9a-f_]*$`)
	underscore = regexp.MustCompile(`^[-+]?[0-9][0-9.]*_[0-9_.eE+-]*$`)
	comma      = regexp.MustCompile(`^[-+]?[0-9]+,[0-9]+([eE][-+]?[0-9]+)?$`)
	perCent    = regexp.MustCompile(`^([-+]?[0-9.]+)\s*(%|per ?cent)$`)
	withUnit   = regexp.MustCompile(`^[-+]?[0-9][0-9.]*([eE][-+]?[0-9]+)?\s*[\pL°][^0-9]*[0-9]?$`)
	inBrackets = regexp.MustCompile(`^([-+]?[0-9.]+)\([0-9.]+\)$`)
	notFinite  = regexp.MustCompile(`(?i)^[-+]?\.?(nan|inf|infinity)$`)
	truth      = regexp.MustCompile(`(?i)^(true|false|yes|no|on|off|y|n)$`)
)

// isNull reports whether a plain text is what YAML calls null.
func isNull(text string) bool {
	switch text {
	case "", "~", "null", "Null", "NULL":
		return true
	}
	return false
}

// parseNumber reads a plain decimal number, with or without an exponent,
// optionally followed by +- (or ±) and a standard deviation above zero. A
// problem comes with a hint at what to write instead; unit is the entry's.
func parseNumber(text, unit string) (n number, problem, hint string) {
	value, sd, stated := cutDeviation(text)
	n.sd = math.NaN()
	if n.value, problem, hint = parsePlain(value, unit); problem != "" || !stated {
		return n, problem, hint
	}
	if n.sd, problem, hint = parsePlain(sd, unit); problem != "" {
		return n, "standard deviation: " + problem, hint
	}
	switch {
	case n.sd < 0:
		return n, "standard deviation: " + show(sd) + " is negative", "write it as " + value + " +- " + strings.TrimLeft(sd, "-")
	case n.sd == 0:
		return n, "a standard deviation of zero says nothing", "leave it out: " + value
	}
	return n, "", ""
}

// cutDeviation splits a number from its standard deviation.
func cutDeviation(text string) (value, sd string, stated bool) {
	for _, sign := range []string{"+-", "±"} {
		if value, sd, stated = strings.Cut(text, sign); stated {
			return strings.TrimSpace(value), strings.TrimSpace(sd), true
		}
	}
	return strings.TrimSpace(text), "", false
}

func parsePlain(text, unit string) (x float64, problem, hint string) {
	if !decimal.MatchString(text) {
		problem, hint = notANumber(text, unit)
		return 0, problem, hint
	}
	if octal.MatchString(text) {
		return 0, show(text) + " begins with a zero, which some programs read as octal",
			"write it without the zero in front: " + withoutZeros(text)
	}
	x, err := strconv.ParseFloat(text, 64)
	switch {
	case err != nil:
		return 0, show(text) + " is too large for a number", "check the exponent"
	case x == 0 && strings.ContainsAny(mantissa(text), "123456789"):
		return 0, show(text) + " is too small for a number", "check the exponent, or write 0"
	}
	return x + 0, "", "" // + 0 turns -0 into 0
}

func mantissa(text string) string {
	m, _, _ := strings.Cut(strings.ToLower(text), "e")
	return m
}

func withoutZeros(text string) string {
	sign := ""
	if text[0] == '-' || text[0] == '+' {
		sign, text = strings.TrimPrefix(text[:1], "+"), text[1:]
	}
	text = strings.TrimLeft(text, "0")
	if text == "" || text[0] < '0' || text[0] > '9' {
		text = "0" + text
	}
	return sign + text
}

// notANumber says what a text is that is not a number.
func notANumber(text, unit string) (problem, hint string) {
	alone := "write the number alone"
	if unit != "" {
		alone += ", in " + unit
	}
	m := perCent.FindStringSubmatch(text)
	switch {
	case isNull(text):
		return "empty", "state a number, or leave the entry out"
	case notFinite.MatchString(text):
		return show(text) + " is not a finite number", "state a number, or leave the entry out"
	case truth.MatchString(text):
		return show(text) + " is not a number", alone
	case otherBase.MatchString(text):
		return show(text) + " is not a decimal number", "write it in decimal"
	case underscore.MatchString(text):
		return show(text) + " has underscores", "write it without: " + strings.ReplaceAll(text, "_", "")
	case comma.MatchString(text):
		return show(text) + " has a comma", withoutComma(text)
	case m != nil:
		return show(text) + " is in per cent", inFraction(m[1])
	case strings.Contains(text, "+/-") || inBrackets.MatchString(text):
		return show(text) + " is not a number", "write a standard deviation as 0.86 +- 0.02"
	case withUnit.MatchString(text):
		return show(text) + " has a unit", alone
	}
	return show(text) + " is not a number", alone
}

// withoutComma tells how to write a number with a decimal comma, or with a
// comma between thousands.
func withoutComma(text string) string {
	whole, rest, _ := strings.Cut(text, ",")
	hint := "a point is decimal: " + whole + "." + rest
	if len(rest) == 3 && strings.TrimLeft(whole, "+-0") != "" {
		hint += ", or " + whole + rest + " if thousands were set apart"
	}
	return hint
}

// inFraction turns a figure in per cent into the hint of a fraction.
func inFraction(perCent string) string {
	x, err := strconv.ParseFloat(perCent, 64)
	if err != nil {
		return "write a fraction"
	}
	return "write a fraction: " + figure(x/100)
}

// figure writes a number for people, as a scenario file has it.
func figure(x float64) string {
	text := strconv.FormatFloat(x, 'g', -1, 64)
	if a := math.Abs(x); a >= 1e-4 && a < 1e6 {
		text = strconv.FormatFloat(x, 'f', -1, 64)
	}
	for _, padded := range []string{"e+0", "e+"} {
		text = strings.Replace(text, padded, "e", 1)
	}
	return strings.Replace(text, "e-0", "e-", 1)
}
