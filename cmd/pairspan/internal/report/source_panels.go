package report

import (
	"cmp"
	"html/template"
	"math"
	"slices"
)

// panel is one measured quantity against x, with the fit.
type panel struct {
	Name   string
	Points []panelPoint
	Fit    [][2]float64 // x and y along the fit
}

// panelPoint is one measurement; what is nil is not known.
type panelPoint struct {
	X, Measured  float64
	SD, Residual *float64
}

// Measures of a panel.
const (
	panelHead     = 27.0
	panelHeight   = 132.0
	residualStrip = 40.0
	panelGap      = 16.0
)

// drawPanels draws panels under each other over one horizontal axis, each with
// its residuals below.
func drawPanels(f *figure, z size, xName string, panels []panel) template.HTML {
	d := &drawing{width: z.Width}
	xHigh := 0.0
	for _, p := range panels {
		for _, q := range p.Points {
			xHigh = max(xHigh, q.X)
		}
	}
	y := 0.0
	for i, p := range panels {
		lowest := i == len(panels)-1
		slices.SortStableFunc(p.Points, func(a, b panelPoint) int { return cmp.Compare(a.X, b.X) })
		main := &axes{left: yGutter, right: z.Width - 12, top: y + panelHead, bottom: y + panelHead + panelHeight}
		main.xLo, main.xHi = fromZero(xHigh)
		p.draw(d, main)
		strip := *main
		strip.top, strip.bottom = main.bottom+8, main.bottom+8+residualStrip
		p.drawResiduals(d, &strip)
		strip.drawX(d, tickRoom, xName, lowest)
		y = strip.bottom + panelGap
	}
	d.height = y + xGutter - panelGap + 4
	return d.done(f.ID, z.Name, f.Title, f.Finding)
}

// draw draws the measurements with their errors over the fit.
func (p *panel) draw(d *drawing, a *axes) {
	high := 0.0
	for _, q := range p.Points {
		high = max(high, q.Measured)
		if q.SD != nil {
			high = max(high, q.Measured+*q.SD)
		}
		a.yLo = min(a.yLo, q.Measured)
	}
	for _, q := range p.Fit {
		high = max(high, q[1])
	}
	low := a.yLo
	_, a.yHi = fromZero(high)
	a.yLo = low
	d.text("strong", fromHere, 0, a.top-13, p.Name)
	a.drawY(d, 4)
	d.line("edge", a.left, a.bottom, a.right, a.bottom)
	xs, ys := make([]float64, len(p.Fit)), make([]float64, len(p.Fit))
	for i, q := range p.Fit {
		xs[i], ys[i] = a.x(q[0]), a.y(q[1])
	}
	d.curve("fit-line", xs, ys)
	for _, q := range p.Points {
		if q.SD != nil {
			whisker(d, a.x(q.X), a.y(q.Measured-*q.SD), a.x(q.X), a.y(q.Measured+*q.SD))
		}
		d.element("circle", "dot", "cx", a.x(q.X), "cy", a.y(q.Measured), "r", 3.4)
	}
}

// drawResiduals draws measured less fitted in standard deviations, with a bar
// of one.
func (p *panel) drawResiduals(d *drawing, a *axes) {
	off := 3.0
	for _, q := range p.Points {
		off = max(off, math.Ceil(away(q.Residual)+1))
	}
	a.yLo, a.yHi = -off, off
	d.element("rect", "shade", "x", a.left, "y", a.y(2), "width", a.right-a.left, "height", a.y(-2)-a.y(2))
	d.line("thin", a.left, a.y(0), a.right, a.y(0))
	d.text("soft", upToHere, a.left-6, a.y(0)-2, "residual, σ")
	d.text("soft", upToHere, a.left-6, a.y(0)+13, "−"+digits(off, 3)+" to "+digits(off, 3))
	for _, q := range p.Points {
		if q.Residual != nil {
			d.line("whisker", a.x(q.X), a.y(*q.Residual-1), a.x(q.X), a.y(*q.Residual+1))
			d.element("circle", "dot", "cx", a.x(q.X), "cy", a.y(*q.Residual), "r", 2.6)
		}
	}
}
