package report

import (
	"strings"

	"pairspan/scenarios/plan"
)

// servesTable lists the least and the most that still meet the need; nil
// without any.
func servesTable(c *plan.Case) *table {
	if len(c.Serves) == 0 {
		return nil
	}
	t := &table{
		ID: "still-serve", Caption: "Least and most that still meet the need" + atWorst(c) + ", all else as described", Stack: true,
		Head: []string{"Entry", "Stated", "Bound", "Still serves"},
	}
	for _, s := range c.Serves {
		unit := func(v float64) string { return withUnit(grouped(v, 3), s.Unit) }
		value := orNone(s.Value, unit)
		if s.Value == nil && s.Reason != nil {
			value = spaced(*s.Reason)
		}
		t.add(s.Entry, orNone(s.Stated, unit), s.Bound, value)
	}
	return t
}

func withUnit(value, unit string) string {
	if unit == "" {
		return value
	}
	return value + nbsp + unit
}

// mostBars is how many bars a picture has at most; its table has them all.
const mostBars = 16

// elasticityFigure shows what moves the rate; nil where nothing does.
func elasticityFigure(c *plan.Case) *figure {
	if len(c.Elasticities) == 0 {
		return nil
	}
	f := &figure{ID: "elasticities", Title: "What moves the rate"}
	t := table{ID: "elasticities-data", Wide: true, Caption: "Elasticity of the usable rate" + atWorst(c), Head: []string{"Entry", "Change of the rate by 1" + nbsp + "% more of it, %"}}
	var bars []bar
	for _, e := range c.Elasticities {
		t.add(e.Entry, digits(e.Value, 3))
		if len(bars) < mostBars {
			bars = append(bars, bar{e.Entry, e.Value, withSign(e.Value)})
		}
	}
	f.Finding = elasticityFinding(c)
	f.Reading = "By how many per cent the usable rate" + atWorst(c) + " changes for each per cent more of an entry, at the settings in use."
	if len(c.Elasticities) > mostBars {
		f.Reading += " The " + itoa(mostBars) + " greatest of " + itoa(len(c.Elasticities)) + "; the table has them all."
	}
	f.Data = t
	f.drawBars(bars, "%")
	return f
}

// elasticityFinding names what helps most and what hurts most.
func elasticityFinding(c *plan.Case) string {
	var said []string
	var up, down bool
	for _, e := range c.Elasticities {
		switch {
		case e.Value > 0 && !up:
			said, up = append(said, "1"+nbsp+"% more of "+e.Entry+" makes "+digits(e.Value, 3)+nbsp+"% more key"), true
		case e.Value < 0 && !down:
			said, down = append(said, "1"+nbsp+"% more of "+e.Entry+" costs "+digits(-e.Value, 3)+nbsp+"% of it"), true
		}
	}
	if len(said) == 0 {
		return "No entry moves the rate."
	}
	return sentence(strings.Join(said, "; "))
}

// withSign writes an elasticity with its sign.
func withSign(v float64) string {
	if v > 0 {
		return "+" + digits(v, 3)
	}
	return digits(v, 3)
}
