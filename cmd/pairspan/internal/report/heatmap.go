package report

import (
	"html/template"
	"math"
	"slices"
	"strconv"
	"strings"

	"pairspan/scenarios/source"
)

// heatMap is figures over the bins of Alice's and Bob's wavelengths. Its scale
// has one ink that grows denser from the least figure to the greatest, so that
// it reads in grey, in print and by those who see colours otherwise.
type heatMap struct {
	ID, Title string
	Unit      string
	EdgeNm    [2][]float64 // around the bins of Alice and Bob, rising
	Cells     []heatCell   // in the order of the bins
	Lo, Hi    float64      // ends of the scale
	Label     func(float64) string
	Bands     []bandOutline
}

// heatCell is the figure of one bin, of Alice's and of Bob's.
type heatCell struct {
	At    [2]int
	Value float64
}

// bandOutline is a pair of pass bands on a map, Alice's and Bob's.
type bandOutline struct {
	Label string
	Nm    [2]*source.PassBand
}

// drawable reports whether there are edges to draw bins between.
func (m *heatMap) drawable() bool {
	for _, c := range m.Cells {
		if c.At[0]+1 >= len(m.EdgeNm[0]) || c.At[1]+1 >= len(m.EdgeNm[1]) {
			return false
		}
	}
	return len(m.Cells) > 0
}

// inkSteps is how many densities the scale has.
const inkSteps = 24

// Measures of a map; it has one size, which fits a phone.
const (
	mapWidth   = 328.0
	mapGutter  = 62.0
	mapTop     = 12.0
	mapFoot    = 42.0
	scaleThick = 10.0
	scaleRoom  = 40.0
	leastInk   = 0.06 // of a cell that has a figure
)

// density is how dense the ink of a figure is, 0 to 1, in steps.
func (m *heatMap) density(v float64) float64 {
	share := 1.0
	if m.Hi > m.Lo {
		share = between((v - m.Lo) / (m.Hi - m.Lo))
	}
	return leastInk + (1-leastInk)*math.Round(share*inkSteps)/inkSteps
}

// draw makes the map: Alice's wavelength to the right, Bob's upwards, both in
// true proportion within each axis.
func (m *heatMap) draw(finding string) template.HTML {
	d := &drawing{width: mapWidth}
	side := mapWidth - mapGutter - 10
	a := &axes{left: mapGutter, right: mapGutter + side, top: mapTop, bottom: mapTop + side}
	a.xLo, a.xHi = span(m.EdgeNm[0][0], m.EdgeNm[0][len(m.EdgeNm[0])-1])
	a.yLo, a.yHi = span(m.EdgeNm[1][0], m.EdgeNm[1][len(m.EdgeNm[1])-1])
	d.element("rect", "map-ground", "x", a.left, "y", a.top, "width", side, "height", side)
	m.drawCells(d, a)
	d.element("rect", "map-frame", "x", a.left, "y", a.top, "width", side, "height", side)
	m.drawBands(d, a)
	m.drawScales(d, a)
	d.height = a.bottom + mapFoot + scaleRoom
	return d.done(m.ID, "any", m.Title, finding)
}

// drawCells draws the bins, those of one density as one path.
func (m *heatMap) drawCells(d *drawing, a *axes) {
	byDensity := map[float64]*strings.Builder{}
	for _, c := range m.Cells {
		ink := m.density(c.Value)
		b := byDensity[ink]
		if b == nil {
			b = &strings.Builder{}
			byDensity[ink] = b
		}
		x1, x2 := a.x(m.edge(0, c.At[0])), a.x(m.edge(0, c.At[0]+1))
		y1, y2 := a.y(m.edge(1, c.At[1]+1)), a.y(m.edge(1, c.At[1]))
		b.WriteString("M" + pixels(x1) + " " + pixels(y1) + "H" + pixels(x2) + "V" + pixels(y2) + "H" + pixels(x1) + "Z")
	}
	var inks []float64
	for ink := range byDensity {
		inks = append(inks, ink)
	}
	slices.Sort(inks)
	for _, ink := range inks {
		d.element("path", "ink-cell", "fill-opacity", opacity(ink), "d", byDensity[ink].String())
	}
}

