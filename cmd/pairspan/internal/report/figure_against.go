package report

import (
	"github.com/go-echarts/go-echarts/v2/opts"

	"pairspan/scenarios/plan"
)

// otherAxis is what the horizontal axis shows in place of distance.
type otherAxis struct {
	Name string
	Log  bool
	Min  float64
}

// axis turns the axis of distance into the other one; nil leaves it.
func (o *otherAxis) axis(a opts.XAxis) opts.XAxis {
	if o == nil {
		return a
	}
	a.Name, a.Min = o.Name, o.Min
	if o.Log {
		a.Type = "log"
	}
	return a
}

// format names how its values read.
func (o *otherAxis) format() string {
	if o == nil {
		return "km"
	}
	return "number"
}

// againstFigures shows the rate and the errors over another entry; none
// without one.
func againstFigures(p *plan.Plan) []*figure {
	a := p.Against
	if a == nil || len(a.Cases) == 0 || len(a.Cases[0].Points) == 0 {
		return nil
	}
	return []*figure{againstRate(p), againstQBER(p)}
}

// over starts a figure over the entry.
func over(a *plan.Against, id, title string) *figure {
	f := &figure{ID: id, Title: title + " over " + a.Entry}
	for _, q := range a.Cases[0].Points {
		f.Km = append(f.Km, q.Value)
	}
	name := a.Entry
	if a.Unit != "" {
		name += ", " + a.Unit
	}
	f.KmMax = f.Km[len(f.Km)-1]
	f.Over = &otherAxis{Name: name, Log: a.Scale == "log" && f.Km[0] > 0, Min: f.Km[0]}
	if !(f.KmMax > f.Over.Min) {
		f.KmMax = f.Over.Min + 1
	}
	if a.InUse != nil && *a.InUse >= f.Over.Min && *a.InUse <= f.KmMax {
		f.Posts = []level{{At: *a.InUse, Label: "in use " + withUnit(digits(*a.InUse, 3), a.Unit)}}
	}
	return f
}

// overTable lists the points under a figure over an entry.
func (f *figure) overTable(caption, unit string) {
	f.dataTable(caption, unit, func(v float64) string { return digits(v, 4) })
	f.Data.Head[0], f.DataNote = f.Over.Name, inPlan(f.DataNote)
}

func againstRate(p *plan.Plan) *figure {
	a, filed := p.Against, &p.Cases[0]
	f := over(a, "against-rate", "Usable rate")
	for i := range a.Cases {
		c := &a.Cases[i]
		ys := make([]*float64, len(f.Km))
		for k := range c.Points {
			if k < len(ys) {
				ys[k] = judged(&c.Points[k].Point)
			}
		}
		s := series{Name: c.Name, Short: c.Name, Y: ys, Ends: true, Look: look{Dash: "solid", Width: 2.6}}
		if i > 0 {
			s.Look = comparedLook(i - 1)
		} else {
			s.Name = "As filed" + atWorst(filed)
			s.Short = s.Name
		}
		if !empty(ys) {
			f.Series = append(f.Series, s)
		}
	}
	f.Finding = againstFinding(a, f, filed)
	f.overTable("Usable rate over "+a.Entry, "bit/s")
	f.Reading = "At the installed length; the rate that is judged."
	if len(f.Series) == 0 {
		f.Nothing = "There is no rate to draw, because the state of the pairs is not known."
		return f
	}
	f.rateAxis(filed.Answer.NeedBps)
	return f
}

// againstFinding names the value with the highest rate of the first line.
func againstFinding(a *plan.Against, f *figure, filed *plan.Case) string {
	if len(f.Series) == 0 {
		return "Without a state there is no rate."
	}
	most := -1
	for k, y := range f.Series[0].Y {
		if positive(y) && (most < 0 || *y > *f.Series[0].Y[most]) {
			most = k
		}
	}
	value := func(v float64) string { return withUnit(digits(v, 3), a.Unit) }
	if most < 0 {
		return "Between " + value(f.Km[0]) + " and " + value(f.Km[len(f.Km)-1]) + " of " + a.Entry + " the scenario as filed makes no key."
	}
	return "Of the values drawn, " + a.Entry + " of " + value(f.Km[most]) + " makes most key" + atWorst(filed) + ": " + bitRate(*f.Series[0].Y[most]) + "."
}

func againstQBER(p *plan.Plan) *figure {
	a, filed := p.Against, &p.Cases[0]
	f := over(a, "against-qber", "QBER")
	f.YKind = "percent"
	scene := plan.Case{Installed: filed.Installed}
	for i := range a.Cases[0].Points {
		scene.Curve = append(scene.Curve, a.Cases[0].Points[i].Point)
	}
	f.Series = qberSeries(&scene)
	if t := filed.QBERThreshold; t > 0 {
		f.Levels = []level{{At: 100 * t, Label: "no key above " + perCent(t) + " in both"}}
	}
	f.overTable("QBER over "+a.Entry, "%")
	f.Reading = "The scenario as filed, at the installed length."
	f.perCentRange()
	lo, hi := 50.0, 0.0
	for _, s := range f.Series {
		for _, y := range s.Y {
			if y != nil {
				lo, hi = min(lo, *y), max(hi, *y)
			}
		}
	}
	f.Finding = "Over these values of " + a.Entry + " the QBER lies between " + perCent(lo/100) + " and " + perCent(hi/100) + "."
	if len(f.Series) == 0 {
		f.Finding = "Without a state there is no error rate."
		f.Nothing = "There is no error rate to draw, because the state of the pairs is not known."
	}
	return f
}
