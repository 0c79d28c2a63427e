package report

import (
	"bytes"
	"context"
	"fmt"
	"net/url"
	"os"
	"path/filepath"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/chromedp"

	"pairspan/scenarios/source"
)

// openSource writes the page of a source to a file and loads it.
func openSource(t *testing.T, r *source.Result, v view) *tab {
	t.Helper()
	file := filepath.Join(t.TempDir(), "source.html")
	if err := os.WriteFile(file, []byte(sourcePageOf(t, r)), 0o644); err != nil {
		t.Fatal(err)
	}
	b := &tab{t: t, url: (&url.URL{Scheme: "file", Path: file}).String()}
	ctx, cancel := chromedp.NewContext(browser.ctx, chromedp.WithListener(b.listen))
	ctx, cancelTime := context.WithTimeout(ctx, 3*time.Minute)
	t.Cleanup(func() { cancelTime(); cancel() })
	b.ctx = ctx
	b.do(chromedp.EmulateViewport(v.width, v.height))
	must(chromedp.Call(ctx, network.Enable, network.EnableParams{}))(t)
	colourSource(b, v.dark)
	b.do(chromedp.Navigate(b.url))
	ask[bool](b, `new Promise(done => requestAnimationFrame(() => requestAnimationFrame(() => done(true))))`)
	return b
}

func colourSource(b *tab, dark bool) {
	scheme := map[bool]string{false: "light", true: "dark"}[dark]
	must(chromedp.Call(b.ctx, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}},
	}))(b.t)
}

// Each sample's page shows one drawing of each figure at every width, type at
// its full size or larger, and never scrolls sideways; it says nothing and asks
// for nothing.
func TestBrowserSource(t *testing.T) {
	needBrowser(t)
	for name, r := range sourceSamples() {
		b := openSource(t, r, desktop)
		ask[bool](b, `document.querySelectorAll("details").forEach(d => { d.open = true }), true`)
		for _, width := range []int64{1280, 720, 360} {
			b.do(chromedp.EmulateViewport(width, 800))
			got := ask[int64](b, `new Promise(done => setTimeout(() => done(document.documentElement.scrollWidth), 120))`)
			if got > width {
				wide := ask[string](b, fmt.Sprintf(`[...document.querySelectorAll("body *")].filter(e => !e.closest(".frame *, pre") && e.getBoundingClientRect().right > %d).map(e => e.tagName + "." + e.className).slice(0, 5).join(" ")`, width))
				t.Errorf("%s is %d wide at %d: %s", name, got, width, wide)
			}
			bad := ask[string](b, `[...document.querySelectorAll("figure")].filter(f => {
				const seen = [...f.querySelectorAll(".drawings svg")].filter(s => getComputedStyle(s).display !== "none");
				return seen.length !== 1 || seen[0].getBoundingClientRect().width < 250 || seen[0].getBoundingClientRect().width < 0.97 * seen[0].viewBox.baseVal.width;
			}).map(f => f.id).join(" ")`)
			if bad != "" {
				t.Errorf("%s at %d: not one drawing of full size in %s", name, width, bad)
			}
		}
		b.quiet()
	}
}

// The map's cells follow the scheme, and stand out from the page in either.
func TestBrowserSourceDark(t *testing.T) {
	needBrowser(t)
	b := openSource(t, sampleSource(), view{width: 1280, height: 720, dark: true})
	const colours = `[getComputedStyle(document.body).backgroundColor, getComputedStyle(document.querySelector("#figure-map-share .ink-cell")).fill,
		getComputedStyle(document.querySelector(".bars .bar-re")).fill].join(" ")`
	dark := ask[string](b, colours)
	colourSource(b, false)
	light := ask[string](b, colours)
	if dark != "rgb(21, 24, 28) rgb(219, 233, 247) rgb(147, 191, 232)" || light != "rgb(252, 251, 248) rgb(15, 39, 64) rgb(29, 79, 124)" {
		t.Errorf("dark %s, light %s", dark, light)
	}
	b.quiet()
}

// A drawing carries its name and what it says to those who do not see it, and
// each table that scrolls can be reached with the keyboard.
func TestBrowserSourceWithoutEyes(t *testing.T) {
	needBrowser(t)
	b := openSource(t, sampleSource(), desktop)
	if n := ask[int](b, `[...document.querySelectorAll("svg[role=img]")].filter(s => {
		const by = s.getAttribute("aria-labelledby");
		const said = by ? by.split(" ").map(id => document.getElementById(id)?.textContent ?? "").join(" ") : s.getAttribute("aria-label");
		return (said ?? "").length < 15;
	}).length`); n != 0 {
		t.Errorf("%d drawings without words", n)
	}
	if n := ask[int](b, `document.querySelectorAll("#matrix .bars[aria-label]").length`); n != 16 {
		t.Errorf("%d entries of the matrix with words, want 16", n)
	}
	if n := ask[int](b, `document.querySelectorAll(".wide:not([tabindex])").length`); n != 0 {
		t.Errorf("%d scrolling tables out of reach", n)
	}
	b.quiet()
}

func TestBrowserSourceShowsHostileTextAsText(t *testing.T) {
	needBrowser(t)
	b := openSource(t, hostileSource(), desktop)
	if ask[bool](b, `"x" in window`) {
		t.Error("text of the result ran as script")
	}
	if got := ask[string](b, `document.title`); got != hostile {
		t.Errorf("the title reads %q", got)
	}
	if n := ask[int](b, `document.images.length + document.scripts.length`); n != 1 {
		t.Errorf("%d images and scripts, want one script", n)
	}
	b.quiet()
}

func TestBrowserSourcePrints(t *testing.T) {
	needBrowser(t)
	b := openSource(t, sampleSource(), view{width: 360, height: 800, dark: true})
	pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF(chromedp.PDFPreferCSSPageSize()))
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.HasPrefix(pdf, []byte("%PDF-")) || len(pdf) < 10_000 {
		t.Errorf("a PDF of %d bytes", len(pdf))
	}
	b.quiet()
}
