package report

import (
	"math"
	"strconv"
	"strings"

	"pairspan/scenarios/plan"
)

const tangleEntry = "source.state.tangle"

// tangleFigure says whether a source is good enough for a length of fibre: the
// least tangle that meets the need, and this source's. It is nil where the
// plan asks nothing.
func tangleFigure(p *plan.Plan) *figure {
	filed := &p.Cases[0]
	if len(filed.TangleNeeded) == 0 {
		return nil
	}
	f := &figure{ID: "tangle", Title: "Tangle needed against distance", YKind: "number", YMax: 1}
	needed := untilNone(filed)
	n := len(needed)
	worst, nominal, best := make([]*float64, n), make([]*float64, n), make([]*float64, n)
	for i, q := range needed {
		f.Km = append(f.Km, q.DistanceKm)
		worst[i], nominal[i], best[i] = q.AtWorst, q.Nominal, q.AtBest
	}
	for _, s := range []series{
		{Name: "Needed at worst, for any state of that tangle", Short: "at worst", Y: worst, Look: look{Dash: "solid", Width: 2.6}},
		{Name: "Needed by a Werner state", Short: "Werner", Y: nominal, Look: look{Colour: 1, Dash: "dashed", Symbol: "circle", Width: 1.8}},
		{Name: "Needed at best, for the best state of that tangle", Short: "at best", Y: best, Look: look{Colour: 2, Dash: "dotted", Symbol: "triangle", Width: 1.8}},
	} {
		if !empty(s.Y) {
			f.Series = append(f.Series, s)
		}
	}
	f.overDistance(filed, "Least tangle that meets the need at each distance", "tangle")
	if n < len(filed.TangleNeeded) {
		f.DataNote = strings.TrimSpace(f.DataNote + " Beyond these distances no tangle is enough.")
	}
	if len(f.Series) == 0 {
		f.Finding = "No tangle meets the need at any distance."
		f.Nothing = "There is no line to draw: no tangle meets the need at any distance."
		return f
	}
	has, sd, known := statedTangle(p)
	f.Finding = tangleFinding(filed, has, known)
	f.Reading = "Upwards: the tangle. Above a line the need is met with certainty (at worst), by a Werner state, or by the best state of that tangle; a line ends where no tangle is enough."
	if !known {
		f.Reading += " The scenario states no tangle, so the source is not marked."
		return f
	}
	f.markTangle(has, sd)
	return f
}

// untilNone leaves out the distances at which no tangle is enough, save a few
// that show that it ends.
func untilNone(c *plan.Case) []plan.TangleNeeded {
	all, last := c.TangleNeeded, 0
	for i, q := range all {
		if q.AtWorst != nil || q.Nominal != nil || q.AtBest != nil || q.DistanceKm <= c.Installed.DistanceKm {
			last = i
		}
	}
	return all[:min(len(all), last+last/2+2)]
}

// statedTangle finds the source's tangle and its standard deviation, 0 where
// none is stated.
func statedTangle(p *plan.Plan) (has, sd float64, known bool) {
	for _, d := range p.Deviations {
		if d.Entry == tangleEntry {
			return d.Value, d.SD, true
		}
	}
	for _, s := range p.Cases[0].Serves {
		if s.Entry == tangleEntry && s.Stated != nil {
			return *s.Stated, 0, true
		}
	}
	for _, e := range p.Entries {
		if v, err := strconv.ParseFloat(e.Value, 64); e.Entry == tangleEntry && err == nil && v >= 0 && v <= 1 {
			return v, 0, true
		}
	}
	return 0, 0, false
}

// markTangle puts the source's tangle on the chart as a level, with its
// standard deviation as a band.
func (f *figure) markTangle(has, sd float64) {
	label := "this source " + digits(has, 4)
	if sd > 0 {
		label += nbsp + "±" + nbsp + digits(sd, 3)
		lo, hi := math.Max(0, has-sd), math.Min(1, has+sd)
		band := series{Name: "This source, one standard deviation to either side", Y: make([]*float64, len(f.Km)), Lo: make([]*float64, len(f.Km)), Look: look{Colour: 3}}
		for i := range f.Km {
			band.Y[i], band.Lo[i] = &hi, &lo
		}
		f.Series = append(f.Series, band)
	}
	f.Levels = []level{{At: has, Label: label}}
}

// tangleFinding names what is needed at the distance of the list that is
// nearest to the installed one.
func tangleFinding(c *plan.Case, has float64, known bool) string {
	near := c.TangleNeeded[0]
	for _, q := range c.TangleNeeded {
		if math.Abs(q.DistanceKm-c.Installed.DistanceKm) < math.Abs(near.DistanceKm-c.Installed.DistanceKm) {
			near = q
		}
	}
	three := func(v float64) string { return digits(v, 3) }
	s := "At " + km(near.DistanceKm) + " no tangle is sure to meet the need"
	if near.AtWorst != nil {
		s = "At " + km(near.DistanceKm) + " a tangle of " + three(*near.AtWorst) + " is sure to meet the need"
	}
	if near.Nominal != nil {
		s += "; a Werner state needs " + three(*near.Nominal)
	}
	if near.AtBest != nil {
		s += "; below " + three(*near.AtBest) + " no state meets it"
	}
	if known {
		s += ". This source has " + digits(has, 4)
	}
	return s + "."
}
