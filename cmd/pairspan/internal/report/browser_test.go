package report

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"

	"pairspan/scenarios/plan"
)

// strokes lists the drawn lines of a chart by their number of points: paths
// without a fill, longer than an axis or a grid line.
const strokes = `[...document.querySelectorAll("#figure-%s .chart svg path[fill=none], #figure-%s .chart svg polyline")]
	.filter(p => (p.getAttribute("d") || p.getAttribute("points") || "").length > 200)
	.map(p => (p.getAttribute("d") || p.getAttribute("points")).match(/-?[\d.]+(e-?\d+)?[ ,]+-?[\d.]+(e-?\d+)?/g).length).sort((a, b) => a - b)`

func drawnLines(b *tab, id string) []int {
	b.t.Helper()
	return ask[[]int](b, fmt.Sprintf(strokes, id, id))
}

// pointsOf counts what each line of a figure should draw, fewest first.
func pointsOf(t *testing.T, f *figure) []int {
	t.Helper()
	var counts []int
	for _, s := range optionOf(t, f).Option.Series {
		n := 0
		for _, raw := range s.Data {
			var item struct{ Value [2]*float64 }
			if s.Type == "line" && json.Unmarshal(raw, &item) == nil && item.Value[1] != nil {
				n++
			}
		}
		if n > 0 {
			counts = append(counts, n)
		}
	}
	slices.Sort(counts)
	return counts
}

func TestBrowserDrawsCharts(t *testing.T) {
	b := sampleTab(t)
	p := samplePlan()
	for id, want := range map[string][]int{"rate": pointsOf(t, rateFigure(p)), "qber": pointsOf(t, qberFigure(p))} {
		got := drawnLines(b, id)
		if !slices.Equal(got, want) {
			t.Errorf("figure %s draws lines of %v points, want %v", id, got, want)
		}
	}
	// The widest run of the band covers all of the curve: to-and-fro over 241 points.
	points := ask[int](b, `Math.max(0, ...[...document.querySelectorAll("#figure-rate .chart svg path[fill-opacity], #figure-rate .chart svg polygon")]
		.map(p => (p.getAttribute("d") || p.getAttribute("points") || "").split(/[\sL]+/).length))`)
	if points < 200 {
		t.Errorf("the band has %d points", points)
	}
	for id, texts := range map[string][]string{
		"rate": {
			"need 256_bit/s", "installed 6.2_km", "10_000", "Bob’s fibre, km", "16_dB",
			"1 as filed, at worst", "2 nominal", "3 secret", "4 sifted", "5 nanowire-at-alice", "9 arms.bob.length_km=12…",
		},
		"qber": {"no key above 9.8_% in both (f_=_1.16)", "installed 6.2_km", "1 key, nominal", "2 check, nominal", "3 both, at worst"},
	} {
		text := ask[string](b, `document.querySelector("#figure-`+id+` .chart").textContent`)
		for _, want := range texts {
			if want = strings.ReplaceAll(want, "_", nbsp); !strings.Contains(strings.ReplaceAll(text, "_", nbsp), want) {
				t.Errorf("chart %s lacks %q: %s", id, want, text)
			}
		}
	}
	b.quiet()
}

// A mark stands where each key ends: as filed and in the compared cases whose
// curve reaches a zero.
func TestBrowserMarksTheEndOfTheKey(t *testing.T) {
	b := sampleTab(t)
	want := 0
	for _, s := range rateFigure(samplePlan()).Series {
		if s.Ends {
			want += len(ends(s.Y))
		}
	}
	if want < 2 {
		t.Fatalf("the sample has %d ends", want)
	}
	// The cross is the only closed outline of twelve corners.
	got := ask[int](b, `[...document.querySelectorAll("#figure-rate .chart svg path")].filter(p => ((p.getAttribute("d") || "").match(/L/g) || []).length === 11 && /Z\s*$/.test(p.getAttribute("d"))).length`)
	if got != want {
		t.Errorf("%d crosses, want %d", got, want)
	}
	b.quiet()
}

// Names at the ends of lines keep apart from one another and inside the chart.
func TestBrowserNamesAtTheEndsAreApart(t *testing.T) {
	b := demoTab(t)
	for _, width := range []int64{1280, 360} {
		b.do(chromedp.EmulateViewport(width, 800))
		b.until(fmt.Sprintf(`document.querySelector("#figure-rate .chart svg").getAttribute("width") < %d`, width))
		b.settle()
		boxes := ask[[][]float64](b, `(() => {
			const chart = document.querySelector("#figure-rate .chart").getBoundingClientRect();
			return [...document.querySelectorAll("#figure-rate .chart svg text")].map(t => [t, t.getBoundingClientRect()])
				.filter(([t, r]) => r.left > chart.left + 0.55 * chart.width && /^\d+( |$)/.test(t.textContent) && r.top > chart.top + 70 && r.bottom < chart.bottom - 25 && t.getAttribute("stroke"))
				.map(([, r]) => [r.left, r.top, r.right, r.bottom, chart.right]);
		})()`)
		if want := len(rateFigure(demoPlan(t)).Series) - 1; len(boxes) < want-2 || len(boxes) > want {
			t.Errorf("at %d: %d names found for %d lines", width, len(boxes), want)
		}
		for i, a := range boxes {
			if a[2] > a[4]+1 {
				t.Errorf("at %d: a name ends at %g, the chart at %g", width, a[2], a[4])
			}
			for _, z := range boxes[i+1:] {
				const touch = 3 // boxes of type are a little higher than its letters
				if a[0] < z[2] && z[0] < a[2] && a[1] < z[3]-touch && z[1] < a[3]-touch {
					t.Errorf("at %d: names at %v and %v overlap", width, a, z)
				}
			}
		}
	}
	b.quiet()
}

