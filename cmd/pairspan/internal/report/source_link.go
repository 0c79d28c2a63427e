package report

import (
	"html/template"
	"strings"

	"pairspan/scenarios/source"
)

// linkSection is what the source can carry.
type linkSection struct {
	Title, Sentence, RestsOn, InTheWay string
	Facts                              table
	Replaced                           *table
	PumpSentence                       string
	Pump                               *figure
}

// firstInWay begins what stands in the way; the page says it itself.
const firstInWay = "First in the way: "

func linkOf(l *source.Link) *linkSection {
	if l == nil {
		return nil
	}
	s := &linkSection{Title: l.Title, Sentence: typeset(sentence(l.Sentence)), RestsOn: typeset(sentence(l.RestsOn)), InTheWay: typeset(sentence(strings.TrimPrefix(l.InTheWay, firstInWay))), Facts: linkFacts(l)}
	if len(l.Replaced) > 0 {
		s.Replaced = &table{ID: "replaced", Caption: "What the measurement replaces in the scenario", Head: []string{"Entry", "Now"}, Words: []bool{true}, Stack: true, Entries: true}
		for _, c := range l.Replaced {
			s.Replaced.add(c.Entry, plainNumber(c.Value))
		}
	}
	if l.Pump != nil {
		s.PumpSentence, s.Pump = typeset(sentence(l.Pump.Sentence)), pumpFigure(l.Pump, l.NeedBps)
	}
	return s
}

func linkFacts(l *source.Link) table {
	t := table{ID: "link-figures", Caption: "The link as installed", Head: []string{"Figure", "Value"}}
	add := func(name, cell string) { t.add(name, cell) }
	outcome := outcomeWords(l.Outcome)
	if l.Outcome == source.NotTold {
		outcome = "no answer: the file does not tell enough"
	}
	add("Outcome", outcome)
	if l.State != nil {
		switch *l.State {
		case "at_worst":
			add("State that is judged", "the worst that fits what is known")
		case "given":
			add("State that is judged", "the one given")
		}
	}
	if l.UsableRateBps != nil {
		t.Rows = append(t.Rows, row{Head: "Usable key rate", Cells: []string{against(*l.UsableRateBps, l.NeedBps)}, Main: true})
	}
	if l.NeedBps != nil {
		add("Need", bitRate(*l.NeedBps))
	}
	switch {
	case l.MarginDB != nil:
		add("Margin", decibels(*l.MarginDB))
	case l.MarginReason != nil:
		add("Margin", marginWords(l.MarginReason))
	}
	switch {
	case l.ReachKm != nil:
		add("Reach", km(*l.ReachKm))
	case l.ReachReason != nil:
		add("Reach", reachWords(l.ReachReason))
	}
	if l.PairRateHz != nil {
		add("Pairs made in the source", countHz(*l.PairRateHz))
	}
	if l.WindowPs != nil {
		add("Coincidence window", picosec(*l.WindowPs))
	}
	if l.QBER != nil {
		add("QBER, key and check basis", perCent(l.QBER.Key)+slash+perCent(l.QBER.Check))
	}
	return t
}

// pumpFigure draws the key against the pump power.
func pumpFigure(p *source.Pump, need *float64) *figure {
	if len(p.Points) == 0 {
		return nil
	}
	f := &figure{
		ID: "pump", Title: "Key against pump power", Finding: pumpFinding(p),
		Reading: "Within the measured powers; the window is searched at each where the scenario leaves it open. The dot is the best power.",
	}
	if need != nil && *need > 0 {
		f.Reading += " The dashed line is the need of " + bitRate(*need) + "."
	}
	t := table{ID: "pump-data", Caption: "Key at each pump power", Wide: true, Head: []string{"Power, mW", "Pairs, Hz", "Window, ps", "Usable key rate, bit/s"}}
	xs, ys := make([]float64, len(p.Points)), make([]float64, len(p.Points))
	for i, q := range p.Points {
		xs[i], ys[i] = q.PowerMW, q.UsableRateBps
		t.add(digits(q.PowerMW, 4), grouped(q.PairRateHz, 4), digits(q.WindowPs, 4), grouped(q.UsableRateBps, 4))
	}
	f.Tables = []table{t}
	for _, z := range []size{middle, narrow} {
		l := lineDrawing{XName: "pump power, mW", YName: "usable key, bit/s", X: xs, Y: ys, MarkX: p.PowerMW, MarkY: p.UsableRateBps, Level: need}
		f.Drawings = append(f.Drawings, l.draw(f, z))
	}
	return f
}

func pumpFinding(p *source.Pump) string {
	said := "The key is greatest at " + digits(p.PowerMW, 3) + nbsp + "mW: " + bitRate(p.UsableRateBps) + " from " + countHz(p.PairRateHz) + " of pairs"
	switch p.AtEnd {
	case "lower":
		said += "; that is the least power measured, so that less may be better still"
	case "upper":
		said += "; that is the greatest power measured, so that more may be better still"
	}
	if p.UsableRateBps <= 0 {
		said = "No measured power gives a key on this link"
	}
	return said + "."
}

// lineDrawing is one curve with a mark and a level.
type lineDrawing struct {
	XName, YName string
	X, Y         []float64
	MarkX, MarkY float64
	Level        *float64
	FromZero     bool
}

func (l *lineDrawing) draw(f *figure, z size) template.HTML {
	d := &drawing{width: z.Width, height: 300}
	a := &axes{left: yGutter, right: z.Width - 14, top: 28, bottom: d.height - xGutter}
	lo, hi, high := l.X[0], l.X[0], l.MarkY
	for i := range l.X {
		lo, hi, high = min(lo, l.X[i]), max(hi, l.X[i]), max(high, l.Y[i])
	}
	if l.FromZero {
		lo = 0
	}
	a.xLo, a.xHi = span(lo, hi)
	if l.Level != nil {
		high = max(high, *l.Level)
	}
	a.yLo, a.yHi = fromZero(1.04 * high)
	d.text("soft", fromHere, 0, 13, l.YName)
	a.drawY(d, 6)
	xs, ys := make([]float64, len(l.X)), make([]float64, len(l.X))
	for i := range l.X {
		xs[i], ys[i] = a.x(l.X[i]), a.y(l.Y[i])
	}
	if l.Level != nil && *l.Level > 0 {
		d.line("post", a.left, a.y(*l.Level), a.right, a.y(*l.Level))
	}
	d.curve("fit-line", xs, ys)
	d.dot(true, a.x(l.MarkX), a.y(l.MarkY))
	a.drawX(d, tickRoom, l.XName, true)
	return d.done(f.ID, z.Name, f.Title, f.Finding)
}
