package report

import (
	"regexp"
	"slices"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
)

// decidingParts are what stands on a page for each part of a plan, and how the
// part is taken out.
var decidingParts = []struct {
	name, marks string
	clear       func(*plan.Plan)
}{
	{"best", ` id="best" id="best-settings"`, func(p *plan.Plan) {
		for i := range p.Cases {
			p.Cases[i].Best = nil
		}
	}},
	{"limits", ` id="limits" id="figure-limits"`, func(p *plan.Plan) { p.Cases[0].Limits = nil }},
	{"serves", ` id="still-serve"`, func(p *plan.Plan) { p.Cases[0].Serves = nil }},
	{"elasticities", ` id="figure-elasticities"`, func(p *plan.Plan) { p.Cases[0].Elasticities = nil }},
	{"tangle", ` id="figure-tangle"`, func(p *plan.Plan) { p.Cases[0].TangleNeeded = nil }},
	{"needs", ` id="needs"`, func(p *plan.Plan) { p.Needs = nil }},
	{"block", ` id="block" id="figure-blocks"`, func(p *plan.Plan) { p.Cases[0].Block = nil }},
	{"uncertainty", ` id="uncertainty" id="quantiles" id="figure-bands" id="figure-shares"`, func(p *plan.Plan) { p.Cases[0].Uncertainty = nil }},
	{"buying", ` id="buying" id="costs" id="overtakes" id="turns"`, func(p *plan.Plan) { p.Buying = nil }},
	{"against", ` id="against" id="figure-against-rate" id="figure-against-qber"`, func(p *plan.Plan) { p.Against = nil }},
	{"acceptance", ` id="acceptance" id="acceptance-sheet" id="deviations" id="correlations"`, func(p *plan.Plan) { p.Cases[0].Acceptance = nil }},
}

var mark = regexp.MustCompile(` id="[^"]+"`)

// Each part stands on the page where the plan has it, and leaves nothing behind
// where it is null, whatever the others hold.
func TestDecidingPartsComeAndGo(t *testing.T) {
	whole := pageOf(t, decidedPlan(), fakeLibrary)
	for _, part := range decidingParts {
		p := decidedPlan()
		part.clear(p)
		page := pageOf(t, p, fakeLibrary)
		if err := wellFormed(page); err != nil {
			t.Errorf("without %s: %v", part.name, err)
		}
		for _, m := range mark.FindAllString(part.marks, -1) {
			if n := strings.Count(whole, m); n != 1 {
				t.Errorf("%s stands %d times", m, n)
			}
			if strings.Contains(page, m) {
				t.Errorf("without %s there is still%s", part.name, m)
			}
		}
	}
}

// Plans without a state, a need, a key or anything at all have a page with the
// parts filled or not, and no figure on it is none.
func TestDecidingOfOddPlans(t *testing.T) {
	broken := regexp.MustCompile(`NaN|Inf|&lt;nil&gt;|%!|<no value>`)
	odd := map[string]*plan.Plan{"decided": decidedPlan(), "known": decide(knownPlan2()), "no key": decide(zeroPlan())}
	for name, change := range map[string]func(*plan.Plan){
		"no draws": func(p *plan.Plan) {
			u := p.Cases[0].Uncertainty
			u.Draws, u.ChanceMet, u.ReachKm, u.Shares, u.Bands = 0, nil, nil, nil, nil
		},
		"no need": func(p *plan.Plan) {
			p.Cases[0].Answer.NeedBps, p.Needs, p.Cases[0].Serves, p.Cases[0].TangleNeeded = nil, nil, nil, nil
		},
		"no tangle is enough": func(p *plan.Plan) {
			for i := range p.Cases[0].TangleNeeded {
				p.Cases[0].TangleNeeded[i] = plan.TangleNeeded{DistanceKm: float64(i)}
			}
		},
		"no key in blocks": func(p *plan.Plan) {
			p.Cases[0].Block = &plan.Block{SiftedBits: 1e3, EpsilonTotal: 1e-10}
		},
		"bare parts": func(p *plan.Plan) {
			c := &p.Cases[0]
			c.Best, c.Limits, c.Uncertainty, c.Acceptance = &plan.Best{}, &plan.Limits{Points: make([]plan.LimitPoint, 1)}, &plan.Uncertainty{Draws: 1, Bands: make([]plan.Band, 1), Shares: make([]plan.Share, 1)}, &plan.Acceptance{}
			p.Needs, p.Buying = &plan.Needs{}, &plan.Buying{}
			c.Elasticities = make([]plan.Elasticity, 1)
			p.Against = &plan.Against{Cases: []plan.AgainstCase{{Points: make([]plan.AgainstPoint, 1)}}}
		},
		"measured nothing": func(p *plan.Plan) {
			a := p.Cases[0].Acceptance
			a.Rows[0].Measured, a.CHSH, a.Visibility, a.FiveSigmaS, a.LevelsOf = nil, nil, nil, nil, nil
		},
	} {
		odd[name] = decidedPlan()
		change(odd[name])
	}
	for name, p := range odd {
		page := pageOf(t, p, fakeLibrary)
		if err := wellFormed(page); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		if at := broken.FindStringIndex(page); at != nil {
			t.Errorf("%s: %q", name, page[max(0, at[0]-60):min(len(page), at[1]+60)])
		}
		if page != pageOf(t, p, fakeLibrary) {
			t.Errorf("%s: two pages of one plan differ", name)
		}
	}
}

