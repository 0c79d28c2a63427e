package report

import (
	"strings"

	"pairspan/scenarios/plan"
)

// warning is one doubt about the input and what it is worth.
type warning struct {
	Rule, Entry, Sentence, Worth string
}

func warnings(p *plan.Plan) []warning {
	ws := make([]warning, len(p.Warnings))
	need := p.Cases[0].Answer.NeedBps
	for i, w := range p.Warnings {
		ws[i] = warning{Rule: strings.ReplaceAll(w.Rule, "-", " "), Entry: w.Entry, Sentence: w.Sentence}
		if w.UsableRateBps != nil {
			ws[i].Worth = "With the suspected value the usable rate would be " + against(*w.UsableRateBps, need) + "."
		}
	}
	return ws
}

// lossTables lists each arm's loss in the order the photon meets it.
func lossTables(c *plan.Case) []table {
	arm := func(id, name string, items []plan.LossItem, total float64) table {
		t := table{ID: id, Caption: name, Head: []string{"Item", "Loss"}}
		for _, it := range items {
			t.add(it.Item, decimals(it.LossDB, 2)+nbsp+"dB")
		}
		t.Rows = append(t.Rows, row{Head: "From source to detector", Cells: []string{decimals(total, 2) + nbsp + "dB"}, Main: true})
		return t
	}
	return []table{
		arm("loss-alice", "Alice’s arm", c.LossBudget.Alice, c.Installed.LossDB.Alice),
		arm("loss-bob", "Bob’s arm", c.LossBudget.Bob, c.Installed.LossDB.Bob),
	}
}

func defaultsTable(p *plan.Plan) *table {
	if len(p.DefaultsUsed) == 0 {
		return nil
	}
	t := &table{ID: "defaults", Caption: "Defaults used, because the file does not state them", Head: []string{"Entry", "Value", "Source"}, Words: []bool{false, true}, Stack: true}
	for _, d := range p.DefaultsUsed {
		t.add(d.Entry, d.Value, d.Source)
	}
	return t
}

func deviationsTable(p *plan.Plan) *table {
	if len(p.Deviations) == 0 {
		return nil
	}
	t := &table{ID: "deviations", Caption: "Standard deviations stated", Head: []string{"Entry", "Value"}}
	for _, d := range p.Deviations {
		t.add(d.Entry, digits(d.Value, 6)+" ± "+digits(d.SD, 3))
	}
	return t
}

func originsTable(p *plan.Plan) *table {
	if len(p.Origins) == 0 {
		return nil
	}
	t := &table{ID: "origins", Caption: "Where figures come from, as the file says", Head: []string{"Entry", "Origin"}, Words: []bool{true}, Stack: true}
	for _, o := range p.Origins {
		t.add(o.Entry, o.Text)
	}
	return t
}
