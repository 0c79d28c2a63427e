package report

import (
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"pairspan/scenarios/plan"
)

// outcomeWords says an outcome in a table cell.
func outcomeWords(o plan.Outcome) string {
	switch o {
	case plan.StateUnknown:
		return "no answer: the state is not known"
	case plan.NoKey:
		return "no key"
	case plan.NoNeed:
		return "key; no need stated"
	case plan.Met:
		return "meets the need"
	case plan.MetIfNominal:
		return "not for sure: the nominal state meets it"
	case plan.MetIfBest:
		return "only with the best state"
	case plan.NotMet:
		return "does not meet the need"
	}
	return spaced(string(o))
}

// partWords names a part of the link whose ideal version was tried.
func partWords(part string) string {
	switch part {
	case "state":
		return "pair state without errors"
	case "alignment":
		return "no misalignment, no PMD"
	case "coupling":
		return "no fixed loss"
	case "detectors":
		return "detectors of efficiency 1 without dead time"
	case "dark_counts":
		return "no dark counts, no afterpulses"
	case "outside_light":
		return "no background, no unpaired light"
	case "timing":
		return "no jitter, no dispersion"
	case "pump":
		return "best pump up to its maximum"
	case "fibre":
		return "fibre without loss"
	}
	return spaced(part)
}

// marginWords says why there is no margin.
func marginWords(reason *string) string {
	switch {
	case reason == nil:
		return none
	case *reason == "no_loss_helps":
		return "no loss helps"
	case *reason == "beyond_search":
		return "above 300" + nbsp + "dB"
	}
	return spaced(*reason)
}

// reachWords says why there is no reach.
func reachWords(reason *string) string {
	switch {
	case reason == nil:
		return none
	case *reason == "not_at_zero_km":
		return "not even at 0" + nbsp + "km"
	case *reason == "beyond_search":
		return "above 2000" + nbsp + "km"
	}
	return spaced(*reason)
}

// judgedWords names the rate that is judged.
func judgedWords(a plan.Answer) string {
	if a.Judged == "finite" {
		return "finite blocks, times the duty cycle"
	}
	return "asymptotic, times the duty cycle"
}

// lengthenWords says which distance the horizontal axis shows.
func lengthenWords(lengthen string) string {
	switch lengthen {
	case "alice":
		return "Alice’s fibre"
	case "bob":
		return "Bob’s fibre"
	case "both":
		return "both fibres together"
	}
	return spaced(lengthen)
}

// sentence begins s with a capital letter and ends it with a full stop.
func sentence(s string) string {
	first, size := utf8.DecodeRuneInString(s)
	if size == 0 || first == utf8.RuneError {
		return s
	}
	s = string(unicode.ToUpper(first)) + s[size:]
	if !strings.HasSuffix(s, ".") {
		s += "."
	}
	return s
}

// lowerFirst puts a heading inside a sentence; a name in capitals keeps them.
func lowerFirst(s string) string {
	first, size := utf8.DecodeRuneInString(s)
	second, _ := utf8.DecodeRuneInString(s[size:])
	if unicode.IsUpper(second) {
		return s
	}
	return string(unicode.ToLower(first)) + s[size:]
}

func itoa(n int) string { return strconv.Itoa(n) }

func spaced(s string) string { return strings.ReplaceAll(s, "_", " ") }
