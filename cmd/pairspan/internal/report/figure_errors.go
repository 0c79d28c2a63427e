package report

import (
	"cmp"
	"slices"

	"pairspan/scenarios/plan"
)

// errorsFigure is what the key basis's QBER is made of, at the installed
// length.
func errorsFigure(p *plan.Plan) *figure {
	c := &p.Cases[0]
	f := &figure{ID: "errors", Title: "Where the errors come from"}
	if c.QBERParts == nil || c.Installed.QBER == nil {
		f.Finding = "Without a state there are no errors to sort."
		f.Nothing = "There is no error rate to take apart, because the state of the pairs is not known."
		return f
	}
	f.Finding = errorsFinding(c)
	f.Reading = "Key basis, at the installed length; each bar begins where the one above it ends."
	k := &cascade{Title: "What the QBER of the key basis is made of", Unit: "%"}
	g := cascadeGroup{}
	for _, part := range errorParts(c) {
		g.stair(part.Label, 100*part.At, inPerCent)
	}
	given := "All together"
	if c.Installed.Bounds != nil {
		given = "All together, nominal state"
	}
	g.total(given, 100*c.Installed.QBER.Key, inPerCent)
	if b := c.Installed.Bounds; b != nil {
		g.total("Key basis at worst", 100*b.AtWorst.QBER.Key, inPerCent)
		g.total("Key basis at best", 100*b.AtBest.QBER.Key, inPerCent)
	}
	for _, r := range g.Rows {
		k.Max = max(k.Max, r.To)
	}
	if t := 100 * c.QBERThreshold; t > 0 {
		k.Max = max(k.Max, 1.06*t)
		k.Post = &level{At: t, Label: "no key above " + perCent(c.QBERThreshold) + " in both bases"}
	}
	k.Groups = []cascadeGroup{g}
	f.Data = errorTable(g)
	if !(k.Max > 0) {
		f.Nothing = "There are no errors to draw."
		return f
	}
	for _, s := range []size{middle, narrow} {
		f.Drawings = append(f.Drawings, k.draw(f.ID, s, false, f.Finding))
	}
	return f
}

func inPerCent(v float64) string { return perCentBare(v / 100) }

func errorTable(g cascadeGroup) table {
	t := table{ID: "error-parts", Caption: "What the QBER of the key basis is made of", Head: []string{"Part", "QBER, %"}}
	for _, r := range g.Rows {
		t.Rows = append(t.Rows, row{Head: r.Label, Cells: []string{r.Value}, Main: r.Total})
	}
	return t
}

// errorParts lists the parts in the order in which they add up.
func errorParts(c *plan.Case) []level {
	q := c.QBERParts
	return []level{
		{q.State, "Pair state"},
		{q.Alignment, "Alignment and PMD"},
		{q.MultiPair, "Multiple pairs"},
		{q.DetectorNoise, "Dark counts and afterpulses"},
		{q.OutsideLight, "Outside light"},
	}
}

// errorsFinding names the two greatest parts.
func errorsFinding(c *plan.Case) string {
	parts := errorParts(c)
	slices.SortStableFunc(parts, func(a, b level) int { return cmp.Compare(b.At, a.At) })
	s := "Of the " + perCent(c.Installed.QBER.Key) + " QBER of the key basis"
	if c.Installed.Bounds != nil {
		s += " in the nominal state"
	}
	s += ", " + perCent(parts[0].At) + " is from " + lowerFirst(parts[0].Label)
	if parts[1].At > 0 {
		s += " and " + perCent(parts[1].At) + " from " + lowerFirst(parts[1].Label)
	}
	if b := c.Installed.Bounds; b != nil {
		s += "; at worst the QBER is " + perCent(b.AtWorst.QBER.Key)
	}
	return s + "."
}
