package report

import (
	"html/template"
	"strings"
)

// Measures of the ruler, from the top.
const (
	rulerGutter  = 66.0 // for the names at the left
	rulerMargin  = 22.0 // at the right
	flagTop      = 3.0
	bracketAt    = 40.0
	bandsTop     = 50.0
	bandPitch    = 20.0
	bandHeight   = 13.0
	rulerBody    = 46.0 // height of the ruler itself
	rulerGap     = 7.0  // between bands and ruler
	leastSpacing = 46.0 // between labels of a scale
)

// draw makes the ruler at one size.
func (r *ruler) draw(s size, finding string) template.HTML {
	d := &drawing{width: s.Width}
	x := func(km float64) float64 {
		return rulerGutter + (s.Width-rulerGutter-rulerMargin)*min(1, max(0, km/r.End))
	}
	top := bandsTop + bandPitch*float64(len(r.Bands)) + rulerGap
	d.height = top + rulerBody + 2
	r.drawBands(d, x)
	r.drawBody(d, x, top)
	r.drawFlag(d, x, top)
	r.nameBands(d, x) // above the pole
	r.drawMargin(d, x)
	return d.done("ruler", s.Name, "Ruler of fibre length: how far the need is met, and what is installed", r.inWords()+finding)
}

func (r *ruler) drawBands(d *drawing, x func(float64) float64) {
	for i, b := range r.Bands {
		y := bandsTop + bandPitch*float64(i)
		switch {
		case b.None:
		case b.Open:
			d.rect(b.Class, x(b.From), y, x(r.End), bandHeight)
			d.path(b.Class, "M", x(r.End), y-2, "L", x(r.End)+10, y+bandHeight/2, "L", x(r.End), y+bandHeight+2, "Z")
		default:
			d.rect(b.Class, x(b.From), y, x(b.To), bandHeight)
		}
	}
}

func (r *ruler) nameBands(d *drawing, x func(float64) float64) {
	for i, b := range r.Bands {
		y := bandsTop + bandPitch*float64(i) + 11
		d.text("soft", fromHere, 0, y, b.Name)
		note := b.Until + b.Note
		if x(b.To)+6+wordWidth(note) > d.width {
			note = b.Note
		}
		switch {
		case b.None:
			d.text("ink halo", fromHere, x(0)+6, y, note)
		case b.Open:
			d.text("ink halo", upToHere, x(r.End)-6, y, note)
		case x(b.To)+6+wordWidth(note) <= d.width:
			d.text("ink halo", fromHere, x(b.To)+6, y, note)
		default:
			d.text("ink halo", upToHere, x(b.To)-5, y, note)
		}
	}
}

// drawBody draws the ruler with both of its scales.
func (r *ruler) drawBody(d *drawing, x func(float64) float64, top float64) {
	bottom := top + rulerBody
	d.rect("ruler", x(0), top, x(r.End), rulerBody)
	room := int((x(r.End) - x(0)) / leastSpacing)
	marks := kmTicks(r.End, room)
	for i, t := range marks {
		d.line("edge", x(t.At), top, x(t.At), top+8)
		if i == 0 {
			d.text("ink", fromHere, x(t.At)+3, top+20, t.Label)
		} else {
			d.text("ink", centred, x(t.At), top+20, t.Label)
			for k := 1; k < 5; k++ {
				at := marks[i-1].At + (t.At-marks[i-1].At)*float64(k)/5
				d.line("edge", x(at), top, x(at), top+4)
			}
		}
	}
	d.text("soft", fromHere, 0, top+19, "fibre"+nbsp+"km")
	if r.Least == "" {
		return
	}
	d.text("soft", fromHere, 0, bottom-10, "loss"+nbsp+"dB")
	free := x(0) + wordWidth(r.Least)/2 + 20
	d.line("edge", x(0), bottom-8, x(0), bottom)
	d.text("ink", fromHere, x(0)+3, bottom-10, strings.TrimSuffix(r.Least, nbsp+"dB"))
	for _, t := range r.Loss {
		if t.At > r.End {
			break
		}
		d.line("edge", x(t.At), bottom-7, x(t.At), bottom)
		if at := x(t.At); at-wordWidth(t.Label)/2 > free {
			d.text("ink", centred, at, bottom-10, t.Label)
			free = at + wordWidth(t.Label)/2 + 10
		}
	}
}

// drawFlag plants the flag at the installed length.
func (r *ruler) drawFlag(d *drawing, x func(float64) float64, top float64) {
	at := x(r.Installed)
	d.line("pole", at, flagTop, at, top+8)
	for _, said := range []string{r.Flag + r.FlagLoss, r.Flag} {
		width := 16 + boldWidth(said)
		switch {
		case at+width <= d.width:
			d.path("flag", "M", at, flagTop, "L", at+12, flagTop+5, "L", at, flagTop+10, "Z")
			d.text("strong", fromHere, at+16, flagTop+10, said)
			return
		case at-width >= 0:
			d.path("flag", "M", at, flagTop, "L", at-12, flagTop+5, "L", at, flagTop+10, "Z")
			d.text("strong", upToHere, at-16, flagTop+10, said)
			return
		}
	}
}

// drawMargin brackets what lies between the flag and the reach at worst, and
// finds a place for what it says.
func (r *ruler) drawMargin(d *drawing, x func(float64) float64) {
	if r.Margin == "" {
		return
	}
	from, to := x(r.Installed), x(r.Installed)
	if r.Bracket {
		from, to = x(r.From), x(r.To)
		d.line("bracket", from, bracketAt, to, bracketAt)
		d.line("bracket", from, bracketAt-5, from, bracketAt+5)
		if r.Open {
			d.path("bracket", "M", to-6, bracketAt-4, "L", to, bracketAt, "L", to-6, bracketAt+4)
		} else {
			d.line("bracket", to, bracketAt-5, to, bracketAt+5)
		}
	}
	for _, said := range []string{r.Margin + r.Length, r.Margin} {
		if r.place(d, said, from, to) {
			return
		}
	}
	half := boldWidth(r.Margin) / 2
	d.text("strong halo", centred, max(half, min((from+to)/2, d.width-half)), bracketAt-8, r.Margin)
}

// place writes the margin over its bracket or beside it, where there is room.
func (r *ruler) place(d *drawing, said string, from, to float64) bool {
	width := boldWidth(said)
	switch {
	case width+8 <= to-from:
		d.text("strong", centred, (from+to)/2, bracketAt-8, said)
	case to+8+width <= d.width:
		d.text("strong", fromHere, to+8, bracketAt+4, said)
	case from-8-width >= 0:
		d.text("strong", upToHere, from-8, bracketAt+4, said)
	default:
		return false
	}
	return true
}

// inWords describes the picture to those who do not see it.
func (r *ruler) inWords() string {
	var b strings.Builder
	b.WriteString("A ruler from 0 to " + km(r.End) + " with a flag: " + r.Flag + r.FlagLoss + ". ")
	for _, band := range r.Bands {
		b.WriteString("Band " + band.Name + ": " + band.Until + band.Note + ". ")
	}
	if r.Margin != "" {
		b.WriteString("A bracket between the flag and the end of the first band: " + r.Margin + r.Length + ". ")
	}
	return b.String()
}
