package report

import (
	"math"

	"pairspan/scenarios/plan"
)

// facts is the answer in figures, and what the figures mean.
type facts struct {
	Table table
	Notes string
}

// answerFacts sets what is judged, and beside it the nominal and the best
// state where the state is an interval.
func answerFacts(c *plan.Case) facts {
	a := c.Answer
	t := table{ID: "facts", Caption: "The answer in figures", Quiet: true, Stack: true, Head: []string{"", "Judged"}}
	if a.Nominal != nil || a.AtBest != nil {
		t.Head = []string{"", "At worst, judged", "Nominal state", "At best"}
	}
	add := func(head string, sub bool, cells ...string) {
		for len(cells) < len(t.Head)-1 {
			cells = append(cells, "")
		}
		t.Rows = append(t.Rows, row{Head: head, Sub: sub, Cells: cells[:len(t.Head)-1]})
	}
	rate := func(v float64) string { return against(v, a.NeedBps) }
	known := a.Outcome != plan.StateUnknown
	if known {
		add("Usable key rate", false, orNone(a.UsableRateBps, rate), ofMember(a.Nominal, usableOf, rate), ofMember(a.AtBest, usableOf, rate))
	} else {
		t.Head = []string{"", ""}
	}
	if a.NeedBps != nil {
		add("Need", false, bitRate(*a.NeedBps))
	}
	if a.TimesNeed != nil {
		add("Usable over needed", false, digits(*a.TimesNeed, 3))
	}
	if known {
		addMargin(add, &a)
	}
	add("Installed", false, km(c.Installed.DistanceKm))
	addStated(add, "Least tangle to be sure", a.LeastTangle)
	addStated(add, "Least tangle with the best state", a.LeastTangleAtBest)
	return facts{Table: t, Notes: factNotes(c)}
}

// addMargin adds the margin, what it is in the field, and the reach.
func addMargin(add func(string, bool, ...string), a *plan.Answer) {
	add("Margin", false, marginCell(a.MarginDB, a.MarginReason), ofMember(a.Nominal, marginOf, marginText), ofMember(a.AtBest, marginOf, marginText))
	if m := a.MarginAs; m != nil {
		addStated(add, "as km of this fibre", m.Km)
		addStated(add, "as connector pairs", m.ConnectorPairs)
		addStated(add, "as splices", m.Splices)
	}
	add("Reach", false, reachCell(a), ofMember(a.Nominal, reachOfMember, km), ofMember(a.AtBest, reachOfMember, km))
}

// addStated adds a figure that may not apply.
func addStated(add func(string, bool, ...string), head string, v *float64) {
	if v != nil {
		add(head, head[0] == 'a', digits(*v, 2))
	}
}

func factNotes(c *plan.Case) string {
	if c.Answer.Outcome == plan.StateUnknown {
		return "Distances: " + lengthenWords(c.Lengthen) + "."
	}
	s := "Usable: " + judgedWords(c.Answer) + ". "
	switch db := c.Answer.MarginDB; {
	case db != nil && *db < 0:
		s += "Margin: below zero, the loss that must go. "
	case c.Answer.NeedBps != nil:
		s += "Margin: the extra loss from which the need is no longer met. "
	default:
		s += "Margin: the extra loss from which there is no key. "
	}
	if c.Answer.MarginDB != nil && *c.Answer.MarginDB >= 0 && c.Answer.ReachKm != nil {
		s += "Fibre up to the reach costs a little less than the margin in dB where its dispersion costs key too. "
	}
	return s + "Distances: " + lengthenWords(c.Lengthen) + "."
}

// ofMember formats a figure of another state of the interval.
func ofMember(m *plan.MemberAnswer, get func(*plan.MemberAnswer) *float64, format func(float64) string) string {
	if m == nil {
		return none
	}
	return orNone(get(m), format)
}

func usableOf(m *plan.MemberAnswer) *float64      { return &m.UsableRateBps }
func marginOf(m *plan.MemberAnswer) *float64      { return m.MarginDB }
func reachOfMember(m *plan.MemberAnswer) *float64 { return m.ReachKm }

// marginText writes a margin; one that rounds to nothing is 0 dB.
func marginText(db float64) string {
	if math.Abs(db) < 5e-4 {
		return "0" + nbsp + "dB"
	}
	return decibels(db)
}

func marginCell(db *float64, reason *string) string {
	if db == nil {
		return marginWords(reason)
	}
	return marginText(*db)
}

func reachCell(a *plan.Answer) string {
	if a.ReachKm == nil {
		return reachWords(a.ReachReason)
	}
	return km(*a.ReachKm)
}
