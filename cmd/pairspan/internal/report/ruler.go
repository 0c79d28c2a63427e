package report

import (
	"pairspan/scenarios/plan"
)

// ruler is the picture of the first screen: how far the need is met, where
// the link is installed, and what lies between.
type ruler struct {
	End       float64 // km at the right end
	Bands     []reachBand
	Installed float64
	Flag      string // what stands at the flag
	FlagLoss  string // and the loss there, where there is room
	Margin    string // the bracket in words; "" without a margin
	Length    string // and its length in words, where there is room
	From, To  float64
	Bracket   bool   // there is a stretch to bracket
	Open      bool   // it runs beyond the right end
	Loss      []tick // the second scale
	CurveEnd  float64
	Least     string // the loss at 0 km
}

// reachBand is the stretch over which one state meets the need.
type reachBand struct {
	Name, Class string
	Until, Note string // what it means, where there is room, and how far
	From, To    float64
	None, Open  bool // no such length; beyond the search
}

// rulerOf reads the picture off a case.
func rulerOf(c *plan.Case) *ruler {
	r := &ruler{Installed: c.Installed.DistanceKm, Bands: reachBands(c)}
	r.End = rulerEnd(c, r)
	r.Flag = "installed " + km(r.Installed)
	if db := c.Installed.LossDB.Alice + c.Installed.LossDB.Bob; db > 0 {
		r.FlagLoss = ", " + decibels(db)
	}
	r.bracket(c)
	if n := len(c.Curve); n > 1 {
		r.CurveEnd = c.Curve[n-1].DistanceKm
		r.Least = decibels(c.Curve[0].LossDB.Alice + c.Curve[0].LossDB.Bob)
	}
	return r
}

// reachBands lists the states that the answer speaks of.
func reachBands(c *plan.Case) []reachBand {
	a := &c.Answer
	if a.UsableRateBps == nil {
		return nil
	}
	first := "reach"
	if a.Nominal != nil || a.AtBest != nil {
		first = "at worst"
	}
	until := "key to "
	if a.NeedBps != nil {
		until = "need met to "
	}
	bands := []reachBand{bandOf(first, "band-worst", until, a.ReachKm, a.ReachReason)}
	bands[0].From = metFrom(c, judged, bands[0].To)
	if m := a.Nominal; m != nil {
		b := bandOf("nominal", "band-nominal", "", m.ReachKm, m.ReachReason)
		b.From = metFrom(c, func(p *plan.Point) *float64 { return p.UsableRateBps }, b.To)
		bands = append(bands, b)
	}
	if m := a.AtBest; m != nil {
		b := bandOf("at best", "band-best", "", m.ReachKm, m.ReachReason)
		b.From = metFrom(c, usableAtBest, b.To)
		bands = append(bands, b)
	}
	return bands
}

func bandOf(name, class, until string, reach *float64, reason *string) reachBand {
	b := reachBand{Name: name, Class: class}
	switch {
	case reach != nil:
		b.To, b.Until, b.Note = *reach, until, km(*reach)
	case reason != nil && *reason == "beyond_search":
		b.Open, b.Until, b.Note = true, until, "beyond 2000"+nbsp+"km"
	default:
		b.None, b.Note = true, reachWords(reason)
	}
	return b
}

// metFrom returns where the stretch that ends at the reach begins: 0, unless
// the curve shows a shorter length that does not meet the need.
func metFrom(c *plan.Case, rate func(*plan.Point) *float64, reach float64) float64 {
	for i := len(c.Curve) - 1; i >= 0; i-- {
		p := &c.Curve[i]
		if p.DistanceKm >= reach || meets(rate(p), c.Answer.NeedBps) {
			continue
		}
		if i+1 < len(c.Curve) && c.Curve[i+1].DistanceKm < reach {
			return c.Curve[i+1].DistanceKm
		}
		return 0 // the last point below the reach does not meet it: the grid is too coarse to tell
	}
	return 0
}

func meets(rate, need *float64) bool {
	if rate == nil {
		return false
	}
	if need == nil {
		return *rate > 0
	}
	return *rate >= *need
}

// rulerEnd leaves room beyond the greatest length shown.
func rulerEnd(c *plan.Case, r *ruler) float64 {
	const room = 1.12
	end := r.Installed
	for _, b := range r.Bands {
		end = max(end, b.To)
	}
	end *= room
	if n := len(c.Curve); n > 0 {
		for _, b := range r.Bands {
			if b.Open {
				end = max(end, c.Curve[n-1].DistanceKm)
			}
		}
		if end == 0 || len(r.Bands) == 0 {
			end = max(end, c.Curve[n-1].DistanceKm)
		}
	}
	if end <= 0 {
		return 1
	}
	return end
}

// bracket sets the margin between the installed length and the reach at worst.
func (r *ruler) bracket(c *plan.Case) {
	a := &c.Answer
	if a.UsableRateBps == nil {
		return
	}
	r.Margin = marginOnRuler(a)
	switch {
	case a.ReachKm != nil:
		r.Bracket = true
		r.From, r.To = min(r.Installed, *a.ReachKm), max(r.Installed, *a.ReachKm)
		r.Length = lengthOnRuler(a, r.To-r.From)
	case a.ReachReason != nil && *a.ReachReason == "beyond_search":
		r.Bracket, r.Open = true, true
		r.From, r.To = r.Installed, r.End
	}
	if r.Margin == "" {
		r.Bracket = false
	}
}

// marginOnRuler is the margin in dB, in words.
func marginOnRuler(a *plan.Answer) string {
	switch {
	case a.MarginDB != nil && *a.MarginDB < 0:
		return marginText(-*a.MarginDB) + " must go"
	case a.MarginDB != nil:
		return marginText(*a.MarginDB) + " to spare"
	case a.MarginReason != nil && *a.MarginReason == "beyond_search":
		return "more than 300" + nbsp + "dB to spare"
	case a.MarginReason != nil && *a.MarginReason == "no_loss_helps":
		return "no loss that could go is enough"
	}
	return ""
}

// lengthOnRuler is the length of the bracket, in words.
func lengthOnRuler(a *plan.Answer, gap float64) string {
	switch {
	case a.MarginDB == nil || gap <= 0:
		return ""
	case *a.MarginDB < 0:
		return ", or " + km(gap) + " of fibre"
	}
	return ", or " + km(gap) + " more fibre"
}
