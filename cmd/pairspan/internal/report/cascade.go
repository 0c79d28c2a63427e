package report

import "html/template"

// cascade is a staircase of bars: each begins where the one before ended.
type cascade struct {
	Title  string
	Unit   string
	Groups []cascadeGroup
	Max    float64 // right end of the scale
	Post   *level  // a line across all bars
}

// cascadeGroup is one staircase under its own heading.
type cascadeGroup struct {
	Heading string
	Rows    []cascadeRow
}

// cascadeRow is one step, or a sum that stands on the ground.
type cascadeRow struct {
	Label, Value, Sum string // Sum: the running total in words
	From, To          float64
	Total             bool
}

// stair adds a step of such a height to the rows.
func (g *cascadeGroup) stair(label string, height float64, text func(float64) string) {
	from := 0.0
	if n := len(g.Rows); n > 0 {
		from = g.Rows[n-1].To
	}
	g.Rows = append(g.Rows, cascadeRow{Label: label, Value: text(height), Sum: text(from + height), From: from, To: from + height})
}

// total adds a sum.
func (g *cascadeGroup) total(label string, height float64, text func(float64) string) {
	g.Rows = append(g.Rows, cascadeRow{Label: label, Value: text(height), To: height, Total: true})
}

// Measures of a cascade. On a narrow page a label stands above its bar.
const (
	rowPitch     = 22.0
	barHeight    = 12.0
	headPitch    = 26.0
	scaleHeight  = 40.0
	labelColumn  = 262.0
	valueColumn  = 62.0
	narrowPitch  = 36.0
	cascadeSteps = 8
)

// columns are where the parts of a cascade stand at one width.
type cascadeColumns struct {
	left, right      float64 // of the bars
	value, sum       float64 // right edges of the figures
	label            float64 // room for a label
	pitch, bar, text float64 // of a row: height, top of the bar, baseline
}

func cascadeAt(s size, running bool) cascadeColumns {
	figures := valueColumn // room at the right
	if running {
		figures *= 2
	}
	c := cascadeColumns{value: s.Width - valueColumn, sum: s.Width, text: 13}
	if s != narrow {
		c.left, c.right, c.label, c.pitch, c.bar = labelColumn, s.Width-figures-12, labelColumn-10, rowPitch, 3
		return c
	}
	c.left, c.right, c.label, c.pitch, c.bar = 1, s.Width-valueColumn, s.Width-figures-6, narrowPitch, 18
	if running {
		c.right = s.Width - 8
	}
	return c
}

// draw makes the cascade at one size; running says that sums have a column.
func (c *cascade) draw(id string, s size, running bool, finding string) template.HTML {
	d := &drawing{width: s.Width}
	col := cascadeAt(s, running)
	x := func(v float64) float64 { return col.left + (col.right-col.left)*min(1, max(0, v/c.Max)) }
	y := 0.0
	for i, g := range c.Groups {
		if g.Heading != "" {
			d.text("strong", fromHere, 0, y+13, g.Heading)
		}
		if i == 0 && running {
			d.text("soft", upToHere, col.value, y+13, "loss, "+c.Unit)
			d.text("soft", upToHere, col.sum, y+13, "so far")
		} else if i == 0 {
			d.text("soft", upToHere, col.sum, y+13, "QBER, "+c.Unit)
		}
		y += headPitch
		for k, row := range g.Rows {
			c.drawRow(d, col, x, y, row, running)
			if k+1 < len(g.Rows) && !g.Rows[k+1].Total {
				d.line("riser", x(row.To), y+col.bar+barHeight, x(row.To), y+col.pitch+col.bar)
			}
			y += col.pitch
		}
		y += 10
	}
	c.drawScale(d, col, x, y)
	d.height = y + scaleHeight
	return d.done(id, s.Name, c.Title, c.inWords()+finding)
}

func (c *cascade) drawRow(d *drawing, col cascadeColumns, x func(float64) float64, y float64, row cascadeRow, running bool) {
	class, bar := "ink halo", "step"
	if row.Total {
		class, bar = "strong halo", "whole"
	}
	d.text(class, fromHere, 0, y+col.text, fitting(row.Label, col.label))
	d.rect(bar, x(row.From), y+col.bar, x(row.To), barHeight)
	if running && row.Total {
		d.text(class, upToHere, col.sum, y+col.text, row.Value)
		return
	}
	at := col.sum
	if running {
		at = col.value
		d.text("soft halo", upToHere, col.sum, y+col.text, row.Sum)
	}
	d.text(class, upToHere, at, y+col.text, row.Value)
}

// drawScale draws the axis under all bars, and the post through them.
func (c *cascade) drawScale(d *drawing, col cascadeColumns, x func(float64) float64, y float64) {
	d.line("edge", x(0), y, x(c.Max), y)
	step := niceStep(c.Max, min(cascadeSteps, int((col.right-col.left)/36)))
	for _, v := range multiples(0, c.Max, step) {
		d.line("edge", x(v), y, x(v), y+5)
		label := digits(v, 3)
		if v == 0 {
			label = "0" + nbsp + c.Unit
		}
		if v == 0 {
			d.text("soft", fromHere, x(v), y+18, label)
		} else if x(v)+wordWidth(label)/2 <= d.width {
			d.text("soft", centred, x(v), y+18, label)
		}
	}
	if c.Post == nil || c.Post.At > c.Max {
		return
	}
	at := x(c.Post.At)
	d.line("post", at, 0, at, y+22)
	if at < d.width/2 {
		d.text("ink", fromHere, at-4, y+34, c.Post.Label)
	} else {
		d.text("ink", upToHere, at+4, y+34, c.Post.Label)
	}
}

func (c *cascade) inWords() string {
	s := ""
	for _, g := range c.Groups {
		if g.Heading != "" {
			s += g.Heading + ": "
		}
		for _, r := range g.Rows {
			s += r.Label + " " + r.Value + nbsp + c.Unit + "; "
		}
	}
	return s
}
