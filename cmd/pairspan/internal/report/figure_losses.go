package report

import (
	"strings"

	"pairspan/scenarios/plan"
)

// lossFigure is the optical loss of each arm, item by item in the order in
// which the plan lists them.
func lossFigure(p *plan.Plan) *figure {
	c := &p.Cases[0]
	f := &figure{
		ID: "loss", Title: "Loss of each arm", Finding: lossFinding(c),
		Reading: "Optical loss from the source's output to the detectors; what the detectors miss is not in it, nor is a passive splitter, which is sifting.",
	}
	two := func(v float64) string { return decimals(v, 2) }
	k := &cascade{Title: "Loss of each arm, item by item", Unit: "dB", Max: max(c.Installed.LossDB.Alice, c.Installed.LossDB.Bob)}
	for _, arm := range arms(c) {
		g := cascadeGroup{Heading: arm.Name}
		for _, it := range arm.Items {
			g.stair(it.Item, it.LossDB, two)
			k.Max = max(k.Max, g.Rows[len(g.Rows)-1].To)
		}
		g.total("From source to detector", arm.Total, two)
		k.Groups = append(k.Groups, g)
		f.Tables = append(f.Tables, lossTable(arm.ID, g))
	}
	if !(k.Max > 0) {
		f.Nothing = "There is no loss to draw."
		return f
	}
	for _, s := range []size{middle, narrow} {
		f.Drawings = append(f.Drawings, k.draw(f.ID, s, true, f.Finding))
	}
	return f
}

// armLoss is one arm's budget.
type armLoss struct {
	ID, Name string
	Items    []plan.LossItem
	Total    float64
}

func arms(c *plan.Case) []armLoss {
	return []armLoss{
		{"loss-alice", "Alice’s arm", c.LossBudget.Alice, c.Installed.LossDB.Alice},
		{"loss-bob", "Bob’s arm", c.LossBudget.Bob, c.Installed.LossDB.Bob},
	}
}

// lossTable lists a staircase.
func lossTable(id string, g cascadeGroup) table {
	t := table{ID: id, Caption: g.Heading, Head: []string{"Item", "Loss, dB", "So far, dB"}}
	for _, r := range g.Rows {
		sum := r.Sum
		if r.Total {
			sum = r.Value
		}
		t.Rows = append(t.Rows, row{Head: r.Label, Cells: []string{r.Value, sum}, Main: r.Total})
	}
	return t
}

// lossFinding names the greatest item of each arm.
func lossFinding(c *plan.Case) string {
	var said []string
	for _, arm := range arms(c) {
		s := arm.Name + " loses " + decibels(arm.Total)
		if len(arm.Items) > 1 {
			most := arm.Items[0]
			for _, it := range arm.Items {
				if it.LossDB > most.LossDB {
					most = it
				}
			}
			s += ", most by “" + most.Item + "” (" + decibels(most.LossDB) + ")"
		}
		said = append(said, s)
	}
	return strings.Join(said, "; ") + "."
}