// edge is an edge of a bin; a single bin, whose width the map does not tell,
// fills the axis.
func (m *heatMap) edge(arm, i int) float64 {
	edges := m.EdgeNm[arm]
	lo, hi := span(edges[0], edges[len(edges)-1])
	if i == 0 {
		return lo
	}
	if i == len(edges)-1 {
		return hi
	}
	return edges[i]
}

func opacity(v float64) string { return strconv.FormatFloat(v, 'f', 3, 64) }

// drawBands outlines pass bands, in a line of two tones that is seen on any ink.
func (m *heatMap) drawBands(d *drawing, a *axes) {
	for _, b := range m.Bands {
		x1, x2, y1, y2 := a.left, a.right, a.top, a.bottom
		if p := b.Nm[0]; p.FromNm != nil && p.ToNm != nil {
			x1, x2 = a.x(*p.FromNm), a.x(*p.ToNm)
		}
		if p := b.Nm[1]; p.FromNm != nil && p.ToNm != nil {
			y1, y2 = a.y(*p.ToNm), a.y(*p.FromNm)
		}
		for _, class := range []string{"band-under", "band-line"} {
			d.element("rect", class, "x", x1, "y", y1, "width", x2-x1, "height", y2-y1)
		}
		switch {
		case y1-5 > a.top+13:
			d.text("strong halo", fromHere, min(x1, a.right-wordWidth(b.Label)), y1-5, b.Label)
		case y2+15 < a.bottom:
			d.text("strong halo", fromHere, min(x1, a.right-wordWidth(b.Label)), y2+15, b.Label)
		default:
			d.text("strong halo", fromHere, min(x1+5, a.right-wordWidth(b.Label)), y1+15, b.Label)
		}
	}
}

// drawScales draws both axes and the scale of the ink.
func (m *heatMap) drawScales(d *drawing, a *axes) {
	step := niceStep(a.xHi-a.xLo, 4)
	for _, v := range multiples(a.xLo, a.xHi, step) {
		d.line("edge", a.x(v), a.bottom, a.x(v), a.bottom+4)
		d.text("soft", centred, a.x(v), a.bottom+17, digits(v, 7))
	}
	step = niceStep(a.yHi-a.yLo, 5)
	for _, v := range multiples(a.yLo, a.yHi, step) {
		d.line("edge", a.left-4, a.y(v), a.left, a.y(v))
		d.text("soft", upToHere, a.left-6, a.y(v)+4.5, digits(v, 7))
	}
	d.text("soft", centred, (a.left+a.right)/2, a.bottom+33, "Alice’s wavelength, nm")
	d.b.WriteString(`<g transform="rotate(-90 11 ` + pixels((a.top+a.bottom)/2) + `)">`)
	d.text("soft", centred, 11, (a.top+a.bottom)/2, "Bob’s wavelength, nm")
	d.b.WriteString("</g>")
	top := a.bottom + mapFoot + 2
	width := (a.right - a.left) / (inkSteps + 1)
	d.element("rect", "map-ground", "x", a.left, "y", top, "width", a.right-a.left, "height", scaleThick)
	for k := range inkSteps + 1 {
		v := m.Lo + (m.Hi-m.Lo)*float64(k)/inkSteps
		x := a.left + width*float64(k)
		d.element("path", "ink-cell", "fill-opacity", opacity(m.density(v)), "d",
			"M"+pixels(x)+" "+pixels(top)+"H"+pixels(x+width)+"V"+pixels(top+scaleThick)+"H"+pixels(x)+"Z")
	}
	d.element("rect", "map-frame", "x", a.left, "y", top, "width", a.right-a.left, "height", scaleThick)
	d.text("soft", fromHere, a.left, top+scaleThick+15, m.Label(m.Lo))
	d.text("soft", upToHere, a.right, top+scaleThick+15, m.Label(m.Hi))
	d.text("soft", centred, (a.left+a.right)/2, top+scaleThick+15, m.Unit)
}
