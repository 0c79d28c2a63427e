package report

import (
	"cmp"
	"encoding/json"
	"html/template"
	"strconv"

	"github.com/go-echarts/go-echarts/v2/charts"
	"github.com/go-echarts/go-echarts/v2/opts"
	"github.com/go-echarts/go-echarts/v2/types"
)

// cross is the outline of the mark where a key ends.
const cross = "path://M1 0L5 4L9 0L10 1L6 5L10 9L9 10L5 6L1 10L0 9L4 5L0 1Z"

// chartData is what one chart hands to the boot script. Colours are names of
// the style sheet's variables and formats are names from the script's table:
// no text of a plan is ever code.
type chartData struct {
	X      string         `json:"x"` // format of the horizontal axis
	Y      string         `json:"y"`
	Ends   []lineEnd      `json:"ends"` // what stands at the end of each series
	Loss   lossScale      `json:"loss"`
	Option map[string]any `json:"option"`
}

// lineEnd names a line at its end: by its number alone where there is little
// room. A band has neither.
type lineEnd struct {
	Number string `json:"number"`
	Text   string `json:"text"`
}

// lossScale is the second horizontal axis: labels at distances.
type lossScale struct {
	At     []float64 `json:"at"`
	Labels []string  `json:"labels"`
}

// mostNamed is the number of lines up to which names stand at the ends.
const mostNamed = 16

func (f *figure) lineEnds() []lineEnd {
	ends := make([]lineEnd, len(f.Series))
	numbers := f.numbers()
	for i, s := range f.Series {
		ends[i] = lineEnd{Number: numbers[i]}
		if len(f.Series) <= mostNamed && s.Short != "" {
			ends[i].Text = ends[i].Number + " " + s.Short
		}
	}
	return ends
}

func (f *figure) lossScale() lossScale {
	l := lossScale{At: []float64{}, Labels: []string{}}
	for _, t := range f.Loss {
		l.At, l.Labels = append(l.At, roundTo(t.At, 6)), append(l.Labels, t.Label+nbsp+"dB")
	}
	return l
}

// option builds the chart's options as JSON for a data block. The library that
// builds them does not render anything: its own pages would run text as code.
func (f *figure) option() template.JS {
	line := charts.NewLine()
	line.SetGlobalOptions(
		charts.WithAnimation(false),
		charts.WithLegendOpts(opts.Legend{Show: opts.Bool(false), Data: f.names()}),
		charts.WithTooltipOpts(opts.Tooltip{Trigger: "axis", AxisPointer: &opts.AxisPointer{Type: "line"}}),
		charts.WithGridOpts(opts.Grid{Left: "8", Right: "20", Top: "56", Bottom: "28", ContainLabel: opts.Bool(true)}),
		charts.WithXAxisOpts(f.Over.axis(f.xAxis())),
		charts.WithYAxisOpts(f.yAxis()),
	)
	at := f.drawnPoints()
	for i, s := range f.Series {
		line.MultiSeries = append(line.MultiSeries, f.drawn(i, s, at))
	}
	line.MultiSeries = append(line.MultiSeries, f.straightLines())
	line.Validate()
	option := line.JSON()
	for _, unused := range []string{"title", "toolbox", "color"} {
		delete(option, unused)
	}
	js, err := json.Marshal(chartData{X: f.Over.format(), Y: f.YKind, Ends: f.lineEnds(), Loss: f.lossScale(), Option: option})
	if err != nil {
		// Only a figure that is not finite can fail here, and a plan has none;
		// the table under the chart stands in either case.
		return ""
	}
	return template.JS(js)
}

func (f *figure) names() []string {
	names := make([]string, len(f.Series))
	for i, s := range f.Series {
		names[i] = s.Name
	}
	return names
}

func (f *figure) xAxis() opts.XAxis {
	return opts.XAxis{
		Type: "value", Name: f.KmName + ", km", NameLocation: "middle", NameGap: 30, Min: 0, Max: f.KmMax,
		SplitLine: &opts.SplitLine{Show: opts.Bool(false)},
		AxisLine:  &opts.AxisLine{LineStyle: &opts.LineStyle{Color: "--ink-soft"}},
		AxisLabel: &opts.AxisLabel{Color: "--ink-soft", HideOverlap: opts.Bool(true)},
	}
}

func (f *figure) yAxis() opts.YAxis {
	axis := opts.YAxis{
		Type: "value", Name: f.YName, NameGap: 12, Min: f.YMin, Max: f.YMax,
		SplitLine: &opts.SplitLine{LineStyle: &opts.LineStyle{Color: "--rule"}},
		AxisLabel: &opts.AxisLabel{Color: "--ink-soft", HideOverlap: opts.Bool(true)},
	}
	if f.Log {
		axis.Type = "log"
	}
	return axis
}

// drawn turns the i-th series, at the points of the given indices, into a line
// or a band of the chart.
func (f *figure) drawn(i int, s series, at []int) charts.SingleSeries {
	colour := "--line-" + strconv.Itoa(s.Look.Colour)
	if s.Lo != nil {
		return f.band(s, colour, at)
	}
	line := charts.SingleSeries{
		Name: s.Name, Type: types.ChartLine, Color: colour, Data: f.points(i, s, at),
		Symbol: cmp.Or(s.Look.Symbol, "circle"), ShowSymbol: opts.Bool(true), ConnectNulls: opts.Bool(false),
		LineStyle: &opts.LineStyle{Color: colour, Width: s.Look.Width, Type: s.Look.Dash},
		ItemStyle: &opts.ItemStyle{Color: colour},
	}
	if f.Log && s.Ends {
		line.MarkPoints = f.endMarks(s)
	}
	return line
}

