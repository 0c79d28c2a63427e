package report

import (
	"encoding/xml"
	"math"
	"strconv"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
)

// shape is an element of a drawing.
type shape struct {
	Name, Class, Text, Anchor string
	X, Y, X1, X2, Width       float64
}

// shapesOf reads a drawing back.
func shapesOf(t *testing.T, drawing string) []shape {
	t.Helper()
	var out []shape
	d := xml.NewDecoder(strings.NewReader(drawing))
	for {
		token, _ := d.Token()
		switch e := token.(type) {
		case nil:
			if len(out) == 0 {
				t.Fatalf("no shapes in %.200s", drawing)
			}
			return out
		case xml.StartElement:
			s := shape{Name: e.Name.Local}
			for _, a := range e.Attr {
				v, _ := strconv.ParseFloat(a.Value, 64)
				switch a.Name.Local {
				case "class":
					s.Class = a.Value
				case "text-anchor":
					s.Anchor = a.Value
				case "x":
					s.X = v
				case "y":
					s.Y = v
				case "x1":
					s.X1 = v
				case "x2":
					s.X2 = v
				case "width":
					s.Width = v
				}
			}
			out = append(out, s)
		case xml.CharData:
			if n := len(out); n > 0 {
				out[n-1].Text += string(e)
			}
		}
	}
}

// answered is the sample with one answer changed.
func answered(change func(*plan.Case)) *plan.Plan {
	p := samplePlan()
	change(&p.Cases[0])
	return p
}

func noMembers(c *plan.Case) { c.Answer.Nominal, c.Answer.AtBest = nil, nil }

// The ruler of every answer says what the plan says, and nothing of it leaves
// the picture at any size.
func TestRulerOfEveryAnswer(t *testing.T) {
	sp := func(s string) string { return strings.ReplaceAll(s, "_", nbsp) }
	for name, c := range map[string]struct {
		change  func(*plan.Case)
		says    []string // texts across a wide screen
		bands   int
		bracket bool
		finding string
	}{
		"met": {
			func(*plan.Case) {},
			[]string{"need met to 15.5_km", "15.4_km", "17.2_km", "2.6_dB to spare, or 9.3_km more fibre", "installed 6.2_km, 13.0_dB"},
			3, true,
			"The need of 256_bit/s is met at worst up to 15.5_km, nominally up to 15.4_km, at best up to 17.2_km. Installed are 6.2_km: 2.6_dB to spare.",
		},
		"not met": {
			func(c *plan.Case) { c.Answer.MarginDB, c.Answer.ReachKm = ptr(-1.25), ptr(2.0); noMembers(c) },
			[]string{"need met to 2_km", "1.2_dB must go, or 4.2_km of fibre"},
			1, true,
			"The need of 256_bit/s is met up to 2_km. Installed are 6.2_km: 1.2_dB must go.",
		},
		"not at 0 km": {
			func(c *plan.Case) {
				c.Answer.MarginDB, c.Answer.ReachKm, c.Answer.ReachReason = ptr(-3.0), nil, ptr("not_at_zero_km")
				noMembers(c)
			},
			[]string{"not even at 0_km", "3.0_dB must go"},
			0, false,
			"The need of 256_bit/s is met at no length. Installed are 6.2_km: 3.0_dB must go.",
		},
		"no loss helps": {
			func(c *plan.Case) {
				c.Answer.MarginDB, c.Answer.MarginReason = nil, ptr("no_loss_helps")
				c.Answer.ReachKm, c.Answer.ReachReason = nil, ptr("not_at_zero_km")
			},
			[]string{"not even at 0_km", "no loss that could go is enough", "15.4_km"},
			2, false,
			"The need of 256_bit/s is met at worst at no length, nominally up to 15.4_km, at best up to 17.2_km. Installed are 6.2_km: no loss that could go is enough.",
		},
		"beyond the search": {
			func(c *plan.Case) {
				c.Answer.MarginDB, c.Answer.MarginReason = nil, ptr("beyond_search")
				c.Answer.ReachKm, c.Answer.ReachReason = nil, ptr("beyond_search")
				noMembers(c)
			},
			[]string{"need met to beyond 2000_km", "more than 300_dB to spare"},
			1, true,
			"The need of 256_bit/s is met beyond 2000_km. Installed are 6.2_km: more than 300_dB to spare.",
		},
		"no need": {
			func(c *plan.Case) { c.Answer.NeedBps = nil; noMembers(c) },
			[]string{"key to 15.5_km", "2.6_dB to spare, or 9.3_km more fibre"},
			1, true,
			"There is key up to 15.5_km. Installed are 6.2_km: 2.6_dB to spare.",
		},
		"installed at 0 km": {
			func(c *plan.Case) { c.Installed.DistanceKm = 0; c.Installed.LossDB = plan.PerArm{}; noMembers(c) },
			[]string{"installed 0_km", "2.6_dB to spare, or 15.5_km more fibre"},
			1, true,
			"The need of 256_bit/s is met up to 15.5_km. Installed are 0_km: 2.6_dB to spare.",
		},
		"just met": {
			func(c *plan.Case) { c.Answer.MarginDB, c.Answer.ReachKm = ptr(0.0), ptr(6.2); noMembers(c) },
			[]string{"6.2_km", "0_dB to spare"},
			1, true,
			"The need of 256_bit/s is met up to 6.2_km. Installed are 6.2_km: 0_dB to spare.",
		},
		"state unknown": {
			func(c *plan.Case) { c.Answer = plan.Answer{Outcome: plan.StateUnknown, NeedBps: ptr(256.0)} },
			[]string{"installed 6.2_km, 13.0_dB"},
			0, false,
			"At 6.2_km the losses are known; how far the link reaches depends on the state of the pairs, which is not.",
		},
	} {
		f := rulerFigure(answered(c.change))
		if f.Finding != sp(c.finding) {
			t.Errorf("%s: %s\nwant %s", name, f.Finding, sp(c.finding))
		}
		if len(f.Drawings) != 3 {
			t.Fatalf("%s: %d drawings", name, len(f.Drawings))
		}
		var said []string
		bands, brackets := 0, 0
		for _, s := range shapesOf(t, string(f.Drawings[0])) {
			if s.Name == "text" {
				said = append(said, s.Text)
			}
			if s.Name == "rect" && strings.HasPrefix(s.Class, "band-") {
				bands++
			}
			if s.Class == "bracket" {
				brackets++
			}
		}
		for _, want := range c.says {
			if !strings.Contains("|"+strings.Join(said, "|")+"|", "|"+sp(want)+"|") {
				t.Errorf("%s: no text %q among %q", name, want, said)
			}
		}
		if bands != c.bands || (brackets > 0) != c.bracket {
			t.Errorf("%s: %d bands and %d lines of a bracket", name, bands, brackets)
		}
		for i, d := range f.Drawings {
			insideDrawing(t, name+", "+[]size{across, middle, narrow}[i].Name, string(d))
		}
	}
}

