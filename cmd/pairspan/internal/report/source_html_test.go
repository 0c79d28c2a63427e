package report

import (
	"bytes"
	"html"
	"reflect"
	"regexp"
	"strings"
	"testing"

	"pairspan/scenarios/source"
)

func sourcePageOf(t testing.TB, r *source.Result) string {
	t.Helper()
	var b bytes.Buffer
	if err := SourceHTML(&b, r); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func TestSourceHTMLIsWellFormed(t *testing.T) {
	for name, r := range sourceSamples() {
		if err := wellFormed(sourcePageOf(t, r)); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestSourceHTMLIsDeterministic(t *testing.T) {
	for name := range sourceSamples() {
		first, second := sourcePageOf(t, sourceSamples()[name]), sourcePageOf(t, sourceSamples()[name])
		if first != second {
			t.Errorf("%s: two pages of one source differ", name)
		}
	}
}

// The page reads the result and leaves it as it was.
func TestSourceHTMLChangesNothing(t *testing.T) {
	for name, r := range sourceSamples() {
		sourcePageOf(t, r)
		if !reflect.DeepEqual(r, sourceSamples()[name]) {
			t.Errorf("%s: the result is changed", name)
		}
	}
}

func TestSourceHTMLHasNoBrokenFigures(t *testing.T) {
	broken := regexp.MustCompile(`NaN|Inf|&lt;nil&gt;|%!|0x[0-9a-f]{6}|−0(?:\.0+)?[^.0-9]|<no value>`)
	for name, r := range sourceSamples() {
		page := sourcePageOf(t, r)
		if at := broken.FindStringIndex(page); at != nil && name != "hostile" {
			t.Errorf("%s: %q", name, page[max(0, at[0]-60):min(len(page), at[1]+60)])
		}
	}
}

// Each pointer and list of a result may be null or empty by itself, whatever
// the others hold.
func TestSourceHTMLWithEveryNull(t *testing.T) {
	cleared := 0
	for at := 0; ; at++ {
		r := sampleSource()
		left := at
		name := clearOne(reflect.ValueOf(r), &left, "")
		if name == "" {
			break
		}
		cleared++
		if err := wellFormed(sourcePageOf(t, r)); err != nil {
			t.Errorf("without %s: %v", name, err)
		}
	}
	if cleared < 80 {
		t.Errorf("only %d fields cleared", cleared)
	}
}

// clearOne sets the left-th pointer or list of a value to nil and returns its
// name; of a list it looks into the first element only.
func clearOne(v reflect.Value, left *int, name string) string {
	nilable := v.Kind() == reflect.Pointer || v.Kind() == reflect.Slice
	if nilable && v.CanSet() && !v.IsNil() {
		if *left == 0 {
			v.SetZero()
			return name
		}
		*left--
	}
	switch v.Kind() {
	case reflect.Pointer:
		if !v.IsNil() {
			return clearOne(v.Elem(), left, name)
		}
	case reflect.Struct:
		for i := range v.NumField() {
			if found := clearOne(v.Field(i), left, name+"."+v.Type().Field(i).Name); found != "" {
				return found
			}
		}
	case reflect.Slice:
		if v.Len() > 0 {
			return clearOne(v.Index(0), left, name+"[0]")
		}
	}
	return ""
}

// Hostile text changes no element of the page: what a person or a file writes
// is text wherever it stands.
func TestSourceHTMLKeepsHostileTextText(t *testing.T) {
	tags := regexp.MustCompile(`</?[a-zA-Z!][a-zA-Z0-9]*`)
	shape := func(text string) string {
		return strings.Join(tags.FindAllString(sourcePageOf(t, withText(sampleSource(), text)), -1), "")
	}
	plain := shape("plain")
	for _, text := range []string{hostile, "<!--", "]]></pre><script>", "\x00\xff\u2028{{template \"x\"}}", "</svg></title><script>"} {
		if shape(text) != plain {
			t.Errorf("%q changes the elements of the page", text)
		}
	}
}

func TestSourcePolicyMatchesThePage(t *testing.T) {
	for name, r := range sourceSamples() {
		page := sourcePageOf(t, r)
		scripts, styles := scriptForm.FindAllStringSubmatch(page, -1), styleForm.FindAllStringSubmatch(page, -1)
		if len(scripts) != 1 || len(styles) != 1 {
			t.Fatalf("%s: %d scripts and %d styles, want one each", name, len(scripts), len(styles))
		}
		want := "default-src 'none'; style-src " + sourceHash(styles[0][1]) + "; script-src " + sourceHash(scripts[0][1]) + "; base-uri 'none'; form-action 'none'"
		if got := html.UnescapeString(policyForm.FindStringSubmatch(page)[1]); got != want {
			t.Errorf("%s: policy\n%s\nwant\n%s", name, got, want)
		}
	}
}

// A page must work from a file: nothing in it may point anywhere but into itself.
func TestSourceHTMLPointsNowhere(t *testing.T) {
	opening := regexp.MustCompile(`<[a-z][^>]*>|(?s)<style>.*?</style>`)
	outside := regexp.MustCompile(` (?:src|srcset|style|action)=| href="[^#]| on[a-z]+=|url\(|@import|https?:`)
	for name, r := range sourceSamples() {
		if name == "hostile" {
			continue
		}
		for _, tag := range opening.FindAllString(sourcePageOf(t, r), -1) {
			if at := outside.FindString(tag); at != "" {
				t.Errorf("%s: %s in %.100s", name, at, tag)
			}
		}
	}
}

// Every link of the page leads to an element of it.
func TestSourceHTMLLinksLead(t *testing.T) {
	for name, r := range sourceSamples() {
		page := sourcePageOf(t, r)
		for _, m := range regexp.MustCompile(` href="#([^"]+)"`).FindAllStringSubmatch(page, -1) {
			if !strings.Contains(page, ` id="`+m[1]+`"`) {
				t.Errorf("%s: no #%s", name, m[1])
			}
		}
	}
}

// Wherever a source is described the light is warned of, by standard and by
// who decides.
func TestSourceHTMLWarnsOfLight(t *testing.T) {
	for name, r := range sourceSamples() {
		if name == "hostile" {
			continue
		}
		page := sourcePageOf(t, r)
		for _, want := range []string{"invisible laser radiation", "IEC 60825-1", "IEC 60825-2", "local rules and licensed persons decide"} {
			if !strings.Contains(page, want) {
				t.Errorf("%s: nothing of %q", name, want)
			}
		}
	}
}

// Figures are numbered in the order in which they stand, each with a finding
// and, behind it, its data.
func TestSourceHTMLNumbersItsFigures(t *testing.T) {
	caption := regexp.MustCompile(`<figcaption id="caption-[a-z-]+"><b>Figure (\d+)\.</b> ([^<]+)`)
	for name, r := range sourceSamples() {
		if name == "hostile" {
			continue
		}
		page := sourcePageOf(t, r)
		for i, m := range caption.FindAllStringSubmatch(page, -1) {
			if m[1] != itoa(i+1) || len(m[2]) < 20 || !strings.Contains(page, "The data of figure "+m[1]+"<") {
				t.Errorf("%s: figure %s in place %d says %q", name, m[1], i+1, m[2])
			}
		}
	}
}

// The bars of an entry: of a full scale of 1/2, the real part of 0.25 ends
// halfway to the right, an imaginary part of -0.5 at the left end.
func TestTwoBars(t *testing.T) {
	bars := string(twoBars(source.Complex{Re: 0.25, Im: -0.5}, 0.5))
	for _, want := range []string{`class="bar-re" x="32" y="1.5" width="15.5"`, `class="bar-im" x="1" y="8.5" width="31"`, "real part 0.250, imaginary part −0.500"} {
		if !strings.Contains(bars, want) {
			t.Errorf("no %s in %s", want, bars)
		}
	}
}

func TestMeasured(t *testing.T) {
	for _, c := range []struct {
		v, sd float64
		want  string
	}{
		{0.8342, 0.0113, "0.834_±_0.011"},
		{0.8342, 0.00996, "0.834_±_0.010"},
		{411234, 8321, "411_200_±_8300"},
		{-312.44, 1.2, "−312.4_±_1.2"},
		{0.5, 0, "0.5"},
		{12345678, 120, "12_345_680_±_120"},
		{0.00012, 0.00003, "0.00012_±_3×10⁻⁵"},
	} {
		if got := strings.ReplaceAll(measured(fig(c.v, c.sd), 1), nbsp, "_"); got != c.want {
			t.Errorf("%g and %g: %s, want %s", c.v, c.sd, got, c.want)
		}
	}
}

func TestSourceHTMLPassesOnAWriteError(t *testing.T) {
	var f failing
	if err := SourceHTML(&f, sampleSource()); err == nil || !strings.Contains(err.Error(), "no space left") || f != 1 {
		t.Errorf("error %v after %d pieces", err, f)
	}
}

// A long file is not repeated whole, and its page says so.
func TestSourceHTMLCutsLongFiles(t *testing.T) {
	r := sampleSource()
	r.Inputs[0].Text = strings.Repeat("H,V,1204,π\n", 100_000)
	page := sourcePageOf(t, r)
	if len(page) > 1<<20 || !strings.Contains(page, "1"+nbsp+"200"+nbsp+"000 bytes; the SHA-256 is of them all") {
		t.Errorf("a page of %d bytes", len(page))
	}
	if err := wellFormed(page); err != nil {
		t.Error(err)
	}
}

// The scale of a map has one direction: the greater the figure, the denser the
// ink, from the faintest that is seen to all.
func TestHeatMapScaleRises(t *testing.T) {
	m := heatMap{Lo: 0.2, Hi: 0.9}
	before := 0.0
	for _, v := range []float64{0.2, 0.3, 0.5, 0.7, 0.9} {
		if d := m.density(v); d <= before || d > 1 {
			t.Errorf("density %g at %g after %g", d, v, before)
		} else {
			before = d
		}
	}
	if before != 1 {
		t.Errorf("the greatest figure has a density of %g", before)
	}
}

// A bin stands where its wavelengths are: of two by two bins, Alice's second
// and Bob's first fill the lower right quarter.
func TestHeatMapPlaces(t *testing.T) {
	m := heatMap{ID: "m", EdgeNm: [2][]float64{{1, 2, 3}, {5, 6, 7}}, Cells: []heatCell{{[2]int{1, 0}, 1}}, Lo: 0, Hi: 1, Label: share}
	side := mapWidth - mapGutter - 10
	want := "M" + pixels(mapGutter+side/2) + " " + pixels(mapTop+side/2) + "H" + pixels(mapGutter+side) + "V" + pixels(mapTop+side) + "H" + pixels(mapGutter+side/2) + "Z"
	if got := string(m.draw("")); !strings.Contains(got, want) {
		t.Errorf("no cell %s", want)
	}
}

// A scan of order 2 is told as one whose pairs grow as the square of the power.
func TestScanFindingNamesTheOrder(t *testing.T) {
	want := "411" + nbsp + "000" + nbsp + "±" + nbsp + "8300 pairs per second at 1" + nbsp + "mW, growing as the square of the power"
	if got := scanFinding(sampleScan()); !strings.Contains(got, want) {
		t.Errorf("no %q in %q", want, got)
	}
}
