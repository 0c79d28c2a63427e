package report

import (
	"html"
	"html/template"
	"math"

	"pairspan/scenarios/source"
)

// matrixEntry is one entry of a density matrix: its number, and two bars.
type matrixEntry struct {
	Re, Im string // Im is "" where it rounds to nothing
	Bars   template.HTML
}

// matrixRow is a row of the matrix under the name of its state.
type matrixRow struct {
	Head  string
	Cells []matrixEntry
}

// productStates names rows and columns.
var productStates = [4]string{"HH", "HV", "VH", "VV"}

// matrixRows sets a density matrix as a table; full is what a whole bar is worth.
func matrixRows(m *[4][4]source.Complex) (rows []matrixRow, full float64) {
	most := 0.0
	for _, row := range m {
		for _, x := range row {
			most = max(most, math.Abs(x.Re), math.Abs(x.Im))
		}
	}
	const step = 0.25
	full = max(step, step*math.Ceil(roundTo(most, 6)/step))
	for i, row := range m {
		r := matrixRow{Head: productStates[i]}
		for _, x := range row {
			r.Cells = append(r.Cells, cellOf(x, full))
		}
		rows = append(rows, r)
	}
	return rows, full
}

func cellOf(x source.Complex, full float64) matrixEntry {
	const places = 3
	c := matrixEntry{Re: decimals(x.Re, places), Bars: twoBars(x, full)}
	if im := decimals(math.Abs(x.Im), places); im != "0.000" {
		sign := "+"
		if x.Im < 0 {
			sign = "−"
		}
		c.Im = sign + nbsp + im + "i"
	}
	return c
}

// Measures of the two bars of a cell.
const (
	barsWidth  = 64.0
	barsHeight = 17.0
	barThick   = 6.0
)

// twoBars draws the real part above the imaginary part, from a middle line to
// the right where positive and to the left where negative.
func twoBars(x source.Complex, full float64) template.HTML {
	d := &drawing{}
	const middle = barsWidth / 2
	bar := func(class string, v, y float64) {
		if end := middle + v/full*(middle-1); math.Abs(end-middle) >= 0.25 {
			d.element("rect", class, "x", min(middle, end), "y", y, "width", math.Abs(end-middle), "height", barThick)
		}
	}
	bar("bar-re", x.Re, 1.5)
	bar("bar-im", x.Im, 2.5+barThick)
	d.line("bar-middle", middle, 0, middle, barsHeight)
	said := "real part " + decimals(x.Re, 3) + ", imaginary part " + decimals(x.Im, 3)
	return template.HTML(`<svg class="bars" role="img" aria-label="` + html.EscapeString(said) + `" width="` + pixels(barsWidth) + `" height="` + pixels(barsHeight) +
		`" viewBox="0 0 ` + pixels(barsWidth) + " " + pixels(barsHeight) + `">` + d.b.String() + `</svg>`)
}
