package report

import (
	"strings"

	"pairspan/scenarios/plan"
)

// buyingRemark is what the cases cost; nil where no price is stated or prices
// are withheld.
func buyingRemark(p *plan.Plan) *remark {
	b := p.Buying
	if b == nil {
		return nil
	}
	r := &remark{Sentence: b.Sentence, Note: "Prices are the person’s own figures, in the currency in which they were stated, of detectors alone. Judged at worst where the state leaves an interval open; meets: the need, or without one makes key."}
	if p.Needs != nil && p.Needs.Budget != nil {
		r.Note = "Budget: " + money(*p.Needs.Budget) + ". " + r.Note
	}
	r.Tables = append(r.Tables, costsTable(b, p.Cases[0].Name))
	if len(b.Overtakes) > 0 {
		t := table{ID: "overtakes", Wide: true, Caption: "Where one case overtakes another, the nearest first", Head: []string{"Case", "Makes more than", "From, km"}, Words: []bool{true, false}}
		for _, o := range b.Overtakes {
			t.add(filedName(o.Case, p), filedName(o.Overtakes, p), digits(o.DistanceKm, 3))
		}
		r.Tables = append(r.Tables, t)
	}
	if len(b.Turns) > 0 {
		t := table{ID: "turns", Caption: "Where the order of two cases turns", Stack: true, Head: []string{"Entry", "Better now", "Better from there on", "Stated", "Turns at"}, Words: []bool{true, true}}
		for _, u := range b.Turns {
			t.add(u.Entry, filedName(u.Case, p), filedName(u.Other, p), grouped(u.Stated, 3), grouped(u.Value, 3))
		}
		r.Tables = append(r.Tables, t)
	}
	return r
}

// costsTable lists the costs in the order of the cases.
func costsTable(b *plan.Buying, filed string) table {
	t := table{ID: "costs", Caption: "What the detectors of each case cost", Stack: true, Head: []string{"Case", "Pieces, Alice / Bob", "Price", "Within budget", "Meets", "Margin"}}
	t.Words = []bool{false, false, true, true}
	cheapest, spare := b.Cheapest, b.CheapestSpare
	for i, c := range b.Costs {
		var notes []string
		if cheapest != nil && *cheapest == c.Case {
			notes, cheapest = append(notes, "cheapest that meets the need"), nil
		}
		if spare != nil && *spare == c.Case {
			notes, spare = append(notes, "cheapest with 3"+nbsp+"dB to spare"), nil
		}
		name := c.Case
		if i == 0 && name == filed {
			name = "As filed"
		}
		within := none
		if c.WithinBudget != nil {
			within = yesNo(*c.WithinBudget)
		}
		t.Rows = append(t.Rows, row{Head: name, Note: strings.Join(notes, "; "), Main: i == 0, Cells: []string{
			itoa(c.Pieces.Alice) + slash + itoa(c.Pieces.Bob), orNone(c.Price, money), within, yesNo(c.MeetsNeed), orNone(c.MarginDB, marginText),
		}})
	}
	return t
}

func money(v float64) string { return grouped(v, 9) }

func yesNo(b bool) string {
	if b {
		return "yes"
	}
	return "no"
}

// filedName names a case as the other tables do.
func filedName(name string, p *plan.Plan) string {
	if name == p.Cases[0].Name {
		return "As filed"
	}
	return name
}
