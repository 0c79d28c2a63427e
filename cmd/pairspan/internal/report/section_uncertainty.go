package report

import (
	"math"

	"pairspan/scenarios/plan"
)

// doubtRemark is what the standard deviations make of the answer.
func doubtRemark(c *plan.Case) *remark {
	u := c.Uncertainty
	r := &remark{Sentence: u.Sentence}
	if u.Draws == 0 {
		return r
	}
	t := table{
		ID: "quantiles", Wide: true, Caption: itoa(u.Draws) + " draws of every standard deviation stated, seed " + itoa(u.Seed),
		Head: []string{"Figure", "5" + nbsp + "%", "50" + nbsp + "%", "95" + nbsp + "%"},
	}
	t.add("Usable rate"+atWorst(c), bitRate(u.UsableRate.P05), bitRate(u.UsableRate.P50), bitRate(u.UsableRate.P95))
	nominal := ""
	if c.Installed.Bounds != nil {
		nominal = ", nominal state"
	}
	t.add("QBER of the key basis"+nominal, perCent(u.QBERKey.P05), perCent(u.QBERKey.P50), perCent(u.QBERKey.P95))
	if q := u.ReachKm; q != nil {
		t.add("Reach"+atWorst(c), orNone(q.P05, km), orNone(q.P50, km), orNone(q.P95, km))
		if q.P05 == nil || q.P50 == nil || q.P95 == nil {
			r.Note = "A dash: at that point the need is met at no distance, or beyond the end of the search still."
		}
	}
	r.Tables = []table{t}
	if u.ChanceMet != nil {
		met := int(math.Round(*u.ChanceMet * float64(u.Draws)))
		r.Note = "The need is met in " + itoa(met) + " of " + itoa(u.Draws) + " draws. " + r.Note
	}
	return r
}

// bandsFigure shows the statistical band of the judged rate; nil without draws.
func bandsFigure(p *plan.Plan) *figure {
	c := &p.Cases[0]
	u := c.Uncertainty
	if u.Draws == 0 || len(u.Bands) == 0 {
		return nil
	}
	f := &figure{ID: "bands", Title: "Doubt in the usable rate"}
	n := len(u.Bands)
	low, middle, high := make([]*float64, n), make([]*float64, n), make([]*float64, n)
	for i := range u.Bands {
		b := &u.Bands[i]
		f.Km = append(f.Km, b.DistanceKm)
		low[i], middle[i], high[i] = &b.UsableRate.P05, &b.UsableRate.P50, &b.UsableRate.P95
	}
	f.Series = []series{
		{Name: "Median of the draws", Short: "median", Y: middle, Look: look{Dash: "solid", Width: 2.6}, Ends: true},
		{Name: "Upper edge: 95" + nbsp + "% of the draws are below", Short: "upper edge", Y: high, Look: look{Colour: 1, Dash: "dashed", Width: 1.4}, Ends: true},
		{Name: "Lower edge: 5" + nbsp + "% of the draws are below", Short: "lower edge", Y: low, Look: look{Colour: 2, Dash: "dotted", Width: 1.4}, Ends: true},
	}
	f.overDistance(c, "Usable rate"+atWorst(c)+", draws", "bit/s")
	f.Series = append(f.Series, series{Name: "90" + nbsp + "% of the draws", Y: high, Lo: low})
	f.rateAxis(c.Answer.NeedBps)
	f.Finding = "At " + km(c.Installed.DistanceKm) + " 90" + nbsp + "% of " + itoa(u.Draws) + " draws (seed " + itoa(u.Seed) + ") lie between " +
		bitRate(u.UsableRate.P05) + " and " + bitRate(u.UsableRate.P95) + atWorst(c) + "."
	f.Reading = "The settings are held while every figure with a standard deviation is drawn."
	if c.Installed.Bounds != nil {
		f.Reading += " This is the statistical band alone. What the stated figure leaves open of the state is no matter of chance: it is the band of the key rate against distance above, and is kept apart."
	}
	return f
}

// sharesFigure shows which input the doubt comes from; nil without shares.
func sharesFigure(u *plan.Uncertainty) *figure {
	if u.Draws == 0 || len(u.Shares) == 0 {
		return nil
	}
	f := &figure{ID: "shares", Title: "Where the doubt comes from"}
	t := table{ID: "shares-data", Wide: true, Caption: "Each input’s share of the variance of the usable rate", Head: []string{"Entry", "First order, %", "By the draws, %"}}
	var bars []bar
	for _, s := range u.Shares {
		t.add(s.Entry, digits(100*s.FirstOrder, 3), digits(100*s.ByDraws, 3))
		if len(bars) < mostBars && s.FirstOrder > 0 {
			bars = append(bars, bar{s.Entry, 100 * s.FirstOrder, digits(100*s.FirstOrder, 3)})
		}
	}
	first := u.Shares[0]
	f.Finding = "The greatest part of the variance of the usable rate is from " + first.Entry + ": " + share(first.FirstOrder) + " to first order, " + share(first.ByDraws) + " by the draws."
	f.Reading = "To first order: the square of elasticity times relative deviation, over their sum. By the draws: the squared correlation with the rate."
	f.Data = t
	f.drawBars(bars, "%")
	return f
}
