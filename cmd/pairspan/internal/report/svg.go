package report

import (
	"html"
	"html/template"
	"strconv"
	"strings"
	"unicode/utf8"
)

// drawing is a picture that the program draws itself, in user units that are
// pixels at its own width. Its colours, lines and type are classes of the
// style sheet; every text is escaped.
type drawing struct {
	b             strings.Builder
	width, height float64
}

// textSize is the size of type in a drawing.
const textSize = 13

// wordWidth estimates the width of a text at textSize, on the wide side.
func wordWidth(s string) float64 { return 0.56 * textSize * float64(utf8.RuneCountInString(s)) }

// boldWidth is wordWidth of the heavier type.
func boldWidth(s string) float64 { return 1.1 * wordWidth(s) }

// fitting cuts a text to a width.
func fitting(s string, width float64) string {
	most := int(width / wordWidth("0"))
	if utf8.RuneCountInString(s) <= most {
		return s
	}
	return string([]rune(s)[:max(0, most-1)]) + "…"
}

// pixels writes a coordinate with one decimal.
func pixels(v float64) string {
	s := strconv.FormatFloat(v, 'f', 1, 64)
	if s == "-0.0" {
		s = "0"
	}
	return strings.TrimSuffix(s, ".0")
}

// element writes one empty element; attributes come in pairs.
func (d *drawing) element(name, class string, pairs ...any) {
	d.b.WriteString("<" + name + ` class="` + class + `"`)
	for i := 0; i+1 < len(pairs); i += 2 {
		d.b.WriteString(" " + pairs[i].(string) + `="`)
		switch v := pairs[i+1].(type) {
		case float64:
			d.b.WriteString(pixels(v))
		case string:
			d.b.WriteString(v)
		}
		d.b.WriteString(`"`)
	}
	d.b.WriteString("/>")
}

func (d *drawing) line(class string, x1, y1, x2, y2 float64) {
	d.element("line", class, "x1", x1, "y1", y1, "x2", x2, "y2", y2)
}

// rect is never narrower than a hair, so that what is there is seen.
func (d *drawing) rect(class string, x1, y, x2, height float64) {
	const hair = 1.2
	d.element("rect", class, "x", x1, "y", y, "width", max(hair, x2-x1), "height", height)
}

// path takes commands and coordinates in turn: "M", x, y, "L", x, y, "Z".
func (d *drawing) path(class string, parts ...any) {
	var b strings.Builder
	for _, p := range parts {
		switch v := p.(type) {
		case string:
			b.WriteString(v)
		case float64:
			b.WriteString(pixels(v) + " ")
		}
	}
	d.element("path", class, "d", strings.TrimSpace(b.String()))
}

// Where a text stands to its point.
const (
	fromHere = "start"
	centred  = "middle"
	upToHere = "end"
)

func (d *drawing) text(class, anchor string, x, y float64, s string) {
	d.b.WriteString(`<text class="` + class + `" text-anchor="` + anchor + `" x="` + pixels(x) + `" y="` + pixels(y) + `">` +
		html.EscapeString(s) + "</text>")
}

// done returns the element, with a name and a description for those who do
// not see it. size is the class that shows it at some widths of the page.
func (d *drawing) done(id, size, title, description string) template.HTML {
	id += "-" + size
	return template.HTML(`<svg class="drawing ` + size + `" id="` + id + `" role="img" aria-labelledby="` + id + `-title ` + id + `-desc" width="` +
		pixels(d.width) + `" height="` + pixels(d.height) + `" viewBox="0 0 ` + pixels(d.width) + " " + pixels(d.height) + `">` +
		`<title id="` + id + `-title">` + html.EscapeString(title) + "</title>" +
		`<desc id="` + id + `-desc">` + html.EscapeString(description) + "</desc>" + d.b.String() + "</svg>")
}

// sizes are the widths at which drawings are made: the style sheet shows one
// of them, so that type never shrinks.
type size struct {
	Name  string
	Width float64
}

var (
	across = size{"across", 1088} // all of a wide screen
	middle = size{"middle", 670}  // a tablet, and paper
	narrow = size{"narrow", 320}  // a phone
)
