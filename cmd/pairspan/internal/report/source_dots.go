package report

import (
	"html/template"
	"math"
)

// dots is a group of values with their error bars, one a row, on one scale
// from zero.
type dots struct {
	Title string
	Unit  string
	Max   float64 // of the scale; 0 for what the rows need
	Rows  []dotRow
}

// dotRow is one value; SD is 0 where it has no error.
type dotRow struct {
	Label, Value string
	At, SD       float64
	Strong       bool
}

// end returns the end of the scale.
func (g *dots) end() float64 {
	high := g.Max
	for _, r := range g.Rows {
		high = math.Max(high, r.At+r.SD)
	}
	if !(high > 0) {
		return 1
	}
	step := niceStep(high, 5)
	return step * math.Ceil(high/step*(1-1e-9))
}

func (g *dots) table(id, caption, head, value string) table {
	t := table{ID: id, Caption: caption, Head: []string{head, value}}
	for _, r := range g.Rows {
		t.Rows = append(t.Rows, row{Head: r.Label, Cells: []string{r.Value}, Main: r.Strong})
	}
	return t
}

// Measures of rows of dots.
const (
	dotPitch = 24.0
	dotHead  = 24.0
	dotScale = 30.0
	dotSize  = 4.2
	dotLabel = 158.0
)

// drawDots draws groups under each other.
func drawDots(f *figure, z size, groups ...dots) template.HTML {
	d := &drawing{width: z.Width}
	words, y := "", 0.0
	for i := range groups {
		g := &groups[i]
		if len(g.Rows) == 0 {
			continue
		}
		y = g.draw(d, z, y)
		for _, r := range g.Rows {
			words += r.Label + " " + r.Value + "; "
		}
	}
	d.height = y
	return d.done(f.ID, z.Name, f.Title, words+f.Finding)
}

func (g *dots) draw(d *drawing, z size, y float64) float64 {
	valueRoom := 12.0
	for _, r := range g.Rows {
		valueRoom = math.Max(valueRoom, 12+wordWidth(r.Value))
	}
	left, pitch := dotLabel, dotPitch
	if z == narrow {
		left, pitch = 6, 1.55*dotPitch
	}
	right := z.Width - valueRoom - 8
	end := g.end()
	x := func(v float64) float64 { return left + (right-left)*min(1, max(0, v/end)) }
	d.text("soft", fromHere, 0, y+13, g.Title)
	y += dotHead
	foot := y + pitch*float64(len(g.Rows))
	for _, v := range multiples(0, end, niceStep(end, 5)) {
		d.line("grid", x(v), y, x(v), foot)
		d.text("soft", centred, max(x(v), 6), foot+16, digits(v, 3))
	}
	for _, r := range g.Rows {
		class, at := "ink halo", y+pitch/2
		if r.Strong {
			class = "strong halo"
		}
		if z == narrow {
			at = y + pitch - 9
			d.text(class, fromHere, 0, y+14, r.Label)
		} else {
			d.text(class, fromHere, 0, at+4.5, r.Label)
		}
		d.line("thin", x(0), at, x(r.At), at)
		if r.SD > 0 {
			whisker(d, x(r.At-r.SD), at, x(r.At+r.SD), at)
		}
		d.dot(r.Strong, x(r.At), at)
		d.text(class, upToHere, z.Width, at+4.5, r.Value)
		y += pitch
	}
	return foot + dotScale
}

// dot marks a value: filled, or hollow.
func (d *drawing) dot(filled bool, x, y float64) {
	class := "dot-open"
	if filled {
		class = "dot"
	}
	d.element("circle", class, "cx", x, "cy", y, "r", dotSize)
}

// whisker draws an error bar along one axis, with feet.
func whisker(d *drawing, x1, y1, x2, y2 float64) {
	const foot = 3.0
	d.line("whisker", x1, y1, x2, y2)
	if y1 == y2 {
		d.line("whisker", x1, y1-foot, x1, y1+foot)
		d.line("whisker", x2, y2-foot, x2, y2+foot)
		return
	}
	d.line("whisker", x1-foot, y1, x1+foot, y1)
	d.line("whisker", x2-foot, y2, x2+foot, y2)
}
