package report

import (
	"html/template"
	"math"
)

// bar is one row of a picture of bars from a common zero, to the right or left.
type bar struct {
	Label string
	At    float64
	Value string
}

// drawBars draws the bars at the widths of the page.
func (f *figure) drawBars(bars []bar, unit string) {
	lo, hi := 0.0, 0.0
	for _, b := range bars {
		lo, hi = math.Min(lo, b.At), math.Max(hi, b.At)
	}
	if !(hi > lo) {
		f.Nothing = "There is nothing to draw: every figure is zero."
		return
	}
	for _, s := range []size{middle, narrow} {
		f.Drawings = append(f.Drawings, barsAt(f, bars, unit, lo, hi, s))
	}
}

func barsAt(f *figure, bars []bar, unit string, lo, hi float64, s size) template.HTML {
	d := &drawing{width: s.Width}
	col := cascadeAt(s, false)
	x := func(v float64) float64 { return col.left + (col.right-col.left)*(v-lo)/(hi-lo) }
	words, y := "", 4.0
	for _, b := range bars {
		d.text("ink halo", fromHere, 0, y+col.text, fitting(b.Label, col.label))
		if b.At < 0 {
			d.rect("step", x(b.At), y+col.bar, x(0), barHeight)
		} else {
			d.rect("whole", x(0), y+col.bar, x(b.At), barHeight)
		}
		d.text("ink halo", upToHere, s.Width, y+col.text, b.Value)
		d.line("edge", x(0), y+col.bar-3, x(0), y+col.bar+barHeight+3)
		words += b.Label + " " + b.Value + nbsp + unit + "; "
		y += col.pitch
	}
	d.line("edge", x(lo), y, x(hi), y)
	step := niceStep(hi-lo, min(cascadeSteps, int((col.right-col.left)/44)))
	for _, v := range multiples(lo, hi, step) {
		label := digits(v, 3)
		if math.Abs(v) < step/2 {
			label = "0" + nbsp + unit
		}
		d.line("edge", x(v), y, x(v), y+5)
		half := wordWidth(label) / 2
		d.text("soft", centred, math.Max(half, math.Min(x(v), s.Width-half)), y+18, label)
	}
	d.height = y + 24
	return d.done(f.ID, s.Name, f.Title, words+f.Finding)
}
