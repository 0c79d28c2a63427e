package report

import (
	"slices"
	"testing"

	"github.com/chromedp/chromedp"
)

// The charts of the deciding sections draw every point, complain of nothing
// and fit a phone.
func TestBrowserDrawsDecidingCharts(t *testing.T) {
	lib := needCharts(t)
	b := open(t, decidedPlan(), lib, desktop)
	for _, f := range newDeciding(decidedPlan()).figures() {
		if f.Drawn() {
			continue
		}
		if got, want := drawnLines(b, f.ID), pointsOf(t, f); !slices.Equal(got, want) {
			t.Errorf("figure %s draws lines of %v points, want %v", f.ID, got, want)
		}
	}
	b.do(chromedp.EmulateViewport(360, 720))
	b.settle()
	ask[bool](b, `document.querySelectorAll("details").forEach(d => { d.open = true }), true`)
	b.settle()
	if wide := ask[int64](b, `document.documentElement.scrollWidth`); wide > 360 {
		t.Errorf("the page is %d wide at 360", wide)
	}
	b.quiet()
}

func TestBrowserShowsHostileDecidingAsText(t *testing.T) {
	lib := needCharts(t)
	b := open(t, fillDecided(fill(decidedPlan(), hostile), hostile), lib, desktop)
	if got := ask[string](b, `typeof window.x`); got != "undefined" {
		t.Errorf("text ran as code: x is %s", got)
	}
	if got := ask[int](b, `document.querySelectorAll(".body img, .body script:not([type='application/json'])").length`); got != 0 {
		t.Errorf("text became %d elements", got)
	}
	if got := ask[int](b, `document.querySelectorAll("figure .chart svg").length`); got < 6 {
		t.Errorf("%d charts drawn", got)
	}
	b.quiet()
}
