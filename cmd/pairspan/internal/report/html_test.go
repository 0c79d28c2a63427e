package report

import (
	"bytes"
	"errors"
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
)

// fakeLibrary stands in for the chart library where only the page around it is tested.
var fakeLibrary = library{Script: "var echarts = {};", Notices: []notice{{Name: "NOTICE", Text: "notice <text>"}}}

func pageOf(t testing.TB, p *plan.Plan, lib library) string {
	t.Helper()
	var b bytes.Buffer
	if err := writePage(&b, p, lib); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func TestHTMLIsWellFormed(t *testing.T) {
	for name, p := range samplePlans() {
		for _, lib := range []library{{}, fakeLibrary} {
			if err := wellFormed(pageOf(t, p, lib)); err != nil {
				t.Errorf("%s: %v", name, err)
			}
		}
	}
}

// A figure that does not apply must read as a dash or be left out, never as a
// number that is none.
func TestHTMLHasNoBrokenFigures(t *testing.T) {
	broken := regexp.MustCompile(`NaN|Inf|&lt;nil&gt;|%!|0x[0-9a-f]{6}|−0(?:\.0+)?[^.0-9]|<no value>`)
	for name, p := range samplePlans() {
		if name == "hostile" {
			continue
		}
		page := pageOf(t, p, fakeLibrary)
		if at := broken.FindStringIndex(page); at != nil {
			t.Errorf("%s: %q", name, page[max(0, at[0]-60):min(len(page), at[1]+60)])
		}
	}
}

// Each pointer of a plan may be null by itself, whatever the others hold.
func TestHTMLWithEveryNull(t *testing.T) {
	blank := map[string]func(*plan.Case, *plan.Point){
		"qber":   func(_ *plan.Case, q *plan.Point) { q.QBER = nil },
		"bounds": func(_ *plan.Case, q *plan.Point) { q.Bounds = nil },
		"usable": func(c *plan.Case, q *plan.Point) { q.UsableRateBps, c.Answer.UsableRateBps = nil, nil },
		"secret": func(_ *plan.Case, q *plan.Point) { q.SecretRateBps, q.FiniteSecretRateBps = nil, nil },
		"sifted": func(_ *plan.Case, q *plan.Point) { q.SiftedBps = nil },
		"window": func(_ *plan.Case, q *plan.Point) {
			q.WindowPs, q.WindowShare, q.PairsPerSlot, q.SlotsHz = nil, nil, nil, nil
		},
		"coincidences": func(_ *plan.Case, q *plan.Point) { q.CoincidencesHz, q.AccidentalsHz, q.CAR = nil, nil, nil },
		"need":         func(c *plan.Case, _ *plan.Point) { c.Answer.NeedBps, c.Answer.TimesNeed = nil, nil },
		"margin": func(c *plan.Case, _ *plan.Point) {
			c.Answer.MarginDB, c.Answer.MarginReason, c.Answer.MarginAs = nil, nil, nil
		},
		"margin units": func(c *plan.Case, _ *plan.Point) { c.Answer.MarginAs = &plan.MarginAs{} },
		"reach":        func(c *plan.Case, _ *plan.Point) { c.Answer.ReachKm, c.Answer.ReachReason = nil, nil },
		"nominal":      func(c *plan.Case, _ *plan.Point) { c.Answer.Nominal = nil },
		"best":         func(c *plan.Case, _ *plan.Point) { c.Answer.AtBest = nil },
		"members": func(c *plan.Case, _ *plan.Point) {
			c.Answer.Nominal, c.Answer.AtBest = &plan.MemberAnswer{}, &plan.MemberAnswer{}
		},
		"state": func(c *plan.Case, _ *plan.Point) { c.Answer.State, c.QBERParts, c.Answer.FirstInTheWay = nil, nil, nil },
	}
	for name, clear := range blank {
		p := samplePlan()
		for i := range p.Cases {
			c := &p.Cases[i]
			clear(c, &c.Installed)
			for j := range c.Curve {
				clear(c, &c.Curve[j])
			}
		}
		if err := wellFormed(pageOf(t, p, fakeLibrary)); err != nil {
			t.Errorf("without %s: %v", name, err)
		}
	}
}

// A case that is shorter than the filed one, or has no curve, is still a page.
func TestHTMLWithUnequalCurves(t *testing.T) {
	p := samplePlan()
	p.Cases[1].Curve = p.Cases[1].Curve[:7]
	p.Cases[2].Curve = nil
	pageOf(t, p, fakeLibrary)
	p.Cases[0].Curve = nil
	pageOf(t, p, fakeLibrary)
}

func TestHTMLIsDeterministic(t *testing.T) {
	for name := range samplePlans() {
		a, b := pageOf(t, samplePlans()[name], fakeLibrary), pageOf(t, samplePlans()[name], fakeLibrary)
		if a != b {
			t.Errorf("%s: two pages of one plan differ", name)
		}
	}
}

func TestHTMLRefusesAPlanWithoutCases(t *testing.T) {
	var b bytes.Buffer
	if err := HTML(&b, &plan.Plan{}); err == nil || b.Len() > 0 {
		t.Errorf("error %v after %d bytes", err, b.Len())
	}
}

// failing accepts nothing, and counts how often it is asked.
type failing int

func (f *failing) Write([]byte) (int, error) { *f++; return 0, errors.New("no space left") }

func TestHTMLPassesOnAWriteError(t *testing.T) {
	var f failing
	if err := HTML(&f, samplePlan()); err == nil || !strings.Contains(err.Error(), "no space left") {
		t.Errorf("error %v", err)
	}
	if f != 1 {
		t.Errorf("written in %d pieces; a page is written whole or not at all", f)
	}
}

// A page must work from a file: nothing in it may point anywhere.
func TestHTMLPointsNowhere(t *testing.T) {
	for name, p := range samplePlans() {
		if name == "hostile" {
			continue
		}
		page := pageOf(t, p, fakeLibrary)
		for _, bad := range []string{" src=", " href=\"[^#]", "url\\(", "@import", "http:", "https:", " style=", " on[a-z]+="} {
			for _, tag := range regexp.MustCompile(`<[a-z][^>]*>|(?s)<style>.*?</style>`).FindAllString(page, -1) {
				if regexp.MustCompile(bad).MatchString(tag) && !strings.HasPrefix(tag, "<meta") {
					t.Errorf("%s: %s in %.100s", name, bad, tag)
				}
			}
		}
	}
}

// Every link of a page leads to a place in it.
func TestHTMLLinksArrive(t *testing.T) {
	for name, p := range samplePlans() {
		page := pageOf(t, p, fakeLibrary)
		links := regexp.MustCompile(`href="#([^"]*)"`).FindAllStringSubmatch(page, -1)
		if len(links) < 5 {
			t.Errorf("%s: %d links", name, len(links))
		}
		for _, m := range links {
			if !strings.Contains(page, ` id="`+m[1]+`"`) {
				t.Errorf("%s: nothing has the id %s", name, m[1])
			}
		}
	}
}

func TestHTMLCarriesTheLicences(t *testing.T) {
	if page := pageOf(t, samplePlan(), fakeLibrary); !strings.Contains(page, "notice &lt;text&gt;") || !strings.Contains(page, "Apache ECharts") {
		t.Error("a page with charts lacks the library's notice")
	}
	if page := pageOf(t, samplePlan(), library{}); strings.Contains(page, "ECharts") || !strings.Contains(page, "make charts") {
		t.Error("a page without charts speaks of the library, or does not say how to get it")
	}
	lib := charting()
	if lib.Script == "" {
		return
	}
	page := pageOf(t, samplePlan(), lib)
	for _, want := range []string{"Copyright 2017-2026 The Apache Software Foundation", "Apache License", "Baidu", "Microsoft Corporation", "Bostock"} {
		if !strings.Contains(page, want) {
			t.Errorf("no %q in a page with charts", want)
		}
	}
	if size := len(page); size > 2<<20 {
		t.Errorf("a page of %d bytes, want 2 MB at most", size)
	}
}

// However many cases and points a plan has, its page stays under 2 MB.
func TestHTMLStaysSmall(t *testing.T) {
	p := samplePlan()
	filed := &p.Cases[0]
	filed.Curve = nil
	for i := range 2001 {
		filed.Curve = append(filed.Curve, samplePoint(float64(i)/50, 31, true))
	}
	for i := range 20 {
		c := *filed
		c.Name = fmt.Sprintf("case-%d", i)
		p.Cases = append(p.Cases, c)
	}
	const libraryBytes = 1_150_000
	if size := len(pageOf(t, p, fakeLibrary)) + libraryBytes; size > 2<<20 {
		t.Errorf("a page of %d bytes", size)
	}
}

// FuzzHTMLText gives the page any text where a person writes: the elements of
// the page must stay those that its templates hold.
func FuzzHTMLText(f *testing.F) {
	f.Add(hostile)
	f.Add("<!--")
	f.Add("]]></pre><script>")
	f.Add("\x00\xff\u2028{{template \"x\"}}")
	tags := regexp.MustCompile(`</?[a-zA-Z!][a-zA-Z0-9]*`)
	shape := func(t testing.TB, p *plan.Plan) string {
		found := tags.FindAllString(pageOf(t, p, fakeLibrary), -1)
		slices.Sort(found) // a doubt stands in the section that its entry touches
		return strings.Join(found, "")
	}
	with := func(text string) *plan.Plan {
		p := fill(hostilePlan(), text)
		for i := range p.Cases {
			p.Cases[i].Curve = p.Cases[i].Curve[:3]
		}
		return p
	}
	want := shape(f, with("plain"))
	f.Fuzz(func(t *testing.T, text string) {
		if text == "" {
			return // an empty text leaves its element out
		}
		if got := shape(t, with(text)); got != want {
			t.Errorf("%q changes the elements of the page", text)
		}
	})
}

func BenchmarkHTML(b *testing.B) {
	p := samplePlan()
	for b.Loop() {
		var page bytes.Buffer
		if err := writePage(&page, p, fakeLibrary); err != nil {
			b.Fatal(err)
		}
	}
}
