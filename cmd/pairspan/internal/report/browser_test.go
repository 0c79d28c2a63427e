package report

import (
	"bytes"
	"fmt"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/chromedp"
)

// strokes counts the drawn lines of a chart: paths without a fill, longer than
// an axis's or a grid's single segment.
const strokes = `[...document.querySelectorAll("#figure-%s .chart svg path[fill=none], #figure-%s .chart svg polyline")]
	.filter(p => (p.getAttribute("d") || p.getAttribute("points") || "").length > 200).length`

func TestBrowserDrawsCharts(t *testing.T) {
	lib := needCharts(t)
	p := samplePlan()
	b := open(t, p, lib, desktop)
	for id, want := range map[string]int{
		// at worst, nominal, asymptotic and sifted as filed, and five compared cases
		"rate": 4 + 5,
		// two bases of the nominal state, which are one at worst
		"qber": 3,
	} {
		if got := ask[int](b, fmt.Sprintf(strokes, id, id)); got != want {
			t.Errorf("figure %s has %d lines, want %d", id, got, want)
		}
	}
	// The widest run of the band covers all of the curve: to-and-fro over 241 points.
	points := ask[int](b, `Math.max(0, ...[...document.querySelectorAll("#figure-rate .chart svg path[fill-opacity], #figure-rate .chart svg polygon")]
		.map(p => (p.getAttribute("d") || p.getAttribute("points") || "").split(/[\sL]+/).length))`)
	if points < 200 {
		t.Errorf("the band has %d points", points)
	}
	text := ask[string](b, `document.querySelector("#figure-rate .chart").textContent`)
	for _, want := range []string{"need 256\u00a0bit/s", "installed 6.2\u00a0km", "key ends", "10\u00a0000", "Bob’s fibre, km"} {
		if !strings.Contains(text, want) {
			t.Errorf("the rate chart lacks %q: %s", want, text)
		}
	}
	text = ask[string](b, `document.querySelector("#figure-qber .chart").textContent`)
	if want := "no key above 9.8\u00a0% in both (f\u00a0=\u00a01.16)"; !strings.Contains(text, want) {
		t.Errorf("the error chart lacks %q: %s", want, text)
	}
	b.quiet()
}

// A mark stands where each key ends: as filed and in the compared cases whose
// curve reaches a zero.
func TestBrowserMarksTheEndOfTheKey(t *testing.T) {
	lib := needCharts(t)
	p := samplePlan()
	want := 0
	for i := range p.Cases {
		want += len(ends(pick(p.Cases[i].Curve, judged)))
	}
	if want < 2 {
		t.Fatalf("the sample has %d ends", want)
	}
	b := open(t, p, lib, desktop)
	// The cross is the only closed outline of twelve corners.
	got := ask[int](b, `[...document.querySelectorAll("#figure-rate .chart svg path")].filter(p => ((p.getAttribute("d") || "").match(/L/g) || []).length === 11 && /Z\s*$/.test(p.getAttribute("d"))).length`)
	if got != want {
		t.Errorf("%d crosses, want %d", got, want)
	}
	b.quiet()
}

func TestBrowserLegendHidesALine(t *testing.T) {
	lib := needCharts(t)
	b := open(t, samplePlan(), lib, desktop)
	count := fmt.Sprintf(strokes, "rate", "rate")
	click := `document.querySelector("#figure-rate button[data-series=short-window]").click(),
		new Promise(done => requestAnimationFrame(() => requestAnimationFrame(() => done(` + count + `))))`
	before := ask[int](b, count)
	if after := ask[int](b, click); after != before-1 {
		t.Errorf("%d lines after hiding one of %d", after, before)
	}
	if after := ask[int](b, click); after != before {
		t.Errorf("%d lines after showing it again, want %d", after, before)
	}
	b.quiet()
}

