package report

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

var variableForm = regexp.MustCompile(`--([a-z0-9-]+): (#[0-9a-f]{6})`)

// schemes returns the colours of the light and the dark scheme.
func schemes(t *testing.T) map[string]map[string]string {
	t.Helper()
	style := pageText("style.css")
	light, dark, ok := strings.Cut(style[:strings.Index(style, "* {")], "@media")
	if !ok {
		t.Fatal("no dark scheme in the style")
	}
	all := map[string]map[string]string{"light": {}, "dark": {}}
	for name, text := range map[string]string{"light": light, "dark": dark} {
		for _, m := range variableForm.FindAllStringSubmatch(text, -1) {
			all[name][m[1]] = m[2]
		}
	}
	return all
}

// luminance is the relative luminance of sRGB.
//
// Source: W3C, Web Content Accessibility Guidelines 2.1, "relative luminance".
func luminance(t *testing.T, colour string) float64 {
	t.Helper()
	var sum float64
	for i, weight := range []float64{0.2126, 0.7152, 0.0722} {
		v, err := strconv.ParseUint(colour[1+2*i:3+2*i], 16, 8)
		if err != nil {
			t.Fatal(err)
		}
		c := float64(v) / 255
		if c <= 0.04045 {
			sum += weight * c / 12.92
		} else {
			sum += weight * math.Pow((c+0.055)/1.055, 2.4)
		}
	}
	return sum
}

func contrast(t *testing.T, a, b string) float64 {
	t.Helper()
	la, lb := luminance(t, a), luminance(t, b)
	return (max(la, lb) + 0.05) / (min(la, lb) + 0.05)
}

// Published: level AA of the Web Content Accessibility Guidelines 2.2 asks for
// 4.5 to 1 for text (1.4.3) and 3 to 1 for lines and marks (1.4.11). The colours
// of lines are those of the names at their ends, so they count as text.
func TestPublishedContrast(t *testing.T) {
	if got := contrast(t, "#000000", "#ffffff"); math.Abs(got-21) > 1e-9 {
		t.Fatalf("black on white is %g to 1, want 21", got)
	}
	for scheme, colours := range schemes(t) {
		need := map[string]float64{"ink": 4.5, "ink-soft": 4.5, "link": 4.5, "accent": 3}
		for i := range lineColours {
			need[fmt.Sprintf("line-%d", i)] = 4.5
		}
		for name, want := range need {
			for _, ground := range []string{"paper", "wash"} {
				if colours[name] == "" || colours[ground] == "" {
					t.Fatalf("the %s scheme lacks --%s or --%s", scheme, name, ground)
				}
				if got := contrast(t, colours[name], colours[ground]); got < want {
					t.Errorf("%s: --%s on --%s is %.2f to 1, want %g", scheme, name, ground, got, want)
				}
			}
		}
	}
}

// Every colour and dash that a chart names is in the style and the script of the charts.
func TestStyleHasWhatChartsName(t *testing.T) {
	style, boot := pageText("style.css"), pageText("charts.js")
	for i := range lineColours {
		if want := fmt.Sprintf(".line-%d { --key: var(--line-%d); }", i, i); !strings.Contains(style, want) {
			t.Errorf("the style lacks %s", want)
		}
	}
	for _, d := range dashes {
		form := d.Name + `: [` + strings.ReplaceAll(d.Pattern, " ", ", ") + `]`
		if d.Pattern == "" {
			form = d.Name + `: "` + d.Name + `"`
		}
		if !strings.Contains(boot, form) {
			t.Errorf("the script of the charts lacks %s", form)
		}
	}
	for _, kind := range []string{"km", "number", "rate", "percent"} {
		if !strings.Contains(boot, "\n    "+kind+": { axis:") {
			t.Errorf("the script of the charts has no format %s", kind)
		}
	}
}
