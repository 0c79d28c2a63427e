package report

import "math"

// axes is a rectangle of a drawing with a linear scale each way.
type axes struct {
	left, right, top, bottom float64 // pixels
	xLo, xHi, yLo, yHi       float64 // values at the edges
}

func (a *axes) x(v float64) float64 {
	return a.left + (a.right-a.left)*between((v-a.xLo)/(a.xHi-a.xLo))
}

func (a *axes) y(v float64) float64 {
	return a.bottom - (a.bottom-a.top)*between((v-a.yLo)/(a.yHi-a.yLo))
}

// between keeps what lies outside the scale at its edge.
func between(share float64) float64 { return min(1, max(0, share)) }

// span widens a range without width.
func span(lo, hi float64) (float64, float64) {
	if !(hi > lo) {
		pad := math.Max(1e-9, math.Abs(lo)/100)
		return lo - pad, hi + pad
	}
	return lo, hi
}

// fromZero is the range of a scale from zero that holds all values.
func fromZero(high float64) (lo, hi float64) {
	if !(high > 0) {
		return 0, 1
	}
	return 0, 1.04 * high
}

// Room around the rectangle.
const (
	yGutter  = 76.0 // for the labels at the left
	xGutter  = 40.0 // for labels and name below
	tickRoom = 62.0 // for one label below
)

// drawY draws the horizontal lines and their labels.
func (a *axes) drawY(d *drawing, most int) {
	step := niceStep(a.yHi-a.yLo, most)
	for _, v := range multiples(a.yLo, a.yHi, step) {
		d.line("grid", a.left, a.y(v), a.right, a.y(v))
		d.text("soft", upToHere, a.left-6, a.y(v)+4.5, grouped(tidy(v, step), 4))
	}
}

// drawX draws the edge below with marks at least room apart; labels and name
// stand there where it is the lowest.
func (a *axes) drawX(d *drawing, room float64, name string, lowest bool) {
	d.line("edge", a.left, a.bottom, a.right, a.bottom)
	step := niceStep(a.xHi-a.xLo, max(2, int((a.right-a.left)/room)))
	for _, v := range multiples(a.xLo, a.xHi, step) {
		d.line("edge", a.x(v), a.bottom, a.x(v), a.bottom+4)
		if lowest {
			d.text("soft", centred, a.x(v), a.bottom+17, grouped(tidy(v, step), 6))
		}
	}
	if lowest {
		d.text("soft", centred, (a.left+a.right)/2, a.bottom+34, name)
	}
}

// tidy makes a multiple that rounding left beside zero zero.
func tidy(v, step float64) float64 {
	if math.Abs(v) < step/1e6 {
		return 0
	}
	return v
}

// curve joins points, given in pixels.
func (d *drawing) curve(class string, xs, ys []float64) {
	if len(xs) < 2 {
		return
	}
	parts := make([]any, 0, 3*len(xs))
	for i := range xs {
		command := "L"
		if i == 0 {
			command = "M"
		}
		parts = append(parts, command, xs[i], ys[i])
	}
	d.path(class, parts...)
}
