package plan

import (
	"context"
	"encoding/json"
	"regexp"
	"strings"
	"sync"
	"testing"
)

// richPlan is made once; no test changes it.
func richPlan(t *testing.T) *Plan {
	t.Helper()
	richOnce.Do(func() {
		p, err := New(context.Background(), richScenario(t), "test", nil)
		if err != nil {
			t.Fatal(err)
		}
		richMade = p
	})
	return richMade
}

var (
	richOnce sync.Once
	richMade *Plan
)

func asJSON(t *testing.T, p *Plan) string {
	t.Helper()
	text, err := json.Marshal(p)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// No word of the person's, no price and no file name may be left anywhere in
// the plan, whatever part of it was added later.
func TestWithholdLeavesNothing(t *testing.T) {
	p := richPlan(t)
	before := asJSON(t, p)
	secret := regexp.MustCompile(`(?i)` + marker + `|77008800[1-6]|pulsed-state\.csv`)
	if found := secret.FindAllString(before, -1); len(found) < 20 {
		t.Fatalf("the whole plan holds %d of what is to be withheld: the test sees nothing", len(found))
	}
	text := asJSON(t, p.Withhold())
	for _, at := range secret.FindAllStringIndex(text, -1) {
		t.Errorf("left: %s", text[max(0, at[0]-80):min(len(text), at[1]+20)])
	}
	if asJSON(t, p) != before {
		t.Error("the plan that was given is changed")
	}
}

// What stays is the link: every figure, what inputs are known by, and the
// hashes of the files.
func TestWithholdKeepsTheLink(t *testing.T) {
	whole := richPlan(t)
	p := whole.Withhold()
	if len(p.Withheld) == 0 || len(whole.Withheld) != 0 {
		t.Errorf("withheld %q of the copy, %q of the whole", p.Withheld, whole.Withheld)
	}
	if p.Inputs[0].SHA256 != whole.Inputs[0].SHA256 || p.Inputs[0].Text != "" {
		t.Errorf("input %+v", p.Inputs[0])
	}
	want := []string{
		"as filed", "arms.bob.detector=nanowire", "detectors.nanowire.price=withheld, arms.alice.detector=nanowire",
		"source.state={ density_matrix: withheld }", "detectors.nanowire.price=withheld, arms.alice.detector=nanowire (2)",
	}
	for i, name := range want {
		if p.Cases[i].Name != name {
			t.Errorf("case %d is %q, want %q", i, p.Cases[i].Name, name)
		}
	}
	if last := p.Cases[len(p.Cases)-1].Name; !strings.Contains(last, "+nanowire") {
		t.Errorf("a pair of detectors is named %q", last)
	}
	known := func(p *Plan) string {
		var b strings.Builder
		for _, e := range p.Entries {
			if e.KnownBy != nil {
				b.WriteString(e.Entry + " " + e.Value + " " + *e.KnownBy + "\n")
			}
		}
		return b.String()
	}
	if known(p) != known(whole) {
		t.Error("inputs of the link, or what they are known by, are not those of the whole plan")
	}
	for i := range p.Cases {
		if p.Cases[i].Installed.UsableRateBps != whole.Cases[i].Installed.UsableRateBps {
			t.Errorf("case %d has another rate", i)
		}
	}
}
