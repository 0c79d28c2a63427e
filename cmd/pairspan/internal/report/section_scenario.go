package report

import (
	"strconv"
	"strings"

	"pairspan/scenarios/plan"
)

// scenarioTables list every entry of the scenario as filed, one table for
// each part of the link.
func scenarioTables(p *plan.Plan) []table {
	var tables []table
	for i := range p.Entries {
		e := &p.Entries[i]
		group, name := splitEntry(e.Entry)
		if n := len(tables); n == 0 || tables[n-1].Caption != group {
			tables = append(tables, table{
				ID: "scenario-" + itoa(n+1), Caption: group, Stack: true, Entries: true,
				Head: []string{"Entry", "Value", "Known by", "Where it comes from"}, Words: []bool{false, true, true},
			})
		}
		t := &tables[len(tables)-1]
		t.Rows = append(t.Rows, row{Head: name, Note: e.Meaning, Cells: []string{valueWords(e), knownWords(e), originWords(e)}})
	}
	return tables
}

// splitEntry returns the heading that an entry stands under, and the rest of
// its name.
func splitEntry(entry string) (heading, rest string) {
	parts := strings.SplitN(entry, ".", 3)
	switch {
	case parts[0] == "source" && len(parts) > 1:
		return "source", strings.Join(parts[1:], ".")
	case (parts[0] == "arms" || parts[0] == "detectors") && len(parts) == 3:
		return parts[0] + "." + parts[1], parts[2]
	}
	return "the link, the need and the plan", entry
}

// valueWords writes a value with its unit and its standard deviation.
func valueWords(e *plan.Entry) string {
	const all = 12 // digits: a figure is shown as it was stated
	x, err := strconv.ParseFloat(e.Value, 64)
	if err != nil {
		return e.Value
	}
	v := grouped(x, all)
	if e.SD != nil {
		v += nbsp + "±" + nbsp + grouped(*e.SD, all)
	}
	if e.Unit != "" {
		v += nbsp + strings.ReplaceAll(e.Unit, " ", nbsp)
	}
	return v
}

func knownWords(e *plan.Entry) string {
	if e.KnownBy == nil {
		if e.DefaultSource != nil {
			return "default"
		}
		return none
	}
	for _, k := range groundKinds {
		if k.kind == *e.KnownBy {
			return k.short
		}
	}
	return spaced(*e.KnownBy)
}

func originWords(e *plan.Entry) string {
	switch {
	case e.DefaultSource != nil && e.Origin != nil:
		return *e.DefaultSource + "; " + *e.Origin
	case e.DefaultSource != nil:
		return *e.DefaultSource
	case e.Origin != nil:
		return *e.Origin
	}
	return none
}
