package report

import (
	"bytes"
	"strings"
	"testing"
	"unicode"
	"unicode/utf8"

	"pairspan/scenarios/plan"
)

// TestTextOfEverySample fits one screen, whatever the plan holds, and keeps
// control characters out.
func TestTextOfEverySample(t *testing.T) {
	for name, p := range samplePlans() {
		var b bytes.Buffer
		if err := Text(&b, p); err != nil {
			t.Fatal(err)
		}
		fitsOneScreen(t, name, b.String())
	}
}

// fitsOneScreen holds a text to the lines and columns of a terminal, without
// control characters or figures that are none.
func fitsOneScreen(t *testing.T, name, text string) {
	t.Helper()
	lines := strings.Split(strings.TrimSuffix(text, "\n"), "\n")
	if len(lines) > mostLines {
		t.Errorf("%s: %d lines", name, len(lines))
	}
	for _, line := range lines {
		if utf8.RuneCountInString(line) > textWidth || strings.IndexFunc(line, unicode.IsControl) >= 0 {
			t.Errorf("%s: %q", name, line)
		}
	}
	if strings.Contains(text, "NaN") || strings.Contains(text, "<nil>") {
		t.Errorf("%s:\n%s", name, text)
	}
}

// TestTextSaysWhatMatters: the answer stands in the first lines, the caution
// in the last, and the person's own words are kept.
func TestTextSaysWhatMatters(t *testing.T) {
	p := samplePlan()
	p.Title = "Höhenweg"
	p.Warnings = []plan.Warning{{Rule: "r", Entry: "duty_cycle", Sentence: strings.Repeat("long ", 60)}}
	var b bytes.Buffer
	if err := Text(&b, p); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	start, _, _ := strings.Cut(text, "From pairs to key")
	flat := strings.Join(strings.Fields(start), " ")
	if !strings.HasPrefix(text, "Höhenweg\n") || !strings.Contains(flat, strings.Join(strings.Fields(ascii(p.Cases[0].Answer.Sentence)), " ")) {
		t.Errorf("the page begins with\n%s", start)
	}
	if !strings.Contains(text, "Doubtful: duty_cycle: long") || !strings.Contains(text, "no") || !strings.Contains(text[len(text)-200:], "not a security claim") {
		t.Errorf("the page ends with\n%s", text[len(text)-400:])
	}
}

// TestCasesAreSortedInText: best margin first.
func TestCasesAreSortedInText(t *testing.T) {
	p := samplePlan()
	order := byMargin(p.Cases)
	for n := 1; n < len(order); n++ {
		a, b := p.Cases[order[n-1]].Answer.MarginDB, p.Cases[order[n]].Answer.MarginDB
		if a != nil && b != nil && *a < *b {
			t.Errorf("%v before %v", *a, *b)
		}
	}
}
