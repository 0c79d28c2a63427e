package report

import (
	"math"

	"pairspan/scenarios/plan"
)

// qberFigure shows the error rate of both bases of the scenario as filed
// against distance, with the level above which no key is left.
func qberFigure(p *plan.Plan) *figure {
	filed := &p.Cases[0]
	f := &figure{
		ID: "qber", Title: "Error rate against distance",
		KmName: lengthenWords(filed.Lengthen), Km: distances(filed.Curve),
		YKind:   "percent",
		Finding: qberFinding(filed),
		Reading: "Key basis: the one that makes the key; check basis: the one that bounds what an eavesdropper knows. All lines are of the scenario as filed.",
		Series:  qberSeries(filed),
	}
	f.KmMax = farthest(f.Km, filed.Installed.DistanceKm)
	f.Loss = lossTicks(filed.Curve, f.KmMax, lossLabels)
	f.Posts = []level{{At: filed.Installed.DistanceKm, Label: "installed " + km(filed.Installed.DistanceKm)}}
	if filed.QBERThreshold > 0 {
		f.Levels = []level{{
			At:    100 * filed.QBERThreshold,
			Label: "no key above " + perCent(filed.QBERThreshold) + " in both (f" + nbsp + "=" + nbsp + digits(filed.ErrorCorrectionF, 4) + ")",
		}}
	}
	f.dataTable("Error rates at each distance", "%", func(v float64) string { return digits(v, 4) })
	if len(f.Series) == 0 {
		f.Nothing = "There is no error rate to draw, because the state of the pairs is not known."
		f.Data = table{}
	}
	f.perCentRange()
	return f
}

// qberSeries lists both bases, in per cent, of the given or nominal state and
// at worst.
func qberSeries(c *plan.Case) []series {
	state := ""
	if c.Installed.Bounds != nil {
		state = ", nominal"
	}
	nominal := bases(c.Curve, state, func(p *plan.Point) *plan.QBER { return p.QBER })
	worst := bases(c.Curve, ", at worst", func(p *plan.Point) *plan.QBER {
		if p.Bounds == nil {
			return nil
		}
		return &p.Bounds.AtWorst.QBER
	})
	for i := range worst {
		worst[i].Look = look{Colour: worst[i].Look.Colour, Dash: "dashdot", Symbol: symbols[i], Width: 1.6}
	}
	return append(nominal, worst...)
}

// bases returns the lines of both bases of one state, or one line for both
// where nobody could tell them apart.
func bases(curve []plan.Point, state string, of func(*plan.Point) *plan.QBER) []series {
	key, check := make([]*float64, len(curve)), make([]*float64, len(curve))
	apart := false
	for i := range curve {
		if q := of(&curve[i]); q != nil {
			key[i], check[i] = new(100*q.Key), new(100*q.Check)
			apart = apart || roundTo(q.Key, 3) != roundTo(q.Check, 3)
		}
	}
	switch {
	case empty(key):
		return nil
	case !apart:
		return []series{{Name: "Both bases" + state, Y: key, Look: look{Colour: 0, Dash: "solid", Width: 2.6}, Short: "both" + state}}
	}
	return []series{
		{Name: "Key basis" + state, Y: key, Look: look{Colour: 0, Dash: "solid", Width: 2.6}, Short: "key" + state},
		{Name: "Check basis" + state, Y: check, Look: look{Colour: 1, Dash: "dashed", Width: 2.2}, Short: "check" + state},
	}
}

// perCentRange ends the axis at the next five per cent above every line.
func (f *figure) perCentRange() {
	high := 0.0
	for _, s := range f.Series {
		for _, y := range s.Y {
			if y != nil {
				high = math.Max(high, *y)
			}
		}
	}
	for _, l := range f.Levels {
		high = math.Max(high, 1.1*l.At)
	}
	f.YMax = math.Min(50, 5*math.Ceil(high/5))
	if !(f.YMax > 0) {
		f.YMax = 50
	}
}

func qberFinding(c *plan.Case) string {
	q := c.Installed.QBER
	if q == nil {
		return "Without a state there is no error rate."
	}
	s := "At " + km(c.Installed.DistanceKm) + " the QBER is " + bothBases(*q)
	if b := c.Installed.Bounds; b != nil {
		s += " for the nominal state, and " + bothBases(b.AtWorst.QBER) + " at worst"
	}
	if c.QBERThreshold > 0 {
		s += "; with f" + nbsp + "=" + nbsp + digits(c.ErrorCorrectionF, 4) + " no key is left where both bases are above " + perCent(c.QBERThreshold)
	}
	return s + "."
}

func bothBases(q plan.QBER) string {
	if perCent(q.Key) == perCent(q.Check) {
		return perCent(q.Key) + " in both bases"
	}
	return perCent(q.Key) + " in the key basis and " + perCent(q.Check) + " in the check basis"
}
