package report

import (
	"slices"
	"strings"

	"pairspan/scenarios/plan"
)

// rateFigure shows the rates against distance: every compared case is a line,
// the need a level and the installed distance a post.
func rateFigure(p *plan.Plan) *figure {
	filed := &p.Cases[0]
	f := &figure{
		ID: "rate", Title: "Key rate against distance",
		KmName: lengthenWords(filed.Lengthen), Km: distances(filed.Curve),
		YName: "bit/s", YKind: "rate", Log: true,
		Finding: rateFinding(filed),
		Reading: rateReading(p),
	}
	f.Series = rateSeries(p)
	if filed.Answer.NeedBps != nil {
		f.Levels = []level{{At: *filed.Answer.NeedBps, Label: "need " + bitRate(*filed.Answer.NeedBps)}}
	}
	f.Posts = []level{{At: filed.Installed.DistanceKm, Label: "installed " + km(filed.Installed.DistanceKm)}}
	f.KmMax = farthest(f.Km, filed.Installed.DistanceKm)
	f.Loss = lossTicks(filed.Curve, f.KmMax, lossLabels)
	f.dataTable("Rates at each distance", "bit/s", func(v float64) string { return digits(v, 4) })
	switch {
	case len(f.Series) == 0:
		f.Nothing = "There is no rate to draw, because the state of the pairs is not known. The table has what does not depend on it."
		f.Data, f.DataNote = lightTable(filed)
	case !f.logRange():
		f.Nothing = "There is no rate to draw: it is zero at every distance."
	}
	return f
}

// lossLabels is how many labels the scale of the loss has at most.
const lossLabels = 10

// rateSeries lists the lines of the scenario as filed and one per compared case.
func rateSeries(p *plan.Plan) []series {
	filed := &p.Cases[0]
	var all []series
	add := func(s series) {
		if !empty(s.Y) {
			all = append(all, s)
		}
	}
	usable := pick(filed.Curve, func(p *plan.Point) *float64 { return p.UsableRateBps })
	secret := pick(filed.Curve, func(p *plan.Point) *float64 { return p.SecretRateBps })
	worst, best := pick(filed.Curve, judged), pick(filed.Curve, usableAtBest)
	if empty(best) {
		add(series{Name: "As filed: usable rate", Y: usable, Look: look{Dash: "solid", Width: 2.6}, Ends: true, Short: "as filed"})
	} else {
		add(series{Name: "As filed: usable rate, at worst", Y: worst, Look: look{Dash: "solid", Width: 2.6}, Ends: true, Short: "as filed, at worst"})
		add(series{Name: "As filed: usable rate, at best (upper edge of the band)", Y: best, Lo: worst})
		add(series{Name: "As filed: usable rate, nominal state", Y: usable, Look: look{Dash: "dashed", Width: 1.4}, Ends: true, Short: "nominal"})
	}
	if !same(secret, usable) {
		add(series{Name: "As filed: secret rate, asymptotic", Y: secret, Look: look{Dash: "dashdot", Width: 1.4}, Ends: true, Short: "secret"})
	}
	add(series{
		Name: "As filed: sifted rate", Y: pick(filed.Curve, func(p *plan.Point) *float64 { return p.SiftedBps }),
		Look: look{Dash: "dotted", Width: 1.8}, Short: "sifted",
	})
	for i := range p.Cases[1:] {
		c := &p.Cases[1+i]
		add(series{Name: c.Name, Y: pick(c.Curve, judged), Look: comparedLook(i), Ends: true, Short: c.Name})
	}
	return all
}

// farthest returns where the distance axis ends.
func farthest(kms []float64, installed float64) float64 {
	end := installed
	if len(kms) > 0 {
		end = max(end, slices.Max(kms))
	}
	if end <= 0 {
		return 1
	}
	return end
}

// rateFinding says what the curve of the scenario as filed comes to.
func rateFinding(c *plan.Case) string {
	a := c.Answer
	if a.UsableRateBps == nil {
		return "Without a state there is no rate; the losses and the counts stand all the same."
	}
	s := "At " + km(c.Installed.DistanceKm) + " the usable rate is " + against(*a.UsableRateBps, a.NeedBps)
	if a.AtBest != nil {
		s += " at worst and " + against(a.AtBest.UsableRateBps, a.NeedBps) + " at best"
	}
	if a.NeedBps != nil {
		s += ", against " + bitRate(*a.NeedBps) + " needed"
	}
	return s + rateReachFinding(c) + "." + endFinding(c)
}

func rateReachFinding(c *plan.Case) string {
	a := c.Answer
	what := "the need is met"
	if a.NeedBps == nil {
		what = "there is key"
	}
	atWorst := ""
	if a.AtBest != nil {
		atWorst = " at worst"
	}
	switch {
	case a.ReachKm != nil:
		return "; " + what + atWorst + " up to " + km(*a.ReachKm)
	case a.ReachReason != nil && *a.ReachReason == "not_at_zero_km":
		return "; " + what + atWorst + " at no length, not even at 0" + nbsp + "km"
	case a.ReachReason != nil && *a.ReachReason == "beyond_search":
		return "; " + what + atWorst + " beyond 2000" + nbsp + "km"
	}
	return ""
}

// endFinding names the two points of the curve between which the key ends.
func endFinding(c *plan.Case) string {
	at := ends(pick(c.Curve, judged))
	if len(at) == 0 || c.Answer.NeedBps == nil {
		return ""
	}
	i := at[len(at)-1]
	return " The key ends between " + digits(c.Curve[i].DistanceKm, 4) + " and " + digits(c.Curve[i+1].DistanceKm, 4) + nbsp + "km."
}

func rateReading(p *plan.Plan) string {
	filed := &p.Cases[0]
	s := "Usable rate: " + judgedWords(filed.Answer) + "; it alone is judged. The upper scale is the optical loss of both arms together. "
	if filed.Installed.Bounds != nil {
		s += "The band spans every state that the stated figure leaves open. "
	}
	if len(p.Cases) > 1 {
		s += "A compared case shows the rate that is judged. "
	}
	for _, drawn := range rateSeries(p) {
		if drawn.Ends && len(ends(drawn.Y)) > 0 {
			return s + "A cross marks where a key ends."
		}
	}
	return strings.TrimSpace(s)
}

// lightTable lists what is known of a link without a state.
func lightTable(c *plan.Case) (t table, note string) {
	t = table{ID: "rate-data", Caption: "Losses and counts at each distance", Wide: true, Head: []string{
		lengthenWords(c.Lengthen) + ", km", "Loss of Alice’s arm, dB", "Loss of Bob’s arm, dB", "Singles at Alice, Hz", "Singles at Bob, Hz",
	}}
	step := tableStep(len(c.Curve), len(t.Head))
	for i := 0; i < len(c.Curve); i += step {
		q := &c.Curve[i]
		t.add(digits(q.DistanceKm, 4), decimals(q.LossDB.Alice, 2), decimals(q.LossDB.Bob, 2),
			digits(q.SinglesHz.Alice, 4), digits(q.SinglesHz.Bob, 4))
	}
	return t, thinned(step)
}