func TestBrowserLegendHidesALine(t *testing.T) {
	b := sampleTab(t)
	click := func() int {
		ask[bool](b, `document.querySelector("#figure-rate button[data-series=short-window]").click(), true`)
		b.settle()
		return len(drawnLines(b, "rate"))
	}
	before := len(drawnLines(b, "rate"))
	if after := click(); after != before-1 {
		t.Errorf("%d lines after hiding one of %d", after, before)
	}
	if named := ask[bool](b, `document.querySelector("#figure-rate .chart").textContent.includes("8 short-window")`); named {
		t.Error("the hidden line keeps its name")
	}
	if after := click(); after != before {
		t.Errorf("%d lines after showing it again, want %d", after, before)
	}
	b.quiet()
}

func TestBrowserTooltipHasUnits(t *testing.T) {
	lib := needCharts(t)
	b := open(t, hostilePlan(), lib, view{width: 1280, height: 2400})
	box := ask[[]float64](b, `(r => [r.left + 0.3 * r.width, r.top + 0.5 * r.height])((document.querySelector("#figure-rate .chart").scrollIntoView(), document.querySelector("#figure-rate .chart").getBoundingClientRect()))`)
	b.do(chromedp.MouseEvent("mouseMoved", box[0], box[1]))
	b.until(`document.querySelector("#figure-rate .tip")?.textContent`)
	text := ask[string](b, `document.querySelector("#figure-rate .tip")?.textContent ?? ""`)
	for _, want := range []string{"\u00a0km", "bit/s", hostile + " 3"} {
		if !strings.Contains(text, want) {
			t.Errorf("the tooltip lacks %q: %q", want, text)
		}
	}
	b.quiet()
}

// Nothing from a file may run: not in the page, not in a chart or a drawing,
// not on the way from one to the other.
func TestBrowserShowsHostileTextAsText(t *testing.T) {
	lib := needCharts(t)
	b := open(t, hostilePlan(), lib, desktop)
	if ran := ask[bool](b, `"x" in window`); ran {
		t.Error("text of the plan ran as script")
	}
	if got := ask[string](b, `document.title`); got != hostile {
		t.Errorf("the title reads %q", got)
	}
	shown := ask[int](b, `document.body.textContent.split("<img src=x onerror").length - 1`)
	if shown < 50 {
		t.Errorf("hostile text is shown %d times only", shown)
	}
	if n := ask[int](b, `document.images.length + document.scripts.length`); n != 5 {
		t.Errorf("%d images and scripts, want two blocks of data and three scripts", n)
	}
	for id, f := range map[string]*figure{"rate": rateFigure(hostilePlan()), "qber": qberFigure(hostilePlan())} {
		if got, want := len(drawnLines(b, id)), len(pointsOf(t, f)); got != want {
			t.Errorf("figure %s has %d lines, want %d", id, got, want)
		}
	}
	b.quiet()
}

// The policy must hold if the page's own escaping ever fails.
func TestBrowserPolicyStopsForeignScript(t *testing.T) {
	lib := needCharts(t)
	b := open(t, samplePlan(), lib, desktop)
	ran := ask[bool](b, `(() => {
		const s = document.createElement("script");
		s.textContent = "window.x = 1";
		document.body.append(s);
		document.body.insertAdjacentHTML("beforeend", "<img src=data:, onerror='window.x=1'>");
		return new Promise(done => setTimeout(() => done("x" in window), 100));
	})()`)
	if ran {
		t.Error("the policy let a script run that the page does not hold")
	}
}

// A program built without the library writes tables in place of charts; what
// it draws itself stays, and can be saved.
func TestBrowserWithoutCharts(t *testing.T) {
	needBrowser(t)
	for _, name := range []string{"sample", "zero", "unknown"} {
		b := open(t, samplePlans()[name], library{}, desktop)
		if n := ask[int](b, `document.scripts.length`); n != 1 {
			t.Errorf("%s: %d scripts without the library", name, n)
		}
		if n := ask[int](b, `document.querySelectorAll("figure > .save").length`); n < 1 {
			t.Errorf("%s: no drawing can be saved", name)
		}
		if name == "sample" {
			if n := ask[int](b, `document.querySelectorAll("#rate-data tbody tr").length`); n != 241 {
				t.Errorf("the table of the rates has %d rows", n)
			}
		}
		b.quiet()
	}
}

// Charts of the other samples draw without a complaint, whatever is missing.
func TestBrowserOtherSamples(t *testing.T) {
	lib := needCharts(t)
	for name, p := range map[string]*plan.Plan{"known": knownPlan(), "unknown": unknownPlan(), "zero": zeroPlan(), "bare": barePlan()} {
		b := open(t, p, lib, desktop)
		boxes := ask[int](b, `document.querySelectorAll(".chart").length`)
		if drawn := ask[int](b, `document.querySelectorAll(".chart svg").length`); drawn != boxes {
			t.Errorf("%s: %d of %d charts drawn", name, drawn, boxes)
		}
		b.quiet()
	}
}