// insideDrawing checks that no text, at its estimated width, leaves the picture.
func insideDrawing(t *testing.T, name, drawing string) {
	t.Helper()
	all := shapesOf(t, drawing)
	width := all[0].Width
	for _, s := range all[1:] {
		if s.Name != "text" {
			continue
		}
		from := map[string]float64{fromHere: 0, centred: 0.5, upToHere: 1}[s.Anchor]
		long := wordWidth(s.Text)
		if strings.Contains(s.Class, "strong") {
			long = boldWidth(s.Text)
		}
		left, right := s.X-from*long, s.X+(1-from)*long
		if left < -2 || right > width+2 {
			t.Errorf("%s: %q reaches from %.0f to %.0f of %.0f", name, s.Text, left, right, width)
		}
	}
}

// Derived: lengths on the ruler are in proportion, and marks of the loss
// stand where the curve has that loss, here a straight line.
func TestRulerIsToScale(t *testing.T) {
	c := &samplePlan().Cases[0]
	f := rulerFigure(samplePlan())
	var zero, worst, best, pole float64
	labels := map[string]float64{}
	for _, s := range shapesOf(t, string(f.Drawings[0])) {
		switch {
		case s.Class == "band-worst":
			zero, worst = s.X, s.Width
		case s.Class == "band-best":
			best = s.Width
		case s.Class == "pole":
			pole = s.X1
		case s.Name == "text" && s.Anchor == centred:
			labels[s.Text+"@"+strconv.FormatFloat(s.Y, 'f', 0, 64)] = s.X
		}
	}
	if got, want := worst/best, *c.Answer.ReachKm/17.2; math.Abs(got-want) > 1e-3 {
		t.Errorf("bands are as %g, reaches as %g", got, want)
	}
	perKm := worst / *c.Answer.ReachKm
	if got, want := pole-zero, 6.2*perKm; math.Abs(got-want) > 0.1 {
		t.Errorf("the flag stands at %g, want %g", got, want)
	}
	found := 0
	for db := 12.0; db < 17; db++ {
		for label, at := range labels {
			text, row, _ := strings.Cut(label, "@")
			if y, _ := strconv.ParseFloat(row, 64); text != digits(db, 3) || y < 150 { // the lower row
				continue
			}
			found++
			// the sample loses 11.3 dB at 0 km and 0.275 dB more in each
			if want := zero + (db-11.3)/0.275*perKm; math.Abs(at-want) > 0.2 {
				t.Errorf("%g dB stand at %g, want %g", db, at, want)
			}
		}
	}
	if found < 4 {
		t.Errorf("only %d marks of the loss found among %v", found, labels)
	}
}

// A stretch that begins beyond 0 km is drawn from where the curve meets the need.
func TestBandBeginsWhereTheNeedIsMet(t *testing.T) {
	c := &samplePlan().Cases[0]
	c.Curve = nil
	for i, rate := range []float64{10, 20, 300, 400, 300, 200} {
		p := samplePoint(float64(i), 31, false)
		p.UsableRateBps = ptr(rate)
		c.Curve = append(c.Curve, p)
	}
	noMembers(c)
	c.Answer.ReachKm = ptr(4.4)
	if got := reachBands(c)[0].From; got != 2 {
		t.Errorf("the band begins at %g km, want 2", got)
	}
	c.Answer.ReachKm = ptr(0.5) // the grid cannot tell
	if got := reachBands(c)[0].From; got != 0 {
		t.Errorf("the band begins at %g km, want 0", got)
	}
}
