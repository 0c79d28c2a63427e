package report

import "pairspan/scenarios/plan"

// deciding is what helps to choose: the best setting, the limits, what would
// still serve, blocks, doubt, money, another entry in place of distance, and
// the first day's sheet. A part is nil or empty where the plan has nothing for it.
type deciding struct {
	Best       *remark
	Limits     *figure
	Serves     *table
	Elasticity *figure
	Tangle     *figure
	Needs      *table
	Block      *remark
	Blocks     *figure
	Doubt      *remark
	Bands      *figure
	Shares     *figure
	Next       []plan.Measurement
	Buying     *remark
	Against    []*figure
	Over       string // the entry that stands in place of distance
	Acceptance *sheet
}

// remark is a sentence of the plan and the tables that bear it out.
type remark struct {
	Sentence string
	Tables   []table
	Note     string
}

func newDeciding(p *plan.Plan) *deciding {
	d := &deciding{
		Best:       bestRemark(p),
		Limits:     limitsFigure(p),
		Serves:     servesTable(&p.Cases[0]),
		Elasticity: elasticityFigure(&p.Cases[0]),
		Tangle:     tangleFigure(p),
		Needs:      needsTable(p.Needs),
		Block:      blockRemark(&p.Cases[0]),
		Blocks:     blocksFigure(p),
		Buying:     buyingRemark(p),
		Against:    againstFigures(p),
		Acceptance: acceptanceSheet(&p.Cases[0]),
	}
	if p.Against != nil {
		d.Over = p.Against.Entry
	}
	if u := p.Cases[0].Uncertainty; u != nil {
		d.Doubt, d.Next = doubtRemark(&p.Cases[0]), u.MeasureNext
		d.Bands, d.Shares = bandsFigure(p), sharesFigure(u)
	}
	return d
}

// figures lists the figures that there are, in the order of the page.
func (d *deciding) figures() []*figure {
	var there []*figure
	for _, f := range append([]*figure{d.Limits, d.Tangle, d.Elasticity, d.Blocks, d.Bands, d.Shares}, d.Against...) {
		if f != nil {
			there = append(there, f)
		}
	}
	return there
}

// Served reports whether the section of what would still serve has a part.
func (d *deciding) Served() bool { return d.Serves != nil || d.Elasticity != nil || d.Tangle != nil }

// Keyed reports whether the section of needs and blocks has a part.
func (d *deciding) Keyed() bool { return d.Needs != nil || d.Block != nil || d.Blocks != nil }

// overDistance sets what the charts against distance have in common. The full
// points of these charts stand in plan.json alone.
func (f *figure) overDistance(filed *plan.Case, caption, unit string) {
	f.KmName = lengthenWords(filed.Lengthen)
	f.KmMax = farthest(f.Km, filed.Installed.DistanceKm)
	f.Loss = lossTicks(filed.Curve, f.KmMax, lossLabels)
	f.Posts = []level{{At: filed.Installed.DistanceKm, Label: "installed " + km(filed.Installed.DistanceKm)}}
	f.dataTable(caption, unit, func(v float64) string { return digits(v, 4) })
	f.DataNote = inPlan(f.DataNote)
}

// rateAxis sets a logarithmic axis with the need on it.
func (f *figure) rateAxis(need *float64) {
	f.YName, f.YKind, f.Log = "bit/s", "rate", true
	if need != nil && *need > 0 {
		f.Levels = []level{{At: *need, Label: "need " + bitRate(*need)}}
	}
	if !f.logRange() {
		f.Nothing = "There is no rate to draw: it is zero everywhere."
	}
}

// atWorst is how the judged state reads behind a figure of a case.
func atWorst(c *plan.Case) string {
	if c.Installed.Bounds != nil {
		return " at worst"
	}
	return ""
}
