package report

import (
	"fmt"
	"io"
	"strings"
	"unicode"
	"unicode/utf8"

	"pairspan/scenarios/plan"
)

// The terminal page: what fits on one screen.
const (
	textWidth     = 90
	mostShown     = 6 // compared cases
	mostWarnings  = 5
	mostPartWords = 3
	columnWidth   = 46
	mostLines     = 40
)

// Text writes the plan for a terminal: at most 40 lines of 90 columns, in
// ASCII but for the person's own words.
func Text(w io.Writer, p *plan.Plan) error {
	c := &p.Cases[0]
	t := &textPage{}
	t.line(p.Title)
	t.gap()
	t.answer(c)
	t.gap()
	t.chain(c)
	t.gap()
	t.margin(c)
	t.compared(p)
	end := &textPage{}
	end.gap()
	end.wrap("A planned key rate is an estimate, not a security claim. Invisible laser light, cold detectors: local rules and licensed persons decide.", "")
	room := mostLines - len(t.lines) - len(end.lines)
	t.warnings(p, room)
	t.deciding(p, mostLines-len(t.lines)-len(end.lines))
	t.lines = append(t.lines, end.lines...)
	_, err := io.WriteString(w, strings.Join(t.lines, "\n")+"\n")
	return err
}

// textPage collects lines; control characters in the person's words cannot
// reach the terminal.
type textPage struct{ lines []string }

func (t *textPage) line(s string) { t.lines = append(t.lines, clip(onOneLine(ascii(s)), textWidth)) }
func (t *textPage) gap()          { t.lines = append(t.lines, "") }

// wrap breaks s at spaces, later lines behind an indent.
func (t *textPage) wrap(s, indent string) {
	line := ""
	for _, word := range strings.Fields(onOneLine(ascii(s))) {
		switch {
		case line == "":
			line = word
		case utf8.RuneCountInString(line)+1+utf8.RuneCountInString(word) > textWidth:
			t.line(line)
			line = indent + word
		default:
			line += " " + word
		}
	}
	t.line(line)
}

// answer says the answer, what it rests on and what is in the way.
func (t *textPage) answer(c *plan.Case) {
	a := &c.Answer
	t.wrap(a.Sentence, "")
	rest := a.RestsOn
	if a.InTheWay != "" && !strings.Contains(a.Sentence, a.InTheWay) {
		rest += " First in the way: " + a.InTheWay + "."
	}
	t.wrap(rest, "")
}

// chain sets the steps from pairs to usable key beside the errors.
func (t *textPage) chain(c *plan.Case) {
	left, right := chainRows(c), errorRows(c)
	for i := range max(len(left), len(right)) {
		t.line(strings.TrimRight(pad(at(left, i), columnWidth)+at(right, i), " "))
	}
}

func at(rows []string, i int) string {
	if i < len(rows) {
		return rows[i]
	}
	return ""
}

// chainRows are the steps from pairs made to usable key, at the installed
// length, for the nominal state.
func chainRows(c *plan.Case) []string {
	p := &c.Installed
	rows := []string{"From pairs to key, per second"}
	add := func(what, value string) { rows = append(rows, pad("  "+what, 26)+value) }
	add("pairs made", count(&p.PairRateHz))
	if b := c.PassBands; b != nil && parts(b) {
		add("within both pass bands", count(&b.PairRateHz)+" ("+perCent(b.Share)+")")
	}
	add("lost on the way", fmt.Sprintf("%s and %s dB", decibelsBare(p.LossDB.Alice), decibelsBare(p.LossDB.Bob)))
	add("singles A, B", count(&p.SinglesHz.Alice)+", "+count(&p.SinglesHz.Bob))
	add("live share A, B", decimals(p.LiveShare.Alice, 3)+", "+decimals(p.LiveShare.Bob, 3))
	add("coincidences", count(p.CoincidencesHz))
	add("of them accidental", count(p.AccidentalsHz))
	add("sifted", count(p.SiftedBps))
	add("secret, asymptotic", count(p.SecretRateBps))
	if p.FiniteSecretRateBps != nil {
		add("secret, finite blocks", count(p.FiniteSecretRateBps))
	}
	add("usable, nominal state", count(p.UsableRateBps))
	return rows
}

// parts reports whether pass bands keep any pairs out.
func parts(b *plan.PassBands) bool { return b.Share < 1-1e-9 }

// count writes a rate or a number of counts in ASCII.
func count(v *float64) string {
	return orNone(v, func(x float64) string { return digits(x, 3) })
}

// errorRows are what the key basis's QBER is made of.
func errorRows(c *plan.Case) []string {
	p := &c.Installed
	rows := []string{"Where the errors come from, key basis"}
	add := func(what, value string) { rows = append(rows, pad("  "+what, 28)+value) }
	if e := c.QBERParts; e != nil {
		add("the state", perCent(e.State))
		add("alignment, PMD", perCent(e.Alignment))
		add("several pairs at once", perCent(e.MultiPair))
		add("dark counts, afterpulses", perCent(e.DetectorNoise))
		add("light from outside", perCent(e.OutsideLight))
	}
	if p.QBER != nil {
		add("QBER key, check", perCent(p.QBER.Key)+", "+perCent(p.QBER.Check))
		add("no key above", perCent(c.QBERThreshold)+" in both")
	}
	if p.WindowPs != nil {
		add("window, share", fmt.Sprintf("%s ps, %s", digits(*p.WindowPs, 3), decimals(*p.WindowShare, 3)))
	}
	if p.PairsPerSlot != nil {
		add("pairs per slot", digits(*p.PairsPerSlot, 3))
	}
	return rows
}

