package report

import (
	"strings"

	"pairspan/scenarios/plan"
)

// sheet is what to read on the first day.
type sheet struct {
	remark
	Findings []string
	Hazard   string
}

// hazardOfReading stands wherever somebody is about to measure.
const hazardOfReading = "Before anything is read: pump lasers, alignment lasers and fibres in service carry invisible laser radiation (IEC 60825-1 and IEC 60825-2), " +
	"so never look into a fibre end; cooled detectors may hold cryogens, which burn and displace air. Local rules and licensed persons decide who opens what, and when."

// acceptanceSheet sets what to expect beside what loses the need; nil without a
// state.
func acceptanceSheet(c *plan.Case) *sheet {
	a := c.Acceptance
	if a == nil {
		return nil
	}
	s := &sheet{Findings: a.Findings, Hazard: hazardOfReading}
	s.Sentence = a.Sentence
	s.Tables = []table{sheetTable(a, c.Answer.NeedBps != nil)}
	if t := pointersTable(a); len(t.Rows) > 0 {
		s.Tables = append(s.Tables, t)
	}
	if t := correlationsTable(a); len(t.Rows) > 0 {
		s.Tables = append(s.Tables, t)
	}
	s.Note = "Tolerances: counting for a minute, the deviations stated and the states that are left open. " + levelsOf(a.LevelsOf)
	return s
}

// levelsOf says for which state the levels hold.
func levelsOf(state *string) string {
	if state == nil {
		return "No state makes key at these settings, so there is no level at which it is lost."
	}
	of := map[string]string{"given": "the given state", "at_worst": "the state at worst", "nominal": "the nominal state", "at_best": "the state at best"}[*state]
	if of == "" {
		of = spaced(*state)
	}
	return "Levels at which need and key are lost: of " + of + ", when what most naturally moves the figure has grown that far; a dash where it never does."
}

func sheetTable(a *plan.Acceptance, need bool) table {
	measured := false
	for _, r := range a.Rows {
		measured = measured || r.Measured != nil
	}
	t := table{ID: "acceptance-sheet", Caption: "What to read on the first day", Stack: true, Head: []string{"Figure", "Expected", "From", "To"}}
	if need {
		t.Head = append(t.Head, "Need lost at")
	}
	t.Head = append(t.Head, "Key lost at")
	t.Words = make([]bool, len(t.Head)+1)
	if measured {
		t.Words[len(t.Head)] = true
		t.Head = append(t.Head, "Measured", "It says")
	}
	for i := range a.Rows {
		r := &a.Rows[i]
		read := func(v float64) string { return sheetFigure(r, v) }
		cells := []string{read(r.Expected), read(r.From), read(r.To)}
		if need {
			cells = append(cells, orNone(r.NeedLostAt, read))
		}
		cells = append(cells, orNone(r.KeyLostAt, read))
		if measured {
			read, says := "", ""
			if r.Measured != nil {
				read = sheetFigure(r, *r.Measured)
			}
			if r.MeasuredSays != nil {
				says = *r.MeasuredSays
			}
			cells = append(cells, read, says)
		}
		t.Rows = append(t.Rows, row{Head: sentenceStart(r.Label) + inUnit(r), Cells: cells})
	}
	return t
}

// pointersTable says what a deviation points to; figures that point alike
// share a row.
func pointersTable(a *plan.Acceptance) table {
	t := table{ID: "deviations", Caption: "What a deviation points to", Stack: true, Head: []string{"Figure", "What it points to"}, Words: []bool{true}}
	at := map[string]int{}
	for _, r := range a.Rows {
		if r.PointsTo == "" {
			continue
		}
		i, again := at[r.PointsTo]
		if again {
			t.Rows[i].Head += "; " + r.Label
			continue
		}
		at[r.PointsTo] = len(t.Rows)
		t.add(sentenceStart(r.Label), r.PointsTo)
	}
	return t
}

// sheetFigure writes a figure of the sheet in the unit that its row names.
func sheetFigure(r *plan.AcceptanceRow, v float64) string {
	switch {
	case strings.HasPrefix(r.Figure, "qber"):
		return perCentBare(v)
	case strings.HasPrefix(r.Figure, "live_share"):
		return digits(100*v, 3)
	}
	return grouped(v, 3)
}

// inUnit ends the name of a row: error rates and shares are in per cent.
func inUnit(r *plan.AcceptanceRow) string {
	switch {
	case strings.HasPrefix(r.Figure, "qber"), strings.HasPrefix(r.Figure, "live_share"):
		return "," + nbsp + "%"
	case r.Unit == "":
		return ""
	}
	return "," + nbsp + r.Unit
}

func sentenceStart(s string) string { return strings.TrimSuffix(sentence(s), ".") }

// correlationsTable is what the analysers should show of the state.
func correlationsTable(a *plan.Acceptance) table {
	t := table{ID: "correlations", Wide: true, Caption: "Correlations to expect at the ends", Head: []string{"Figure", "At worst", "Nominal", "At best"}}
	if c := a.CHSH; c != nil {
		t.add("CHSH value, above 2 where the pairs are entangled", digits(c.AtWorst, 4), digits(c.Nominal, 4), digits(c.AtBest, 4))
		never := "never"
		if a.FiveSigmaS != nil {
			never = seconds(*a.FiveSigmaS)
		}
		t.add("Counting until it is five standard deviations above 2", never, none, none)
	}
	if v := a.Visibility; v != nil {
		t.add("Visibility, key basis", none, share(v.Key), none)
		t.add("Visibility, check basis", none, share(v.Check), none)
	}
	return t
}
