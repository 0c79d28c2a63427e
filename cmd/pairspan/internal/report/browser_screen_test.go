package report

import (
	"bytes"
	"fmt"
	"regexp"
	"strconv"
	"testing"

	"github.com/chromedp/chromedp"
)

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
			b.settle()
			got := ask[int64](b, `new Promise(done => setTimeout(() => done(document.documentElement.scrollWidth), 100))`)
			if got <= width {
				continue
			}
			wide := ask[string](b, fmt.Sprintf(`[...document.querySelectorAll("body *")].filter(e => !e.closest(".frame *, pre, .chart *") && e.getBoundingClientRect().right > %d).map(e => e.tagName + "." + e.className).slice(0, 5).join(" ")`, width))
			t.Errorf("%s is %d wide at %d: %s", name, got, width, wide)
		}
		b.quiet()
	}
}

// The first screen of the demo holds the answer, its picture, the reasons and
// the caution; the answer is the largest type.
func TestBrowserFirstScreen(t *testing.T) {
	b := demoTab(t)
	for _, what := range []string{".sentence", "#figure-ruler svg.across", "#steps", ".sure", ".caution"} {
		if bottom := ask[float64](b, `document.querySelector("`+what+`").getBoundingClientRect().bottom`); !(bottom > 0) || bottom > 720 {
			t.Errorf("%s ends at %g of 720", what, bottom)
		}
	}
	largest := ask[string](b, `[...document.querySelectorAll("body *")].filter(e => e.childNodes.length && [...e.childNodes].some(n => n.nodeType === 3 && n.data.trim()))
		.sort((a, b) => parseFloat(getComputedStyle(b).fontSize) - parseFloat(getComputedStyle(a).fontSize))[0].className`)
	if largest != "sentence" {
		t.Errorf("the largest type is of %q", largest)
	}
	// One drawing is shown at each width, and type in it is never scaled down.
	for _, width := range []int64{1280, 1000, 360} {
		b.do(chromedp.EmulateViewport(width, 720))
		b.settle()
		scales := ask[[]float64](b, `[...document.querySelectorAll(".drawings")].map(d => {
			const shown = [...d.children].filter(s => getComputedStyle(s).display !== "none");
			return shown.length === 1 ? shown[0].getBoundingClientRect().width / shown[0].viewBox.baseVal.width : 0;
		})`)
		if len(scales) != 5 {
			t.Errorf("%d drawings at %d", len(scales), width)
		}
		for _, s := range scales {
			if s < 0.999 || s > 1.001 {
				t.Errorf("at %d a drawing is shown at %g of its size", width, s)
			}
		}
	}
}

func TestBrowserDarkMode(t *testing.T) {
	b := sampleTab(t)
	colours := func() (seen [4]string) {
		seen[0] = ask[string](b, `getComputedStyle(document.body).backgroundColor`)
		seen[1] = ask[string](b, `document.querySelector("#figure-rate .chart svg path[fill=none][stroke-width='2.6'], #figure-rate .chart svg polyline[stroke-width='2.6']").getAttribute("stroke")`)
		seen[2] = ask[string](b, `getComputedStyle(document.querySelector(".band-worst")).fill`)
		seen[3] = ask[string](b, `getComputedStyle(document.querySelector(".sentence")).color`)
		return seen
	}
	light := colours()
	// A reader who changes the system's colours sees the open page follow.
	b.colours(true, "")
	b.until(fmt.Sprintf(`!document.querySelector("#figure-rate .chart svg [stroke='%s']")`, light[1]))
	dark := colours()
	for i := range light {
		if light[i] == dark[i] {
			t.Errorf("colour %d is %s in both schemes", i, light[i])
		}
	}
	b.quiet()
}

var (
	pdfPage = regexp.MustCompile(`/Type\s*/Page\b[^s]`)
	pdfBox  = regexp.MustCompile(`/MediaBox\s*\[\s*0 0 ([\d.]+) ([\d.]+)\s*\]`)
)

// A printed report has pages of A4, drawn as vectors, whatever the screen was;
// on Letter it takes as many or one more.
func TestBrowserPrints(t *testing.T) {
	b := demoTab(t)
	b.do(chromedp.EmulateViewport(360, 800))
	b.colours(true, "")
	b.settle()
	pages := map[string]int{}
	for paper, options := range map[string][]chromedp.PDFOption{
		"A4":     {chromedp.PDFPreferCSSPageSize()},
		"Letter": {chromedp.PDFPaper(chromedp.PaperLetter)},
	} {
		pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF(options...))
		if err != nil {
			t.Fatal(err)
		}
		pages[paper] = len(pdfPage.FindAll(pdf, -1))
		if bytes.Contains(pdf, []byte("/Subtype /Image")) || !bytes.Contains(pdf, []byte("/Font")) {
			t.Errorf("%s: a picture in place of vectors, or no type", paper)
		}
		if paper != "A4" {
			continue
		}
		for _, m := range pdfBox.FindAllSubmatch(pdf, -1) {
			w, _ := strconv.ParseFloat(string(m[1]), 64)
			h, _ := strconv.ParseFloat(string(m[2]), 64)
			if w < 594 || w > 596 || h < 841 || h > 843 {
				t.Errorf("a page of %g by %g points, A4 has 595 by 842", w, h)
			}
		}
	}
	if n := pages["A4"]; n < 5 || n > 22 || pages["Letter"] < n-1 || pages["Letter"] > n+2 {
		t.Errorf("pages: %v", pages)
	}
	b.quiet()
}

// On paper the colours are the light ones, the charts fit between the margins,
// and nothing asks to be clicked.
func TestBrowserPaperHasNoControls(t *testing.T) {
	b := sampleTab(t)
	b.do(chromedp.EmulateViewport(360, 800))
	b.colours(true, "")
	b.until(`document.querySelector("#figure-rate .chart svg").getAttribute("width") < 360`)
	state := ask[string](b, `(dispatchEvent(new Event("beforeprint")), (() => {
		const s = document.querySelector("#figure-rate .chart svg");
		const seen = [getComputedStyle(document.documentElement).getPropertyValue("--paper"), s.getAttribute("width")].join(" ");
		dispatchEvent(new Event("afterprint"));
		return seen + " " + (document.querySelector("#figure-rate .chart svg").getAttribute("width") < 360);
	})())`)
	if state != "#fcfbf8 670 true" {
		t.Errorf("paper, width on paper and width restored: %s", state)
	}
	b.colours(true, "print")
	b.do(chromedp.EmulateViewport(680, 1000)) // what A4 has between the margins
	left := ask[string](b, `[...document.querySelectorAll("nav, details, summary, .save, .skip, .tip")].filter(e => e.getBoundingClientRect().height > 0).map(e => e.className || e.tagName).join(" ")`)
	if left != "" {
		t.Errorf("paper shows %s", left)
	}
	if n := ask[int](b, `[...document.querySelectorAll(".drawing")].filter(e => e.getBoundingClientRect().height > 0 && e.getBoundingClientRect().right <= 680).length`); n != 3 {
		t.Errorf("%d drawings on paper, want the ruler, the losses and the errors", n)
	}
	if wide := ask[int](b, `document.documentElement.scrollWidth`); wide > 680 {
		t.Errorf("paper is %d wide", wide)
	}
	b.quiet()
}
