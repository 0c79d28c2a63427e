package report

import "pairspan/scenarios/plan"

// rulerFigure is the picture of the first screen; its data are the answer in
// figures.
func rulerFigure(p *plan.Plan) *figure {
	c := &p.Cases[0]
	f := &figure{ID: "ruler", Title: "How far it reaches", Finding: rulerFinding(c), Data: answerFacts(c).Table, DataNote: answerFacts(c).Notes}
	r := rulerOf(c)
	for _, s := range []size{across, middle, narrow} {
		r.Loss = lossTicks(c.Curve, r.End, int(s.Width/80))
		f.Drawings = append(f.Drawings, r.draw(s, f.Finding))
	}
	return f
}

// rulerFinding says what the picture shows.
func rulerFinding(c *plan.Case) string {
	a := &c.Answer
	at, what := km(c.Installed.DistanceKm), "there is key"
	if a.NeedBps != nil {
		what = "the need of " + bitRate(*a.NeedBps) + " is met"
	}
	if a.UsableRateBps == nil {
		return "At " + at + " the losses are known; how far the link reaches depends on the state of the pairs, which is not."
	}
	s := sentence(what + " " + upTo(a.ReachKm, a.ReachReason))
	if a.Nominal != nil && a.AtBest != nil {
		s = sentence(what + " at worst " + upTo(a.ReachKm, a.ReachReason) + ", nominally " +
			upTo(a.Nominal.ReachKm, a.Nominal.ReachReason) + ", at best " + upTo(a.AtBest.ReachKm, a.AtBest.ReachReason))
	}
	s += " Installed are " + at
	if margin := marginOnRuler(a); margin != "" {
		s += ": " + margin
	}
	return s + "."
}

// upTo says a reach inside a sentence.
func upTo(reach *float64, reason *string) string {
	switch {
	case reach != nil:
		return "up to " + km(*reach)
	case reason != nil && *reason == "not_at_zero_km":
		return "at no length"
	case reason != nil && *reason == "beyond_search":
		return "beyond 2000" + nbsp + "km"
	}
	return "at a length not known"
}