// points pairs distances with figures. A figure that the axis cannot show is
// null, and the line ends there. Symbols stand on a few points only, shifted
// from series to series, and on points without a neighbour, which no line shows.
func (f *figure) points(i int, s series, at []int) []opts.LineData {
	data := make([]opts.LineData, len(at))
	every := max(1, len(at)/8)
	shown := func(k int) bool { return k >= 0 && k < len(at) && f.shows(s.Y, at[k]) }
	for k, p := range at {
		x := roundTo(f.Km[p], 6)
		data[k] = opts.LineData{Symbol: "none", Value: [2]any{x, nil}}
		if !shown(k) {
			continue
		}
		data[k].Value = [2]any{x, roundTo(*s.Y[p], 6)}
		alone := !shown(k-1) && !shown(k+1)
		if alone || s.Look.Symbol != "" && (k+1+2*i)%every == 0 {
			data[k].Symbol, data[k].SymbolSize = cmp.Or(s.Look.Symbol, "circle"), 7
		}
	}
	return data
}

// shows reports whether the axis can show point p.
func (f *figure) shows(ys []*float64, p int) bool {
	return p < len(ys) && ys[p] != nil && (!f.Log || positive(ys[p]))
}

// band is drawn by a function of the boot script from [x, low, high]; a low
// edge that the axis cannot show is null and means the foot of the axis.
func (f *figure) band(s series, colour string, at []int) charts.SingleSeries {
	data := make([][3]any, len(at))
	for k, p := range at {
		data[k] = [3]any{roundTo(f.Km[p], 6), nil, nil}
		if f.shows(s.Lo, p) {
			data[k][1] = roundTo(*s.Lo[p], 6)
		}
		if f.shows(s.Y, p) {
			data[k][2] = roundTo(*s.Y[p], 6)
		}
	}
	return charts.SingleSeries{
		Name: s.Name, Type: types.ChartCustom, RenderItem: "band", Data: data, Color: colour,
		Encode: &opts.Encode{X: 0, Y: []int{1, 2}},
	}
}

// endMarks puts a cross where the key of a series ends, on the foot of the
// axis where the last point lies below it.
func (f *figure) endMarks(s series) *opts.MarkPoints {
	marks := &opts.MarkPoints{}
	for _, k := range ends(s.Y) {
		if k >= len(f.Km) {
			continue
		}
		m := opts.MarkPointNameCoordItem{
			Name: "key ends", Symbol: cross, SymbolSize: 11,
			Coordinate: []any{roundTo(f.Km[k], 6), roundTo(max(*s.Y[k], f.YMin), 6)},
			Label:      &opts.Label{Show: opts.Bool(false)},
		}
		marks.Data = append(marks.Data, m)
	}
	if len(marks.Data) == 0 {
		return nil
	}
	return marks
}

// towardsMiddle aligns the label of a post so that the edge does not cut it.
func (f *figure) towardsMiddle(at float64) string {
	switch {
	case at > 0.85*f.KmMax:
		return "right"
	case at < 0.2*f.KmMax:
		return "left"
	}
	return "center"
}

// aboveLoss lifts the label of a post over the scale of the loss.
func (f *figure) aboveLoss() float64 {
	if len(f.Loss) > 0 {
		return 24
	}
	return 5
}

// emptierEnd is where the label of a level is least in the way: rates fall with
// distance, error rates rise.
func (f *figure) emptierEnd() string {
	if f.Log || f.YKind == "number" {
		return "insideEndTop"
	}
	return "insideStartTop"
}

// straightLabel is a label with its distance from the line, in pixels.
type straightLabel struct {
	opts.Label
	Distance float64 `json:"distance"`
}

// straightLines carries the need or the threshold and the installed distance;
// it has no points, no name and no place in the legend.
func (f *figure) straightLines() charts.SingleSeries {
	type straight struct {
		Name      string          `json:"name"`
		XAxis     *float64        `json:"xAxis,omitempty"`
		YAxis     *float64        `json:"yAxis,omitempty"`
		LineStyle *opts.LineStyle `json:"lineStyle"`
		Label     straightLabel   `json:"label"`
	}
	lines := &opts.MarkLines{MarkLineStyle: opts.MarkLineStyle{Symbol: []string{"none", "none"}}}
	add := func(l level, x, y *float64, dash string, label opts.Label, distance float64) {
		label.Show, label.Formatter, label.Color = opts.Bool(true), "{b}", "--ink"
		lines.Data = append(lines.Data, straight{
			Name: l.Label, XAxis: x, YAxis: y,
			LineStyle: &opts.LineStyle{Color: "--ink-soft", Type: dash, Width: 1.4},
			Label:     straightLabel{label, distance},
		})
	}
	for _, l := range f.Levels {
		at := roundTo(l.At, 6)
		add(l, nil, &at, "longdash", opts.Label{Position: f.emptierEnd()}, 4)
	}
	for _, l := range f.Posts {
		at := roundTo(l.At, 6)
		add(l, &at, nil, "solid", opts.Label{Position: "end", Align: f.towardsMiddle(l.At)}, f.aboveLoss())
	}
	return charts.SingleSeries{Type: types.ChartLine, Data: []opts.LineData{}, MarkLines: lines}
}
