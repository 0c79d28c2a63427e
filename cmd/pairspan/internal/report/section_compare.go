package report

import (
	"cmp"
	"math"
	"slices"
	"strconv"
	"strings"

	"pairspan/scenarios/plan"
)

// comparedTable lists the cases, best margin first; nil where there is only one.
func comparedTable(p *plan.Plan) *table {
	if len(p.Cases) < 2 {
		return nil
	}
	t := &table{
		ID: "compared", Caption: "All cases, best margin first", Quiet: true, Stack: true,
		Head: []string{"Case", "Usable rate", "QBER key / check", "Margin", "Reach", "Detectors needed, Alice / Bob", "Outcome"},
	}
	t.Words = []bool{false, false, false, false, false, true}
	for _, i := range byMargin(p.Cases) {
		c := &p.Cases[i]
		a := c.Answer
		r := row{Head: caseName(p, i), Note: changes(c), Main: i == 0}
		needed := c.Installed.DetectorsNeeded
		r.Cells = []string{
			orNone(a.UsableRateBps, func(v float64) string { return against(v, a.NeedBps) }), judgedQBER(&c.Installed), marginCell(a.MarginDB, a.MarginReason), reachCell(&a),
			strconv.Itoa(needed.Alice) + slash + strconv.Itoa(needed.Bob), outcomeWords(a.Outcome),
		}
		t.Rows = append(t.Rows, r)
	}
	return t
}

// byMargin orders the cases: a margin beyond the search first, then by margin,
// then those without one; file order decides between equals.
func byMargin(cases []plan.Case) []int {
	rank := func(i int) float64 {
		a := cases[i].Answer
		switch {
		case a.MarginDB != nil:
			return *a.MarginDB
		case a.MarginReason != nil && *a.MarginReason == "beyond_search":
			return math.Inf(1)
		case a.MarginReason != nil:
			return -math.MaxFloat64
		}
		return math.Inf(-1)
	}
	order := make([]int, len(cases))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(rank(b), rank(a)) })
	return order
}

func caseName(p *plan.Plan, i int) string {
	if i == 0 {
		return "As filed"
	}
	return p.Cases[i].Name
}

func changes(c *plan.Case) string {
	said := make([]string, len(c.Changes))
	for i, ch := range c.Changes {
		said[i] = ch.Entry + ": " + ch.Value
	}
	return strings.Join(said, "; ")
}

// judgedQBER is the error of both bases that goes with the judged rate.
func judgedQBER(p *plan.Point) string {
	if p.Bounds != nil {
		return pairOfErrors(&p.Bounds.AtWorst.QBER)
	}
	return pairOfErrors(p.QBER)
}
