package report

import (
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
)

// drawnOption is the part of a chart's options that the tests look at.
type drawnOption struct {
	X, Y   string
	Option struct {
		Color  []string
		Series []drawnSeries
		YAxis  []struct {
			Type     string
			Min, Max float64
		}
	}
}

type drawnSeries struct {
	Name, Type string
	Data       []json.RawMessage
	LineStyle  struct{ Type string }
	MarkLine   struct {
		Data []struct {
			Name         string
			XAxis, YAxis *float64
		}
	}
	MarkPoint struct {
		Data []struct{ Coord [2]float64 }
	}
}

func optionOf(t *testing.T, f *figure) drawnOption {
	t.Helper()
	f.number(1, fakeLibrary)
	var o drawnOption
	if err := json.Unmarshal([]byte(f.Option), &o); err != nil {
		t.Fatalf("%v in %s", err, f.Option)
	}
	return o
}

// value reads the y of a data item: a pair, an object with one, or [x, low, high].
func value(t *testing.T, raw json.RawMessage) (x float64, y *float64) {
	t.Helper()
	var item struct{ Value [2]*float64 }
	if err := json.Unmarshal(raw, &item); err != nil {
		t.Fatal(err)
	}
	return *item.Value[0], item.Value[1]
}

func TestRateChartHoldsThePlan(t *testing.T) {
	p := samplePlan()
	o := optionOf(t, rateFigure(p))
	if o.X != "km" || o.Y != "rate" || o.Option.YAxis[0].Type != "log" || o.Option.Color != nil {
		t.Errorf("formats %s and %s, axis %s, palette %v", o.X, o.Y, o.Option.YAxis[0].Type, o.Option.Color)
	}
	// as filed: at worst, band, nominal, asymptotic, sifted; then the compared; then the straight lines
	if got, want := len(o.Option.Series), 5+len(p.Cases)-1+1; got != want {
		t.Fatalf("%d series, want %d", got, want)
	}
	for i, raw := range o.Option.Series[0].Data {
		_, y := value(t, raw)
		want := p.Cases[0].Curve[i].Bounds.AtWorst.UsableRateBps
		if want == 0 && y != nil || want > 0 && (y == nil || math.Abs(*y-want) > 1e-5*want) {
			t.Fatalf("point %d is %v, want %g", i, y, want)
		}
	}
	lines := o.Option.Series[len(o.Option.Series)-1].MarkLine.Data
	if len(lines) != 2 || *lines[0].YAxis != 256 || *lines[1].XAxis != 6.2 {
		t.Errorf("straight lines %+v", lines)
	}
	if got := o.Option.Series[0].MarkPoint.Data; len(got) != 1 || math.Abs(got[0].Coord[0]-30.8333) > 1e-9 {
		t.Errorf("marks of the key's end %+v", got)
	}
}

// A zero has no logarithm: no series may hand one to the axis.
func TestRateChartNeverDrawsZero(t *testing.T) {
	for name, p := range samplePlans() {
		f := rateFigure(p)
		if f.Nothing != "" {
			if name != "unknown" && name != "zero" && name != "bare" {
				t.Errorf("%s: %s", name, f.Nothing)
			}
			continue
		}
		o := optionOf(t, f)
		for _, s := range o.Option.Series {
			for i, raw := range s.Data {
				var values []*float64
				if s.Type == "custom" {
					if err := json.Unmarshal(raw, &values); err != nil {
						t.Fatal(err)
					}
					values = values[1:]
				} else {
					_, y := value(t, raw)
					values = []*float64{y}
				}
				for _, y := range values {
					if y != nil && !(*y > 0) {
						t.Errorf("%s: %s draws %g at point %d", name, s.Name, *y, i)
					}
				}
			}
		}
		if axis := o.Option.YAxis[0]; !(axis.Min > 0) || !(axis.Max > axis.Min) || axis.Max/axis.Min > 1.01e9 {
			t.Errorf("%s: axis from %g to %g", name, axis.Min, axis.Max)
		}
	}
}

// A key that comes back ends twice; one that never ends has no mark.
func TestEnds(t *testing.T) {
	of := func(ys ...float64) []*float64 {
		ps := make([]*float64, len(ys))
		for i := range ys {
			if ys[i] >= 0 {
				ps[i] = &ys[i]
			}
		}
		return ps
	}
	for _, c := range []struct {
		ys   []*float64
		want []int
	}{
		{of(3, 2, 0, 0), []int{1}},
		{of(3, 0, 2, 0), []int{0, 2}},
		{of(0, 0, 2, 3), nil},
		{of(3, 2, 1), nil},
		{of(3, 2, -1, 0), nil}, // -1 stands for a figure that does not apply
		{nil, nil},
	} {
		got := ends(c.ys)
		if len(got) != len(c.want) {
			t.Errorf("ends %v, want %v", got, c.want)
			continue
		}
		for i := range got {
			if got[i] != c.want[i] {
				t.Errorf("ends %v, want %v", got, c.want)
			}
		}
	}
}

func TestQBERChartHoldsThePlan(t *testing.T) {
	p := samplePlan()
	o := optionOf(t, qberFigure(p))
	if got := len(o.Option.Series); got != 3+1 {
		t.Fatalf("%d series, want both bases of the nominal state, the one line at worst and the straight lines", got)
	}
	_, y := value(t, o.Option.Series[0].Data[0])
	if want := 100 * p.Cases[0].Curve[0].QBER.Key; math.Abs(*y-want) > 1e-5*want {
		t.Errorf("the key basis starts at %g %%, want %g", *y, want)
	}
	if got := *o.Option.Series[3].MarkLine.Data[0].YAxis; math.Abs(got-9.79) > 1e-9 {
		t.Errorf("threshold at %g %%", got)
	}
	if got := o.Option.YAxis[0]; got.Max != 25 {
		t.Errorf("the axis ends at %g %%", got.Max)
	}
}

