package report

import (
	"html/template"
	"math"

	"pairspan/scenarios/source"
)

// frontierFigure shows how key and tangle trade from the widest to the
// narrowest pass bands; nil where there is nothing to compare.
func frontierFigure(m *source.SpectralMap) *figure {
	if len(m.ByWidth) < 2 {
		return nil
	}
	f := &figure{
		ID: "frontier", Title: "Key, tangle and pairs against the width of the pass bands", Finding: frontierFinding(m),
		Reading: "At each width, in bins of both bands together, the pair of pass bands that gives most key. Filled dots: the best of all.",
	}
	t := table{ID: "frontier-data", Caption: "The best pass bands of each width", Wide: true, Head: bandHead("Bins of both bands"), Words: []bool{true, true}}
	for i := range m.ByWidth {
		b := &m.ByWidth[i]
		t.Rows = append(t.Rows, row{Head: itoa(binsOf(b)), Cells: bandCells(b), Main: bestOfAll(m, b)})
	}
	f.Tables = []table{t}
	for _, z := range []size{middle, narrow} {
		f.Drawings = append(f.Drawings, drawFrontier(m, f, z))
	}
	return f
}

// binsOf counts the bins of both bands.
func binsOf(b *source.SpectralBand) int { return b.Alice.Bins + b.Bob.Bins }

func bestOfAll(m *source.SpectralMap, b *source.SpectralBand) bool {
	same := func(x, y *source.PassBand) bool { return x.FirstBin == y.FirstBin && x.Bins == y.Bins }
	return m.Best != nil && same(&b.Alice, &m.Best.Alice) && same(&b.Bob, &m.Best.Bob)
}

// frontierFinding says what the best bands win and cost.
func frontierFinding(m *source.SpectralMap) string {
	whole, best := &m.Whole, m.Best
	if best == nil {
		return "No pair of pass bands of any width gives a key on this link."
	}
	if best.Share == whole.Share && binsOf(best) == binsOf(whole) {
		return "No narrower pass bands give more key than the whole map" + keyOf(best, ": ") + "."
	}
	said := "The best pass bands pass " + share(best.Share) + " of the pairs"
	if from, to := tangleOf(whole), tangleOf(best); from != nil && to != nil {
		said += ", change the tangle from " + decimals(*from, 3) + " to " + decimals(*to, 3)
	}
	if best.OnLink != nil && whole.OnLink != nil {
		said += " and the key from " + bitRate(whole.OnLink.UsableRateBps) + keyOf(best, " to ")
	}
	return said + "."
}

func keyOf(b *source.SpectralBand, before string) string {
	if b.OnLink == nil {
		return ""
	}
	return before + bitRate(b.OnLink.UsableRateBps)
}

// tangleOf is the tangle, or the most that it can be.
func tangleOf(b *source.SpectralBand) *float64 {
	if b.Tangle != nil {
		return b.Tangle
	}
	return b.TangleAtMost
}

// frontierLine is one quantity over the widths.
type frontierLine struct {
	name     string
	of       func(*source.SpectralBand) *float64
	most     float64 // of the scale; 0 for what the points need
	anyLeast bool    // the scale need not begin at zero
}

func frontierLines(m *source.SpectralMap) []frontierLine {
	tangle := "tangle"
	if m.Known == source.Bounded {
		tangle = "tangle, at most"
	}
	return []frontierLine{
		{name: "usable key, bit/s", of: func(b *source.SpectralBand) *float64 {
			if b.OnLink == nil {
				return nil
			}
			return &b.OnLink.UsableRateBps
		}},
		{name: tangle, of: tangleOf, most: 1, anyLeast: true},
		{name: "share of the pairs", of: func(b *source.SpectralBand) *float64 { return &b.Share }, most: 1},
	}
}

// drawFrontier draws the quantities under each other over one axis.
func drawFrontier(m *source.SpectralMap, f *figure, z size) template.HTML {
	d := &drawing{width: z.Width}
	y, widest := 0.0, 0
	for i := range m.ByWidth {
		widest = max(widest, binsOf(&m.ByWidth[i]))
	}
	lines := frontierLines(m)
	for i, l := range lines {
		a := &axes{left: yGutter, right: z.Width - 12, top: y + panelHead, bottom: y + panelHead + panelHeight}
		a.xLo, a.xHi = 1.5, float64(widest)+0.5
		drawFrontierLine(m, d, a, l)
		a.drawX(d, 34, "bins of both bands together", i == len(lines)-1)
		y = a.bottom + panelGap
	}
	d.height = y - panelGap + xGutter
	return d.done(f.ID, z.Name, f.Title, f.Finding)
}

func drawFrontierLine(m *source.SpectralMap, d *drawing, a *axes, l frontierLine) {
	low, high := math.Inf(1), l.most
	for i := range m.ByWidth {
		if y := l.of(&m.ByWidth[i]); y != nil {
			low, high = min(low, *y), max(high, *y)
		}
	}
	a.yLo, a.yHi = fromZero(high)
	if l.anyLeast && low < high {
		step := niceStep(high-low, 4)
		a.yLo = max(0, step*math.Floor(low/step))
	}
	d.text("strong", fromHere, 0, a.top-13, l.name)
	a.drawY(d, 4)
	var xs, ys []float64
	for i := range m.ByWidth {
		b := &m.ByWidth[i]
		if y := l.of(b); y != nil {
			xs, ys = append(xs, a.x(float64(binsOf(b)))), append(ys, a.y(*y))
		}
	}
	d.curve("fit-line", xs, ys)
	for i := range xs {
		d.element("circle", "dot-open", "cx", xs[i], "cy", ys[i], "r", 2.8)
	}
	if m.Best == nil {
		return
	}
	if y := l.of(m.Best); y != nil {
		d.dot(true, a.x(float64(binsOf(m.Best))), a.y(*y))
	}
}
