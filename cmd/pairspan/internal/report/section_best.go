package report

import (
	"strings"

	"pairspan/scenarios/plan"
)

// bestRemark sets the best setting of every case beside the rate that it would
// make; nil where the plan has none.
func bestRemark(p *plan.Plan) *remark {
	t := table{
		ID: "best-settings", Caption: "Best setting at the installed length", Stack: true,
		Head: []string{"Case", "Pair rate, pairs/s", "Window", "Key basis", "Usable rate", "Times as described", "Pair rates that keep 95 %"},
	}
	for i := range p.Cases {
		b := p.Cases[i].Best
		if b == nil {
			continue
		}
		kept := none
		if b.Keeps95 != nil {
			kept = grouped(b.Keeps95.From, 3) + nbsp + "to" + nbsp + grouped(b.Keeps95.To, 3)
		}
		t.Rows = append(t.Rows, row{Head: caseName(p, i), Note: digits(b.PairsPerSlot, 3) + " pairs a slot", Main: i == 0, Cells: []string{
			grouped(b.PairRateHz, 3), picosec(b.WindowPs), share(b.KeyBasisShare), bitRate(b.UsableRateBps),
			orNone(b.Factor, func(v float64) string { return digits(v, 3) }), kept,
		}})
	}
	if len(t.Rows) == 0 {
		return nil
	}
	r := &remark{Tables: []table{t}, Note: "Judged at worst where the state leaves an interval open. A dash: from no rate there is no factor, or the pair rate is not free."}
	if b := p.Cases[0].Best; b != nil {
		r.Sentence = b.Sentence
		if len(b.Free) > 0 {
			r.Note = "Searched in the scenario as filed: " + strings.Join(b.Free, ", ") + ". " + r.Note
		}
	}
	return r
}
