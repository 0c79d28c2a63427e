package plan

import (
	"fmt"
	"strconv"
	"strings"

	"pairspan/keyrate"
)

// knob is a setting that was freed.
type knob struct {
	entry string
	name  string // as people call it
	value string // in words
	auto  bool   // the scenario leaves it to the planner anyway
}

// knobs are the settings that were freed, with their values at p.
func (a *asker) knobs(p keyrate.OperatingPoint) (knobs []knob) {
	free := a.freed()
	if free.MaxPairRateHz > 0 {
		figure, unit := a.pumpWords(p.PairRateHz)
		knobs = append(knobs, knob{pumpEntry(a.s), "the pair rate", figure + " " + unit, a.s.Source.PumpAuto})
	}
	knobs = append(knobs, knob{"window_ps", "the window", "a window of " + bare(windowPs(p)) + " ps", a.s.WindowAuto})
	if free.KeyShare {
		knobs = append(knobs, knob{"key_basis_share", "the share of the key basis", "a key basis share of " + bare(p.KeyShare), a.s.KeyShareAuto})
	}
	return knobs
}

// pumpWords is a pair rate in the unit in which the source is described.
func (a *asker) pumpWords(pairRateHz float64) (figure, unit string) {
	if a.s.Pulsed() {
		return short(pairRateHz / a.s.Source.PulseRateHz), "pairs a pulse"
	}
	return short(pairRateHz), "pairs/s"
}

// Factors that are not told as a factor.
const (
	hardlyMore = 1.005 // below, a setting is not worth changing
	aTenthMore = 1.095 // below, it is told in per cent
)

// bestSentence is the best setting in words.
func (a *asker) bestSentence(b *Best, knobs []knob) string {
	var names, values, searched []string
	for _, k := range knobs {
		names, values = append(names, k.name), append(values, k.value)
		if k.auto {
			searched = append(searched, k.name)
		}
	}
	all := len(searched) == len(knobs)
	setting, rate := strings.Join(values, ", "), a.assured(b.UsableRateBps)
	var s string
	switch {
	case b.UsableRateBps == 0:
		return "No setting of " + inList(names) + " makes any key." + a.pumpLeftOpen()
	case b.Factor == nil:
		s = fmt.Sprintf("As described there is no key; at its best setting (%s) the link would make %s", setting, rate)
	case all:
		s = fmt.Sprintf("The planner has found the best setting (%s): %s", setting, rate)
	case *b.Factor < hardlyMore:
		s = fmt.Sprintf("The link stands at its best: the best setting (%s) would make hardly more, %s", setting, rate)
	default:
		s = fmt.Sprintf("At its best setting (%s) the link would make %s, %s", setting, more(*b.Factor), rate)
	}
	s += a.keepsWords(b.Keeps95) + "."
	if len(searched) > 0 && !all {
		s += fmt.Sprintf(" The scenario leaves %s to the planner already.", inList(searched))
	}
	return s + a.pumpLeftOpen()
}

// pumpLeftOpen says what it would take to search the pump too; "" where it is
// free, or runs at the power of a scan.
func (a *asker) pumpLeftOpen() string {
	if a.freed().MaxPairRateHz > 0 || a.s.Source.PowerScan.Used {
		return ""
	}
	ceiling := "source.max_pair_rate_hz"
	if a.s.Pulsed() {
		ceiling = "source.max_pairs_per_pulse"
	}
	return " How hard to pump is not searched: " + ceiling + " is not stated."
}

// keepsWords says how flat the maximum is.
func (a *asker) keepsWords(keeps *Span) string {
	if keeps == nil {
		return ""
	}
	from, unit := a.pumpWords(keeps.From)
	if keeps.To >= a.freed().MaxPairRateHz {
		return fmt.Sprintf("; from %s %s up to the ceiling it keeps 95 %% of that", from, unit)
	}
	to, _ := a.pumpWords(keeps.To)
	return fmt.Sprintf("; between %s and %s %s it keeps 95 %% of that", from, to, unit)
}

// assured is a judged rate in words.
func (a *asker) assured(rate float64) string { return bps(rate) + a.forSure() }

// more says what a factor above one makes of a rate.
func more(factor float64) string {
	if factor < aTenthMore {
		return perCentWhole(factor-1) + " more"
	}
	return two(factor) + " times as much"
}

func perCentWhole(x float64) string { return strconv.FormatFloat(100*x, 'f', 0, 64) + " %" }

// inList joins words as a sentence does.
func inList(words []string) string {
	if n := len(words); n > 1 {
		return strings.Join(words[:n-1], ", ") + " and " + words[n-1]
	}
	return strings.Join(words, "")
}

// short is a figure of three digits, with a short exponent from 1e5 on and
// below a thousandth.
func short(x float64) string {
	const longest, least = 1e5, 1e-3
	if abs(x) < longest && abs(x) >= least || x == 0 {
		return bare(x)
	}
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(round(x, 3), 'e', -1, 64), "e")
	e, _ := strconv.Atoi(exponent)
	return mantissa + "e" + strconv.Itoa(e)
}
