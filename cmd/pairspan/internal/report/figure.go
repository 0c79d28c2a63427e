package report

import (
	"html/template"
	"math"
	"strconv"
)

// figure is one numbered chart: what it says, how to read it, its points and
// the table of the same points.
type figure struct {
	ID      string
	Number  int
	Title   string
	Finding string // the caption: what the figures say
	Reading string // how to read the chart
	Nothing string // why there is nothing to draw; "" where there is

	KmName string    // what the distance is
	Km     []float64 // common distances of all series
	KmMax  float64
	Over   *otherAxis // nil: distance
	YName  string
	YKind  string // "rate", "percent" or "number": the formats of the boot script
	Log    bool
	YMin   float64
	YMax   float64
	Series []series
	Levels []level // horizontal lines
	Posts  []level // vertical lines

	Loss []tick // the second scale: distances at which the total loss is round

	Data     table
	DataNote string          // where the table holds a selection
	Tables   []table         // the data of a drawing that needs several
	Drawings []template.HTML // drawn by the program itself, one for each width
	Option   template.JS     // for the script of the charts; empty without the library
}

// Drawn reports whether the figure is drawn without the library.
func (f *figure) Drawn() bool { return len(f.Drawings) > 0 }

// HasData reports whether tables stand behind the figure.
func (f *figure) HasData() bool { return len(f.Data.Rows) > 0 || len(f.Tables) > 0 }

// level is a straight line at one value of an axis.
type level struct {
	At    float64
	Label string
}

// These keep a page small and quick to write however many points and cases a
// plan has; the full curves are in curve.csv.
const (
	maxTableCells  = 3000
	minTableRows   = 61
	maxChartPoints = 500
)

// tableStep is the stride that fits a table of columns into maxTableCells.
func tableStep(points, columns int) int {
	rows := max(minTableRows, maxTableCells/max(1, columns))
	return max(1, (points+rows-1)/rows)
}

// dataTable lists the points of all series, evenly thinned where they are many.
func (f *figure) dataTable(caption, unit string, cell func(float64) string) {
	t := table{ID: f.ID + "-data", Caption: caption, Wide: true, Head: []string{f.KmName + ", km"}}
	for _, s := range f.Series {
		t.Head = append(t.Head, s.Name+", "+unit)
	}
	step := tableStep(len(f.Km), len(t.Head))
	for i := 0; i < len(f.Km); i += step {
		cells := make([]string, len(f.Series))
		for j, s := range f.Series {
			cells[j] = none
			if i < len(s.Y) {
				cells[j] = orNone(s.Y[i], cell)
			}
		}
		t.add(digits(f.Km[i], 4), cells...)
	}
	f.Data, f.DataNote = t, thinned(step)
}

// thinned says that a table holds a selection.
func thinned(step int) string {
	if step < 2 {
		return ""
	}
	return "Every " + ordinal(step) + " point; curve.csv has them all."
}

func ordinal(n int) string {
	switch {
	case n%100/10 == 1:
	case n%10 == 1:
		return strconv.Itoa(n) + "st"
	case n%10 == 2:
		return strconv.Itoa(n) + "nd"
	case n%10 == 3:
		return strconv.Itoa(n) + "rd"
	}
	return strconv.Itoa(n) + "th"
}

// drawnPoints returns the indices that a chart draws: all of a usual curve, an
// even choice from a long one, and in any case its end and where keys end.
func (f *figure) drawnPoints() []int {
	step := (len(f.Km) + maxChartPoints - 1) / maxChartPoints
	keep := make([]bool, len(f.Km))
	for i := range keep {
		keep[i] = i%step == 0 || i == len(keep)-1
	}
	for _, s := range f.Series {
		for _, i := range ends(s.Y) {
			if i+1 < len(keep) {
				keep[i], keep[i+1] = true, true
			}
		}
	}
	var at []int
	for i, k := range keep {
		if k {
			at = append(at, i)
		}
	}
	return at
}

// logRange sets a logarithmic axis in whole decades: nine at most below the
// highest point, so that the last points before the key ends, which fall
// without limit, do not flatten the rest. It reports whether any point can be
// drawn at all.
func (f *figure) logRange() bool {
	low, high := math.Inf(1), 0.0
	see := func(y *float64) {
		if positive(y) {
			low, high = math.Min(low, *y), math.Max(high, *y)
		}
	}
	for _, s := range f.Series {
		for _, y := range s.Y {
			see(y)
		}
	}
	if high == 0 {
		return false
	}
	for i := range f.Levels {
		see(&f.Levels[i].At)
	}
	f.YMax = decade(high, math.Ceil)
	f.YMin = math.Max(decade(low, math.Floor), f.YMax/1e9)
	if f.YMin >= f.YMax {
		f.YMin = f.YMax / 10
	}
	return true
}

// decade rounds y to a power of ten.
func decade(y float64, round func(float64) float64) float64 {
	return math.Pow(10, round(math.Log10(y)))
}

// number puts the chart on the page as the n-th figure.
func (f *figure) number(n int, lib library) {
	f.Number = n
	if f.Nothing == "" && len(f.Series) > 0 && lib.Script != "" {
		f.Option = f.option()
	}
}

// numbers counts the lines; the number of a line stands in the legend and at
// its end. A band has an edge that is drawn as a line of its own, and none.
func (f *figure) numbers() []string {
	out := make([]string, len(f.Series))
	n := 0
	for i, s := range f.Series {
		if s.Lo == nil {
			n++
			out[i] = itoa(n)
		}
	}
	return out
}

// Legend lists the series as the legend draws them.
func (f *figure) Legend() []legendItem {
	items := make([]legendItem, len(f.Series))
	numbers := f.numbers()
	for i, s := range f.Series {
		items[i] = legendItem{Name: s.Name, Number: numbers[i], Colour: "line-" + strconv.Itoa(s.Look.Colour), Band: s.Lo != nil, Symbol: s.Look.Symbol, Width: s.Look.Width}
		for _, d := range dashes {
			if d.Name == s.Look.Dash {
				items[i].Dash = d.Pattern
			}
		}
	}
	return items
}

// legendItem is one entry of the legend; Colour is a class of the style sheet.
type legendItem struct {
	Name, Number, Colour, Dash, Symbol string
	Width                              float32
	Band                               bool
}