func TestBrowserTooltipHasUnits(t *testing.T) {
	lib := needCharts(t)
	b := open(t, hostilePlan(), lib, view{width: 1280, height: 2400})
	box := ask[[]float64](b, `(r => [r.left + 0.3 * r.width, r.top + 0.5 * r.height])(document.querySelector("#figure-rate .chart").getBoundingClientRect())`)
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

// Nothing from a file may run: not in the page, not in a chart, not on the way
// from one to the other.
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
	if shown < 40 {
		t.Errorf("hostile text is shown %d times only", shown)
	}
	if n := ask[int](b, `document.images.length + document.scripts.length`); n != 4 {
		t.Errorf("%d images and scripts, want two blocks of data and two scripts", n)
	}
	for id, want := range map[string]int{"rate": 9, "qber": 3} {
		if got := ask[int](b, fmt.Sprintf(strokes, id, id)); got != want {
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

func TestBrowserNoSidewaysScrolling(t *testing.T) {
	needBrowser(t)
	for name, p := range samplePlans() {
		lib := library{}
		if name == "sample" || name == "hostile" {
			lib = charting() // with charts where they are compiled in
		}
		b := open(t, p, lib, view{width: 1280, height: 800})
		ask[bool](b, `document.querySelectorAll("details").forEach(d => { d.open = true }), true`)
		for _, width := range []int64{1280, 720, 360} {
			b.do(chromedp.EmulateViewport(width, 800))
			got := ask[int64](b, `new Promise(done => setTimeout(() => done(document.documentElement.scrollWidth), 150))`)
			if got <= width {
				continue
			}
			wide := ask[string](b, fmt.Sprintf(`[...document.querySelectorAll("body *")].filter(e => !e.closest(".frame *, pre, .chart *") && e.getBoundingClientRect().right > %d).map(e => e.tagName + "." + e.className).slice(0, 5).join(" ")`, width))
			t.Errorf("%s is %d wide at %d: %s", name, got, width, wide)
		}
		b.quiet()
	}
}

func TestBrowserDarkMode(t *testing.T) {
	lib := needCharts(t)
	colours := func(b *tab) (paper, line string) {
		paper = ask[string](b, `getComputedStyle(document.body).backgroundColor`)
		line = ask[string](b, `document.querySelector("#figure-rate .chart svg path[fill=none][stroke-width='2.6'], #figure-rate .chart svg polyline[stroke-width='2.6']").getAttribute("stroke")`)
		return paper, line
	}
	light := open(t, samplePlan(), lib, desktop)
	dark := open(t, samplePlan(), lib, view{width: 1280, height: 720, dark: true})
	lightPaper, lightLine := colours(light)
	darkPaper, darkLine := colours(dark)
	if lightPaper == darkPaper || lightLine == darkLine {
		t.Errorf("paper %s and %s, line %s and %s", lightPaper, darkPaper, lightLine, darkLine)
	}
	// A reader who changes the system's colours sees the open page follow.
	must(chromedp.Call(light.ctx, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: "dark"}},
	}))(t)
	light.until(fmt.Sprintf(`document.querySelector("#figure-rate .chart svg [stroke='%s']")`, darkLine))
	if _, line := colours(light); line != darkLine {
		t.Errorf("the line stays %s in a page turned dark, want %s", line, darkLine)
	}
	light.quiet()
	dark.quiet()
}

func TestBrowserPrintsLight(t *testing.T) {
	lib := needCharts(t)
	b := open(t, samplePlan(), lib, view{width: 360, height: 800, dark: true})
	pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF(chromedp.PDFPreferCSSPageSize()))
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.HasPrefix(pdf, []byte("%PDF-")) || len(pdf) < 10_000 {
		t.Errorf("a PDF of %d bytes", len(pdf))
	}
	state := ask[string](b, `(dispatchEvent(new Event("beforeprint")), (() => {
		const s = document.querySelector("#figure-rate .chart svg");
		const seen = [getComputedStyle(document.documentElement).getPropertyValue("--paper"), s.getAttribute("width")].join(" ");
		dispatchEvent(new Event("afterprint"));
		return seen + " " + (document.querySelector("#figure-rate .chart svg").getAttribute("width") < 360);
	})())`)
	if state != "#fcfbf8 670 true" {
		t.Errorf("paper, width on paper and width restored: %s", state)
	}
	b.quiet()
}

func TestBrowserWithoutCharts(t *testing.T) {
	needBrowser(t)
	for name, p := range samplePlans() {
		b := open(t, p, library{}, desktop)
		if n := ask[int](b, `document.scripts.length`); n != 0 {
			t.Errorf("%s: %d scripts without the library", name, n)
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
	for name, p := range samplePlans() {
		if name == "sample" || name == "hostile" {
			continue // drawn in the tests above
		}
		b := open(t, p, lib, desktop)
		boxes := ask[int](b, `document.querySelectorAll(".chart").length`)
		if drawn := ask[int](b, `document.querySelectorAll(".chart svg").length`); drawn != boxes {
			t.Errorf("%s: %d of %d charts drawn", name, drawn, boxes)
		}
		b.quiet()
	}
}
