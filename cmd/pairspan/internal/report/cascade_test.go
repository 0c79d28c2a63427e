package report

import (
	"math"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
)

// Derived: each step begins where the one before ended, widths are in
// proportion to the items, and the last step ends at the total.
func TestLossStaircase(t *testing.T) {
	p := samplePlan()
	p.Cases[0].Installed.LossDB = plan.PerArm{Alice: 4.8, Bob: 7.705} // the sums of the sample's items
	f := lossFigure(p)
	if len(f.Drawings) != 2 || len(f.Tables) != 2 {
		t.Fatalf("%d drawings, %d tables", len(f.Drawings), len(f.Tables))
	}
	for i, d := range f.Drawings {
		var steps, wholes []shape
		for _, s := range shapesOf(t, string(d)) {
			switch s.Class {
			case "step":
				steps = append(steps, s)
			case "whole":
				wholes = append(wholes, s)
			}
		}
		if len(steps) != 5 || len(wholes) != 2 {
			t.Fatalf("%d steps, %d sums", len(steps), len(wholes))
		}
		perDB := wholes[1].Width / 7.705
		at := wholes[1].X
		for k, loss := range []float64{1.705, 1.8, 4.2} {
			s := steps[2+k]
			if math.Abs(s.X-at) > 0.2 || math.Abs(s.Width-loss*perDB) > 0.2 {
				t.Errorf("drawing %d: step %d from %g, %g wide; want from %g, %g wide", i, k, s.X, s.Width, at, loss*perDB)
			}
			at += loss * perDB
		}
		insideDrawing(t, "losses", string(d))
	}
	var sums []string
	for _, r := range f.Tables[1].Rows {
		sums = append(sums, r.Cells[1])
	}
	if got := strings.Join(sums, " "); got != "1.71 3.50 7.71 7.71" {
		t.Errorf("running total %s", got)
	}
	want := "Alice’s arm loses 4.8" + nbsp + "dB, most by “coupling, filters, analyser” (4.2" + nbsp + "dB); Bob’s arm loses 7.7" + nbsp + "dB, most by “coupling, filters, analyser” (4.2" + nbsp + "dB)."
	if f.Finding != want {
		t.Errorf("finding %s\nwant %s", f.Finding, want)
	}
}

func TestErrorWaterfall(t *testing.T) {
	f := errorsFigure(samplePlan())
	labels := strings.Join(textsOf(t, string(f.Drawings[0])), "|")
	for _, want := range []string{"Pair state|2.1", "Alignment and PMD|0.46", "Outside light|0|", "All together, nominal state|2.8", "Key basis at worst|4.1", "Key basis at best|0.9", "no key above 9.8" + nbsp + "% in both bases"} {
		if !strings.Contains(labels, want) {
			t.Errorf("no %q in %s", want, labels)
		}
	}
	want := strings.ReplaceAll("Of the 2.8_% QBER of the key basis in the nominal state, 2.1_% is from pair state and 0.46_% from alignment and PMD; at worst the QBER is 4.1_%.", "_", nbsp)
	if f.Finding != want {
		t.Errorf("finding %s\nwant %s", f.Finding, want)
	}
	for _, d := range f.Drawings {
		insideDrawing(t, "errors", string(d))
	}
	if known := errorsFigure(knownPlan()); strings.Contains(string(known.Drawings[0]), "at worst") {
		t.Error("a known state has a bar at worst")
	}
	if unknown := errorsFigure(unknownPlan()); unknown.Nothing == "" || unknown.Drawn() {
		t.Error("a waterfall without a state")
	}
}

func textsOf(t *testing.T, drawing string) []string {
	t.Helper()
	var out []string
	for _, s := range shapesOf(t, drawing) {
		if s.Name == "text" {
			out = append(out, s.Text)
		}
	}
	return out
}

// A drawing holds hostile text as text, cut to its column.
func TestDrawingsEscape(t *testing.T) {
	d := string(lossFigure(hostilePlan()).Drawings[0])
	if strings.Contains(d, "<script") || !strings.Contains(d, "&lt;/script&gt;&lt;script&gt;") {
		t.Errorf("hostile text stands as %.400s", d)
	}
	insideDrawing(t, "hostile", d)
}

func TestScales(t *testing.T) {
	for _, c := range []struct {
		span float64
		most int
		want float64
	}{{10, 10, 1}, {10, 9, 2}, {22, 5, 5}, {0.3, 6, 0.05}, {1, 1, 1}, {7, 1, 10}, {0, 5, 1}, {math.NaN(), 5, 1}, {math.Inf(1), 5, 1}} {
		if got := niceStep(c.span, c.most); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("a span of %g in %d steps: %g, want %g", c.span, c.most, got, c.want)
		}
	}
	// A loss of 10 dB and 0.25 dB/km: 11 dB at 4 km, and no mark beyond the end.
	var curve []plan.Point
	for i := range 21 {
		curve = append(curve, plan.Point{DistanceKm: float64(i), LossDB: plan.PerArm{Alice: 4, Bob: 6 + 0.25*float64(i)}})
	}
	for _, tk := range lossTicks(curve, 13, 5) {
		db := number(t, tk.Label)
		if want := (db - 10) / 0.25; math.Abs(tk.At-want) > 1e-9 || tk.At > 13 {
			t.Errorf("%s dB at %g km, want %g", tk.Label, tk.At, want)
		}
	}
	if got := len(lossTicks(curve, 20, 5)); got < 4 {
		t.Errorf("%d marks", got)
	}
	for i := range curve {
		curve[i].LossDB.Bob = 6
	}
	if got := lossTicks(curve, 20, 5); got != nil {
		t.Errorf("marks of a loss that does not grow: %v", got)
	}
}