// knownPlan2 is the known plan with a compared case more, as decide needs two.
func knownPlan2() *plan.Plan {
	p := knownPlan()
	for range 5 {
		p.Cases = append(p.Cases, sampleCase("other", 33, false))
	}
	return p
}

// The figures keep to the order of the page, and their captions to their numbers.
func TestDecidingFiguresAreNumberedInOrder(t *testing.T) {
	page := pageOf(t, decidedPlan(), fakeLibrary)
	var numbers []string
	for _, m := range regexp.MustCompile(`<b>Figure (\d+)\.</b>`).FindAllStringSubmatch(page, -1) {
		numbers = append(numbers, m[1])
	}
	var want []string
	for i := range numbers {
		want = append(want, itoa(i+1))
	}
	if len(numbers) != 13 || !slices.Equal(numbers, want) {
		t.Errorf("figures %v, want 1 to 13 in order", numbers)
	}
}

// What a page must not pass over in silence.
func TestDecidingSays(t *testing.T) {
	page := strings.ReplaceAll(pageOf(t, decidedPlan(), fakeLibrary), nbsp, " ")
	for _, want := range []string{
		"IEC 60825-1", "IEC 60825-2", "cryogens", "Local rules and licensed persons decide",
		"the check basis is disclosed", "is kept apart", "repeaterless bound", "no value does", "every value does",
		"The need is met in 1987 of 2000 draws.", "0.86 ± 0.02", "cheapest with 3 dB to spare",
		"A new AES-256 key of each of 4 connections every", "1.77 dB missing in Alice&#39;s arm",
	} {
		if !strings.Contains(page, want) {
			t.Errorf("the page does not say %q", want)
		}
	}
	p := decidedPlan()
	p.Deviations, p.Cases[0].Serves, p.Entries = nil, nil, nil
	if page := pageOf(t, p, fakeLibrary); !strings.Contains(page, "states no tangle") {
		t.Error("the page does not say that no tangle is stated")
	}
}

// Without the library the tables stand in place of the charts, and a copy for
// others has no money in it.
func TestDecidingWithoutLibraryAndWithheld(t *testing.T) {
	if page := pageOf(t, decidedPlan(), library{}); !strings.Contains(page, `id="limits-data"`) || strings.Contains(page, `id="options-limits"`) {
		t.Error("without the library the limits have no table, or options")
	}
	page := pageOf(t, decidedPlan().Withhold(), fakeLibrary)
	for _, gone := range []string{"What to buy", "88" + nbsp + "000", "150" + nbsp + "000", "88000"} {
		if strings.Contains(page, gone) {
			t.Errorf("a copy for others says %q", gone)
		}
	}
}

func TestSourceTangle(t *testing.T) {
	p := decidedPlan()
	check := func(what string, has, sd float64, known bool) {
		t.Helper()
		if h, s, k := statedTangle(p); h != has || s != sd || k != known {
			t.Errorf("%s: %g ± %g, %t", what, h, s, k)
		}
	}
	check("a deviation", 0.86, 0.02, true)
	p.Deviations = nil
	check("an answer", 0.86, 0, true)
	p.Cases[0].Serves = nil
	check("an entry", 0.86, 0, true)
	p.Entries = nil
	check("nothing", 0, 0, false)
}
