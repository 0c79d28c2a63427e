package report

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"
)

// axeFile is the checker of accessibility; npm brings it, for tests only.
var axeFile = filepath.Join("..", "..", "..", "..", ".npm", "node_modules", "axe-core", "axe.min.js")

// Rules of WCAG 2.2 at level AA, and good practice, find nothing to object to:
// in both schemes, on a desk and on a phone, with everything unfolded.
func TestBrowserAccessibility(t *testing.T) {
	axe, err := os.ReadFile(axeFile)
	if err != nil && !testing.Short() {
		const missing = "no axe-core: make charts (needs npm)"
		if os.Getenv("CI") == "true" {
			t.Fatal(missing)
		}
		t.Skip(missing)
	}
	b := demoTab(t)
	ask[bool](b, string(axe)+`; true`)
	ask[bool](b, `document.querySelectorAll("details").forEach(d => { d.open = true }), true`)
	check := func(where, rules string, least int) {
		t.Helper()
		// Of the long tables some rows are enough.
		found := ask[string](b, `axe.run({ include: [["html"]], exclude: [[".wide tbody tr:nth-child(n+6)"]] }, { resultTypes: ["violations"]`+rules+` }).then(r => JSON.stringify({
			passes: r.passes.length,
			violations: r.violations.map(v => v.id + ": " + v.nodes.slice(0, 3).map(n => n.html.slice(0, 160) + " " + n.failureSummary).join(" | ")),
		}))`)
		var result struct {
			Passes     int
			Violations []string
		}
		if err := json.Unmarshal([]byte(found), &result); err != nil {
			t.Fatal(err)
		}
		if result.Passes < least {
			t.Errorf("%s: only %d rules had something to look at", where, result.Passes)
		}
		for _, v := range result.Violations {
			t.Errorf("%s: %s", where, v)
		}
	}
	check("on a desk, light", "", 30)
	b.colours(true, "")
	b.do(chromedp.EmulateViewport(360, 720))
	b.settle()
	check("on a phone, dark", `, runOnly: ["color-contrast", "target-size", "scrollable-region-focusable", "link-in-text-block"]`, 3)
	b.quiet()
}

// The Tab key reaches everything that can be used, in the order of the page,
// and shows where it is.
func TestBrowserTabOrder(t *testing.T) {
	lib := needCharts(t)
	b := open(t, samplePlan(), lib, desktop)
	const usable = `[...document.querySelectorAll("a[href], button, summary, [tabindex='0']")].filter(e => e.checkVisibility() && !e.closest("details:not([open]) > :not(summary)"))`
	all := ask[int](b, `(window.reached = [], `+usable+`.length)`)
	if all < 30 {
		t.Fatalf("only %d things to reach", all)
	}
	for range all {
		b.do(chromedp.KeyEvent("\t"))
		ask[bool](b, `reached.push([document.activeElement, getComputedStyle(document.activeElement)]), true`)
		if seen := ask[bool](b, `getComputedStyle(document.activeElement).outlineStyle !== "none" && parseFloat(getComputedStyle(document.activeElement).outlineWidth) >= 2`); !seen {
			t.Errorf("no outline shows the focus on %s", ask[string](b, `document.activeElement.outerHTML.slice(0, 120)`))
		}
	}
	missed := ask[string](b, `(() => {
		const want = `+usable+`, got = reached.map(r => r[0]);
		return want.map((e, i) => got[i] === e ? "" : i + ": " + e.outerHTML.slice(0, 80) + " but " + got[i]?.outerHTML.slice(0, 80)).filter(Boolean).slice(0, 3).join("\n");
	})()`)
	if missed != "" {
		t.Errorf("the Tab key leaves the order of the page:\n%s", missed)
	}
	if first := ask[string](b, `reached[0][0].className`); first != "skip" {
		t.Errorf("the first stop is %q, want the link that skips", first)
	}
	b.quiet()
}

// The keyboard alone skips to the contents, hides a line and unfolds data.
func TestBrowserKeyboard(t *testing.T) {
	lib := needCharts(t)
	b := open(t, samplePlan(), lib, desktop)
	b.do(chromedp.KeyEvent("\t"), chromedp.KeyEvent("\r"))
	if hash := ask[string](b, `location.hash`); hash != "#contents" {
		t.Errorf("the link that skips leads to %q", hash)
	}
	b.do(chromedp.KeyEvent("\t"))
	if at := ask[string](b, `document.activeElement.getAttribute("href") ?? ""`); at != "#losses" {
		t.Errorf("after it the focus is on %q", at)
	}
	ask[bool](b, `document.querySelector("#figure-rate .legend button").focus(), true`)
	b.do(chromedp.KeyEvent(" "))
	if pressed := ask[string](b, `document.querySelector("#figure-rate .legend button").getAttribute("aria-pressed")`); pressed != "false" {
		t.Errorf("after the space bar the line is %q", pressed)
	}
	ask[bool](b, `document.querySelector("#figure-rate summary").focus(), true`)
	b.do(chromedp.KeyEvent("\r"))
	if open := ask[bool](b, `document.querySelector("#figure-rate details").open`); !open {
		t.Error("the Return key does not unfold the data")
	}
	b.quiet()
}

// What can be pressed is large enough: 24 pixels, or a link inside a text.
func TestBrowserTargets(t *testing.T) {
	b := sampleTab(t)
	small := ask[[]string](b, `[...document.querySelectorAll("button, summary, nav a")].filter(e => e.checkVisibility() && (e.getBoundingClientRect().height < 23.9 || e.getBoundingClientRect().width < 24)).map(e => e.textContent + e.getBoundingClientRect().height)`)
	if len(small) > 0 {
		t.Errorf("too small to press: %s", strings.Join(small, "; "))
	}
}