// Text of a plan may look like the marker that the options library takes for
// code: it must reach the block as the text that it is.
func TestOptionKeepsMarkersAsText(t *testing.T) {
	p := hostilePlan()
	f := rateFigure(p)
	o := optionOf(t, f)
	found := false
	for _, s := range o.Option.Series {
		found = found || s.Name == p.Cases[1].Name
	}
	if !found {
		t.Errorf("no series is named %q", p.Cases[1].Name)
	}
	if strings.ContainsAny(string(f.Option), "<>&") {
		t.Error("the block holds characters that could end it")
	}
}

// No two lines of one chart look the same without their colours, up to twenty
// compared cases; and none with them up to forty.
func TestLooksDiffer(t *testing.T) {
	plain, full := map[look]bool{}, map[look]bool{}
	for i := range 40 {
		l := comparedLook(i)
		if full[l] {
			t.Errorf("case %d looks like an earlier one", i)
		}
		full[l] = true
		l.Colour = 0
		if i < 20 && plain[l] {
			t.Errorf("case %d has an earlier one's dash and symbol", i)
		}
		plain[l] = true
	}
}

func TestDataTableIsThinned(t *testing.T) {
	p := knownPlan()
	c := &p.Cases[0]
	c.Curve = nil
	for i := range 1000 {
		c.Curve = append(c.Curve, samplePoint(float64(i)/25, 31, false))
	}
	f := rateFigure(p)
	// 3000 cells in four columns are 750 rows, so every second of a thousand points.
	if got := len(f.Data.Rows); got != 500 {
		t.Errorf("%d rows of 1000 points, want every second", got)
	}
	if !strings.Contains(f.DataNote, "Every 2nd point") {
		t.Errorf("the page says %q", f.DataNote)
	}
	at := f.drawnPoints()
	if len(at) > maxChartPoints+4 || at[len(at)-1] != 999 {
		t.Errorf("%d points drawn, the last is %d", len(at), at[len(at)-1])
	}
	for _, end := range ends(f.Series[0].Y) {
		if !slices.Contains(at, end) || !slices.Contains(at, end+1) {
			t.Errorf("the end of the key at point %d is not drawn", end)
		}
	}
}

func TestCaptionsStateTheFinding(t *testing.T) {
	sp := func(s string) string { return strings.ReplaceAll(s, "_", nbsp) }
	for name, want := range map[string][2]string{
		"sample": {
			"At 6.2_km the usable rate is 486_bit/s at worst and 790_bit/s at best, against 256_bit/s needed; the need is met at worst up to 15.5_km. The key ends between 30.83 and 31_km.",
			"At 6.2_km the QBER is 2.8_% in the key basis and 3.4_% in the check basis for the nominal state, and 4.1_% in both bases at worst; with f_=_1.16 no key is left where both bases are above 9.8_%.",
		},
		"known":   {"At 6.2_km the usable rate is 608_bit/s; there is key up to 15.5_km.", "At 6.2_km the QBER is 2.8_% in the key basis and 3.4_% in the check basis; with f_=_1.16 no key is left where both bases are above 9.8_%."},
		"unknown": {"Without a state there is no rate; the losses and the counts stand all the same.", "Without a state there is no error rate."},
	} {
		p := samplePlans()[name]
		if got := rateFigure(p).Finding; got != sp(want[0]) {
			t.Errorf("%s: %s\nwant %s", name, got, sp(want[0]))
		}
		if got := qberFigure(p).Finding; got != sp(want[1]) {
			t.Errorf("%s: %s\nwant %s", name, got, sp(want[1]))
		}
	}
}

func TestComparedCasesStandByMargin(t *testing.T) {
	p := samplePlan()
	var got []string
	for _, r := range comparedTable(p).Rows {
		got = append(got, r.Head)
	}
	// beyond the search, 3.0, 2.75, 2.58, -4.2, none
	want := "nanowire-at-both nanowire-at-alice short-window As filed arms.bob.length_km=12.4 measured-run"
	if strings.Join(got, " ") != want {
		t.Errorf("order %q, want %s", got, want)
	}
	if comparedTable(knownPlan()) != nil {
		t.Error("one case is compared with itself")
	}
	p.Cases[1].Answer = plan.Answer{Outcome: plan.StateUnknown}
	if rows := comparedTable(p).Rows; rows[len(rows)-1].Head != "nanowire-at-alice" {
		t.Errorf("a case without an answer stands before %s", rows[len(rows)-1].Head)
	}
}

// A band has no number; names give way to numbers where lines are many.
func TestLineEnds(t *testing.T) {
	p := samplePlan()
	ends := rateFigure(p).lineEnds()
	if ends[0].Text != "1 as filed, at worst" || ends[1].Number != "" || ends[2].Number != "2" {
		t.Errorf("ends %+v", ends[:3])
	}
	for range 10 {
		p.Cases = append(p.Cases, p.Cases[1])
	}
	ends = rateFigure(p).lineEnds()
	if last := ends[len(ends)-1]; last.Text != "" || last.Number != itoa(len(ends)-1) {
		t.Errorf("the last of %d lines ends in %+v", len(ends), last)
	}
}
