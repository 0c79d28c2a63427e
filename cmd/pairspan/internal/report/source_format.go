package report

import (
	"math"
	"regexp"
	"strconv"
	"strings"
	"unicode/utf8"

	"pairspan/scenarios/source"
)

// errorDigits is how many digits of a standard deviation are shown; the value
// ends at the same place.
const errorDigits = 2

// measured writes a figure with its standard deviation, times a scale which
// turns a fraction into per cent.
func measured(f source.Figure, scale float64) string {
	if f.Value == nil {
		return none
	}
	v := *f.Value * scale
	if f.SD == nil || !(*f.SD > 0) {
		return grouped(v, 4)
	}
	value, sd := withDeviation(v, *f.SD*scale)
	return value + nbsp + "±" + nbsp + sd
}

// withDeviation writes value and deviation to the same place.
func withDeviation(v, sd float64) (value, deviation string) {
	sd = roundTo(sd, errorDigits)
	places := errorDigits - 1 - int(math.Floor(math.Log10(sd)))
	if high := math.Max(math.Abs(v), sd); high >= 1e10 || high < 1e-3 {
		return digits(v, max(errorDigits, 4)), digits(sd, errorDigits)
	}
	if places >= 0 {
		return groupedDecimals(v, places), groupedDecimals(sd, places)
	}
	unit := math.Pow(10, float64(-places))
	return groupedDecimals(math.Round(v/unit)*unit, 0), groupedDecimals(sd, 0)
}

// groupedDecimals writes v with n places, in groups of three from ten thousand on.
func groupedDecimals(v float64, n int) string {
	s := decimals(v, n)
	whole, rest, _ := strings.Cut(s, ".")
	sign := ""
	if w, ok := strings.CutPrefix(whole, "−"); ok {
		sign, whole = "−", w
	}
	if len(whole) > 4 {
		for at := len(whole) - 3; at > 0; at -= 3 {
			whole = whole[:at] + nbsp + whole[at:]
		}
	}
	if rest != "" {
		rest = "." + rest
	}
	return sign + whole + rest
}

// inPerCents writes an error rate with its deviation and unit.
func inPerCents(f source.Figure) string {
	switch {
	case f.Value == nil:
		return none
	case f.SD == nil || !(*f.SD > 0):
		return perCent(*f.Value)
	}
	return measured(f, 100) + nbsp + "%"
}

// signed writes a number of standard deviations with its sign.
func signed(v float64) string {
	s := decimals(v, 1)
	if v > 0 && s != "0.0" {
		return "+" + s
	}
	return s
}

// chance writes a probability that may be very small.
func chance(p float64) string {
	if p < 1e-4 {
		return "below 0.0001"
	}
	return digits(p, 2)
}

// ruleWords names the rule of a warning.
func ruleWords(rule string) string {
	return strings.NewReplacer("-", " ", "_", " ").Replace(rule)
}

// validPrefix cuts a text to whole characters.
func validPrefix(s string, most int) string {
	for most > 0 && !utf8.RuneStart(s[most]) {
		most--
	}
	return s[:most]
}

// nm writes a wavelength.
func nm(v float64) string { return strconv.FormatFloat(roundTo(v, 7), 'f', -1, 64) + nbsp + "nm" }

// valueOf is a figure's value, 0 without one.
func valueOf(f source.Figure) float64 {
	if f.Value == nil {
		return 0
	}
	return *f.Value
}

// sdOf is a figure's standard deviation, 0 without one.
func sdOf(f source.Figure) float64 {
	if f.SD == nil {
		return 0
	}
	return *f.SD
}

// sentences ends each with a full stop.
func sentences(some []string) []string {
	out := make([]string, len(some))
	for i, s := range some {
		out[i] = typeset(sentence(s))
	}
	return out
}

// typeset gives a sentence that was written for a terminal its typographic
// signs, and keeps numbers and units on one line.
func typeset(s string) string {
	s = strings.ReplaceAll(s, " +- ", nbsp+"±"+nbsp)
	s = powerForm.ReplaceAllStringFunc(s, func(m string) string {
		p := powerForm.FindStringSubmatch(m)
		return p[1] + "×10" + superscripts.Replace(p[2]+p[3])
	})
	return unitForm.ReplaceAllString(s, "$1"+nbsp+"$2")
}

// Forms of what typeset changes.
var (
	unitForm  = regexp.MustCompile(`([0-9]) (%|bit/s|km\b|dB\b|ps\b|mW\b|nm\b)`)
	powerForm = regexp.MustCompile(`(\b[0-9.]+|\))e\+?(-?)0*([0-9]+)\b`)
)

// plainNumber writes a number that stands as text for people; other text stays.
func plainNumber(s string) string {
	const all = 12 // digits: a figure is shown as it was stated
	if x, err := strconv.ParseFloat(s, 64); err == nil {
		return grouped(x, all)
	}
	return s
}
