package report

import (
	"encoding/csv"
	"encoding/xml"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	cdpbrowser "github.com/chromedp/cdproto/browser"
	"github.com/chromedp/chromedp"
)

// saved clicks a button with the mouse and returns the file that arrives.
func saved(b *tab, button, file string) string {
	b.t.Helper()
	dir := b.t.TempDir()
	must(chromedp.CallBrowser(b.ctx, cdpbrowser.SetDownloadBehavior, cdpbrowser.SetDownloadBehaviorParams{
		Behavior: cdpbrowser.SetDownloadBehaviorBehaviorAllow, DownloadPath: dir,
	}))(b.t)
	at := ask[[]float64](b, `(() => {
		const button = document.querySelector("`+button+`");
		button.scrollIntoView({ block: "center" });
		const r = button.getBoundingClientRect();
		return [r.left + r.width / 4, r.top + r.height / 2];
	})()`)
	b.do(chromedp.MouseClickXY(at[0], at[1]))
	for start := time.Now(); time.Since(start) < 20*time.Second; time.Sleep(20 * time.Millisecond) {
		if text, err := os.ReadFile(filepath.Join(dir, file)); err == nil && len(text) > 0 {
			return string(text)
		}
	}
	found, _ := filepath.Glob(dir + "/*")
	b.t.Fatalf("no file %s after the click; there is %v", file, found)
	return ""
}

// A figure that is saved stands alone: well-formed, with its title, its type
// and the light colours, whatever the screen has, and without a class, a
// script or an address.
func TestBrowserSavesFigures(t *testing.T) {
	b := sampleTab(t)
	b.colours(true, "")
	b.settle()
	for id, want := range map[string][]string{
		"ruler":  {"installed 6.2" + nbsp + "km", "Ruler of fibre length", "#1d4f7c"},
		"loss":   {"Bob’s arm", "8.21"},
		"errors": {"Pair state", "no key above"},
		"rate":   {"1 as filed, at worst", "Figure 4.", "need 256", "#a3401a"},
		"qber":   {"2 check, nominal", "Figure 5."},
	} {
		text := saved(b, "#figure-"+id+" > .save", "pairspan-figure-"+id+".svg")
		shapes := svgShapes(t, id, text)
		if shapes["title"] != 1 || shapes["text"] < 5 || shapes["path"]+shapes["line"]+shapes["rect"] < 8 {
			t.Errorf("%s: elements %v", id, shapes)
		}
		text = withHexColours(text)
		for _, w := range want {
			if !strings.Contains(text, w) {
				t.Errorf("%s lacks %q", id, w)
			}
		}
		for _, bad := range []string{"var(--", "<script", "href", "NaN", "undefined", "#93bfe8"} {
			if strings.Contains(text, bad) {
				t.Errorf("%s holds %q", id, bad)
			}
		}
	}
	if paper := ask[string](b, `getComputedStyle(document.documentElement).getPropertyValue("--paper")`); strings.TrimSpace(paper) != "#15181c" {
		t.Errorf("after saving the page's paper is %s", paper)
	}
	if lines, want := len(drawnLines(b, "rate")), len(pointsOf(t, rateFigure(samplePlan()))); lines != want {
		t.Errorf("after saving the chart has %d lines, want %d", lines, want)
	}
	b.savedOnly()
}

// svgShapes counts a picture's elements; it must be well-formed.
func svgShapes(t *testing.T, id, text string) map[string]int {
	t.Helper()
	count := map[string]int{}
	for d := xml.NewDecoder(strings.NewReader(text)); ; {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			return count
		}
		if err != nil {
			t.Fatalf("%s: %v in %.300s", id, err, text)
		}
		if e, is := token.(xml.StartElement); is {
			count[e.Name.Local]++
			if e.Name.Space != "http://www.w3.org/2000/svg" && e.Name.Local != "style" {
				t.Errorf("%s: <%s> is in the space %q", id, e.Name.Local, e.Name.Space)
			}
		}
	}
}

// withHexColours writes rgb(29, 79, 124) as #1d4f7c.
func withHexColours(text string) string {
	parts := strings.Split(text, "rgb(")
	for i, p := range parts[1:] {
		inside, rest, _ := strings.Cut(p, ")")
		hex := "#"
		for _, n := range strings.Split(inside, ",") {
			v, _ := strconv.Atoi(strings.TrimSpace(n))
			hex += string("0123456789abcdef"[v/16%16]) + string("0123456789abcdef"[v%16])
		}
		parts[i+1] = hex + rest
	}
	return strings.Join(parts, "")
}

// A table that is saved reads back as what the page shows, numbers as numbers;
// text that a spreadsheet could take for a formula is guarded.
func TestBrowserSavesTables(t *testing.T) {
	lib := needCharts(t)
	p := samplePlan()
	p.Cases[1].Name = `=HYPERLINK("x"), "quoted"`
	b := open(t, p, lib, desktop)
	rows := csvRows(t, saved(b, ".body .frame:has(#compared) + .save", "pairspan-compared.csv"))
	if len(rows) != 7 || len(rows[0]) != 7 || rows[0][1] != "Usable rate" {
		t.Fatalf("the compared cases are %q", rows)
	}
	if got, want := rows[2][0], `'=HYPERLINK("x"), "quoted" (arms.alice.detector: nanowire)`; got != want {
		t.Errorf("a name is saved as %q, want %q", got, want)
	}
	ask[bool](b, `document.querySelector("#figure-rate details").open = true, true`)
	rows = csvRows(t, saved(b, "#figure-rate details .save", "pairspan-rate-data.csv"))
	if len(rows) != 242 {
		t.Fatalf("%d rows of rates", len(rows))
	}
	for i, r := range rows[1:] {
		want := p.Cases[0].Curve[i].Bounds.AtWorst.UsableRateBps
		got, err := strconv.ParseFloat(r[1], 64)
		if err != nil || got < want*(1-1e-3) || got > want*(1+1e-3) {
			t.Fatalf("row %d: %q, want %g: %v", i, r[1], want, err)
		}
	}
	b.savedOnly()
}

func csvRows(t *testing.T, text string) [][]string {
	t.Helper()
	rows, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatalf("%v in %.300q", err, text)
	}
	return rows
}

// savedOnly is quiet for a page that was saved from: what it made itself may
// have been asked for, nothing else.
func (b *tab) savedOnly() {
	b.t.Helper()
	b.mu.Lock()
	var sent []string
	for _, s := range b.sent {
		if !strings.HasPrefix(s, "blob:") {
			sent = append(sent, s)
		}
	}
	b.sent = sent
	b.mu.Unlock()
	b.quiet()
}