// margin says the margin in field units, the reach, and what would change most.
func (t *textPage) margin(c *plan.Case) {
	a := &c.Answer
	line := "Margin " + marginCell(a.MarginDB, a.MarginReason)
	if m := a.MarginAs; m != nil {
		var units []string
		for _, u := range []struct {
			v    *float64
			unit string
		}{{m.Km, "km of this fibre"}, {m.ConnectorPairs, "connector pairs"}, {m.Splices, "splices"}} {
			if u.v != nil {
				units = append(units, digits(*u.v, 2)+" "+u.unit)
			}
		}
		line += ", that is " + listOf(units, "or")
	}
	t.line(line)
	reach := reachWords(a.ReachReason)
	if a.ReachKm != nil {
		reach = km(*a.ReachKm)
	}
	t.line("Reach " + reach + reachOf(a))
	if len(a.Parts) > 0 {
		var parts []string
		for _, part := range a.Parts[:min(len(a.Parts), mostPartWords)] {
			gain := "key at all"
			if part.Factor != nil {
				gain = "x " + digits(*part.Factor, 3)
			}
			parts = append(parts, partWords(part.Part)+" ("+gain+")")
		}
		t.wrap("Would change most: "+strings.Join(parts, "; "), "  ")
	}
}

// reachOf adds the other members of the interval.
func reachOf(a *plan.Answer) string {
	if a.Nominal == nil || a.Nominal.ReachKm == nil || a.AtBest == nil || a.AtBest.ReachKm == nil {
		return ""
	}
	return fmt.Sprintf("; a Werner state %s, the best state %s", km(*a.Nominal.ReachKm), km(*a.AtBest.ReachKm))
}

// deciding adds what else the plan says of the scenario as filed, a sentence
// each, as far as the lines reach.
func (t *textPage) deciding(p *plan.Plan, room int) {
	c := &p.Cases[0]
	var sentences []string
	if c.Best != nil {
		sentences = append(sentences, c.Best.Sentence)
	}
	if c.Block != nil {
		sentences = append(sentences, c.Block.Sentence)
	}
	if c.Uncertainty != nil {
		sentences = append(sentences, c.Uncertainty.Sentence)
	}
	if p.Buying != nil {
		sentences = append(sentences, p.Buying.Sentence)
	}
	more := &textPage{}
	for _, s := range sentences {
		one := &textPage{}
		one.wrap(s, "")
		if s != "" && 1+len(more.lines)+len(one.lines) <= room {
			more.lines = append(more.lines, one.lines...)
		}
	}
	if len(more.lines) > 0 {
		t.gap()
		t.lines = append(t.lines, more.lines...)
	}
}

// warnings shows the few that would change most, in full where the lines left
// allow it, else one line each.
func (t *textPage) warnings(p *plan.Plan, room int) {
	if len(p.Warnings) == 0 {
		return
	}
	whole, short := &textPage{}, &textPage{}
	whole.gap()
	short.gap()
	for i, w := range p.Warnings {
		if i == mostWarnings-1 && len(p.Warnings) > mostWarnings {
			more := fmt.Sprintf("Doubtful: %d more, see --format json or the report", len(p.Warnings)-i)
			whole.line(more)
			short.line(more)
			break
		}
		effect := ""
		if w.UsableRateBps != nil {
			effect = " [then " + ascii(bitRate(*w.UsableRateBps)) + "]"
		}
		said := ascii("Doubtful: " + w.Entry + ": " + w.Sentence)
		whole.wrap(said+effect, "  ")
		short.line(clip(onOneLine(said), textWidth-len(effect)) + effect)
	}
	if len(whole.lines) <= room {
		short = whole
	}
	t.lines = append(t.lines, short.lines...)
}

// plainly sets in ASCII what the other reports set in type.
var plainly = strings.NewReplacer(nbsp, " ", "×10", "e", "−", "-", "–", "-", "’", "'",
	"⁰", "0", "¹", "1", "²", "2", "³", "3", "⁴", "4", "⁵", "5", "⁶", "6", "⁷", "7", "⁸", "8", "⁹", "9", "⁻", "-")

func ascii(s string) string { return plainly.Replace(s) }

// onOneLine keeps control characters out of the terminal.
func onOneLine(s string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsControl(r) || unicode.Is(unicode.Cf, r) {
			return ' '
		}
		return r
	}, s)
}

func pad(s string, width int) string {
	s = ascii(s)
	return s + strings.Repeat(" ", max(0, width-utf8.RuneCountInString(s)))
}

func clip(s string, width int) string {
	if utf8.RuneCountInString(s) <= width {
		return s
	}
	return string([]rune(s)[:max(0, width-3)]) + "..."
}
