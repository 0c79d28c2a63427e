package plan

import (
	"encoding/json"
	"strings"
	"testing"

	"pairspan/scenarios"
	"pairspan/sources"
)

// TestSearchedSettingsEverywhere plans scenarios that leave their pump, and
// all else they can, to the planner.
func TestSearchedSettingsEverywhere(t *testing.T) {
	const pair, pulse, share = "source.pair_rate_hz", "source.pairs_per_pulse", "key_basis_share"
	short := set{"distance.points", "9"}
	for name, s := range map[string]*scenarios.Scenario{
		"pump":          read(t, short, set{pair, "auto"}),
		"pulsed":        parse(t, pulsedBase, short, set{pulse, "auto"}),
		"blocks":        read(t, short, blocks, set{pair, "auto"}, set{share, "auto"}),
		"pulsed blocks": parse(t, pulsedBase, short, blocks, set{pulse, "auto"}, set{share, "auto"}),
		"fixed window":  read(t, short, set{pair, "auto"}, set{"window_ps", "500"}),
	} {
		p, err := New(t.Context(), s, "test", nil)
		if err != nil {
			t.Fatal(err)
		}
		text, err := json.Marshal(p)
		if err != nil || strings.Contains(string(text), "NaN") {
			t.Errorf("%s: %v, or a NaN in words", name, err)
		}
		c, ceiling := &p.Cases[0], ceilingHz(s)
		if *c.Best.Factor > 1.5 || (s.WindowAuto && *c.Best.Factor > 1.0001) {
			t.Errorf("%s: the best setting makes %v times as much", name, *c.Best.Factor)
		}
		settings := map[float64]bool{}
		for _, at := range append(c.Curve, c.Installed) {
			b := at.Bounds
			settings[at.PairRateHz] = true
			if !(at.PairRateHz > 0 && at.PairRateHz <= ceiling && b.AtWorst.PairRateHz <= ceiling) ||
				!(b.AtWorst.UsableRateBps <= *at.UsableRateBps && *at.UsableRateBps <= b.AtBest.UsableRateBps) {
				t.Errorf("%s at %v km: %v pairs/s, %v bit/s within %+v", name, at.DistanceKm, at.PairRateHz, *at.UsableRateBps, *b)
			}
		}
		if len(settings) < 3 {
			t.Errorf("%s: the same pump at all distances: %v", name, settings)
		}
		for _, part := range c.Answer.Parts {
			if part.Part == "pump" {
				t.Errorf("%s: the pump is in the way, though it is searched", name)
			}
		}
		a := newAsker(s)
		for _, step := range []struct {
			db  float64
			met bool
		}{{*c.Answer.MarginDB, true}, {*c.Answer.MarginDB + 0.01, false}} {
			if a.meets(a.at(s.DistanceKm(), judged, a.lose(step.db))) != step.met {
				t.Errorf("%s: a loss of %v dB added: met is %v", name, step.db, !step.met)
			}
		}
		for _, step := range []struct {
			km  float64
			met bool
		}{{*c.Answer.ReachKm, true}, {*c.Answer.ReachKm + 0.05, false}} {
			if a.meets(a.at(step.km, judged, nil)) != step.met {
				t.Errorf("%s: at %v km met is %v", name, step.km, !step.met)
			}
		}
	}
}

func ceilingHz(s *scenarios.Scenario) float64 {
	x, _ := s.Ceiling()
	return x
}

// TestSearchedPumpWithoutState: the counts are those of the ceiling, and
// nothing is said of pairs in a slot that nobody chose.
func TestSearchedPumpWithoutState(t *testing.T) {
	text := strings.NewReplacer("  state: { tangle: 0.86 }\n", "", " pair_rate_hz: 2.0e+6", " pair_rate_hz: auto", "2.0e+7", "2.0e+11").Replace(base)
	p, err := New(t.Context(), parse(t, text), "test", nil)
	if err != nil {
		t.Fatal(err)
	}
	c := &p.Cases[0]
	if c.Answer.Outcome != StateUnknown || c.Best != nil || c.Limits != nil || c.Block != nil || c.Installed.PairRateHz != 2e11 || c.Installed.PairsPerSlot != nil {
		t.Errorf("%s, %+v", c.Answer.Outcome, c.Installed)
	}
	for _, w := range p.Warnings {
		if w.Rule == "too-many-pairs" || w.Rule == "detector-timing" || w.Rule == "coincidences-as-pairs" {
			t.Errorf("warned of a pump that nobody chose: %s", w.Sentence)
		}
	}
	tangle := figure(*c.Answer.LeastTangle + 1e-6)
	known := strings.NewReplacer(" pair_rate_hz: 2.0e+6", " pair_rate_hz: auto", "2.0e+7", "2.0e+11", "0.86", tangle).Replace(base)
	if got := answeredCase(parse(t, known)).Answer.Outcome; got != Met {
		t.Errorf("a tangle of %s: %s", tangle, got)
	}
}

// TestBestMemberOfASearchedShare: with shares that may part, either member may
// be the best, and both are asked.
func TestBestMemberOfASearchedShare(t *testing.T) {
	a := newAsker(read(t, blocks, set{"key_basis_share", "auto"}))
	got := a.at(a.s.DistanceKm(), atBest, nil).rate.UsableBps
	for _, m := range []sources.Member{sources.BestDephased, sources.BestEven} {
		if r := a.settle(a.s.Link(a.s.DistanceKm(), m)); r.rate.UsableBps > got {
			t.Errorf("member %v makes %v, more than the best, %v", m, r.rate.UsableBps, got)
		}
	}
	if len(a.members(atBest)) != 2 {
		t.Errorf("members at best: %v", a.members(atBest))
	}
}
