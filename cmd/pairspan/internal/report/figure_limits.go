package report

import (
	"math"
	"strings"

	"pairspan/scenarios/plan"
)

// limitsFigure shows the usable rates of ideal versions of the link; nil where
// the plan has none.
func limitsFigure(p *plan.Plan) *figure {
	filed := &p.Cases[0]
	l := filed.Limits
	if l == nil || len(l.Points) == 0 {
		return nil
	}
	f := &figure{ID: "limits", Title: "What limits the link", Finding: l.Sentence}
	described, setting := make([]*float64, len(l.Points)), make([]*float64, len(l.Points))
	state, detectors := make([]*float64, len(l.Points)), make([]*float64, len(l.Points))
	bound := make([]*float64, len(l.Points))
	for i := range l.Points {
		q := &l.Points[i]
		f.Km = append(f.Km, q.DistanceKm)
		described[i], setting[i], state[i], detectors[i] = &q.AsDescribedBps, &q.AtBestBps, &q.PerfectStateBps, &q.PerfectDetectorsBps
		bound[i] = q.RepeaterlessBps
	}
	f.Series = []series{
		{Name: "As described", Short: "as described", Y: described, Look: look{Dash: "solid", Width: 2.6}, Ends: true},
		{Name: "At its best setting", Short: "best setting", Y: setting, Look: look{Colour: 1, Dash: "dashed", Symbol: "circle", Width: 1.8}, Ends: true},
		{Name: "Perfect state", Short: "perfect state", Y: state, Look: look{Colour: 2, Dash: "dotted", Symbol: "triangle", Width: 1.8}, Ends: true},
		{Name: "Perfect detectors", Short: "perfect detectors", Y: detectors, Look: look{Colour: 3, Dash: "dashdot", Symbol: "rect", Width: 1.8}, Ends: true},
	}
	f.overDistance(filed, "Usable rates of ideal versions of the link", "bit/s")
	f.addColumn("Repeaterless bound, bit/s", bound)
	f.rateAxis(filed.Answer.NeedBps)
	f.Reading = limitsReading(filed)
	return f
}

// addColumn puts a column behind the data table that the chart does not draw.
func (f *figure) addColumn(head string, ys []*float64) {
	f.Data.Head = append(f.Data.Head, head)
	step := tableStep(len(f.Km), len(f.Series)+1)
	for i := range f.Data.Rows {
		f.Data.Rows[i].Cells = append(f.Data.Rows[i].Cells, orNone(ys[i*step], func(v float64) string { return digits(v, 4) }))
	}
}

// limitsReading names the ideal versions, and the bound at the point nearest
// to the installed length.
func limitsReading(c *plan.Case) string {
	s := "Usable rates" + atWorst(c) + ", all but the first line at the best setting of each distance; perfect state: without errors; perfect detectors: of efficiency 1, without dead time, noise or jitter."
	var near *plan.LimitPoint
	for i := range c.Limits.Points {
		q := &c.Limits.Points[i]
		if q.RepeaterlessBps != nil && (near == nil || math.Abs(q.DistanceKm-c.Installed.DistanceKm) < math.Abs(near.DistanceKm-c.Installed.DistanceKm)) {
			near = q
		}
	}
	if near == nil {
		return s
	}
	return s + " Not drawn: the repeaterless bound of a direct line with the loss of both arms, which is " + bitRate(*near.RepeaterlessBps) +
		" at " + km(near.DistanceKm) + " with one mode in each of " + countHz(near.SlotsHz) + " slots."
}

// inPlan names the file that has the points which curve.csv has not.
func inPlan(note string) string { return strings.ReplaceAll(note, "curve.csv", "plan.json") }
