package report

import (
	"fmt"
	"strings"
	"unicode/utf8"

	"pairspan/scenarios/plan"
)

// compared lists the cases, best margin first.
func (t *textPage) compared(p *plan.Plan) {
	if len(p.Cases) < 2 {
		return
	}
	t.gap()
	t.line(pad("Compared, best first", 30) + columns("usable/s", "QBER %", "margin dB", "reach km", "detectors", ""))
	order := byMargin(p.Cases)
	for n, i := range order {
		if n == mostShown {
			t.line(fmt.Sprintf("  and %d more: see --format json or the report", len(order)-n))
			return
		}
		c := &p.Cases[i]
		a := &c.Answer
		q := c.Installed.QBER
		if b := c.Installed.Bounds; b != nil {
			q = &b.AtWorst.QBER
		}
		key := none
		if q != nil {
			key = perCentBare(max(q.Key, q.Check))
		}
		short := func(v *float64, reason *string) string {
			if v == nil && reason != nil && *reason == "beyond_search" {
				return "beyond"
			}
			return orNone(v, func(x float64) string { return digits(x, 3) })
		}
		needed := c.Installed.DetectorsNeeded
		t.line(pad(clip("  "+caseName(p, i), 29), 30) + columns(count(a.UsableRateBps), key,
			short(a.MarginDB, a.MarginReason), short(a.ReachKm, a.ReachReason),
			fmt.Sprintf("%d+%d", needed.Alice, needed.Bob), briefly(a.Outcome)))
	}
}

// columns sets the figures of a compared case.
func columns(cells ...string) string {
	var b strings.Builder
	for i, width := range []int{9, 8, 10, 9, 10, 0} {
		cell := ascii(cells[i])
		b.WriteString(strings.Repeat(" ", max(0, width-utf8.RuneCountInString(cell))))
		if width == 0 {
			b.WriteString("  ")
		}
		b.WriteString(cell)
	}
	return b.String()
}

// briefly is an outcome in a column.
func briefly(o plan.Outcome) string {
	switch o {
	case plan.Met:
		return "meets it"
	case plan.NoNeed:
		return "key"
	case plan.StateUnknown:
		return "no answer"
	case plan.MetIfNominal:
		return "if Werner"
	case plan.MetIfBest:
		return "if best"
	}
	return spaced(string(o))
}
