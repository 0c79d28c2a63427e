package plan

import (
	"slices"
	"strings"
	"testing"

	"pairspan/scenarios"
)

// doubtful holds at least one scenario a rule, and what the rule suspects.
// usable is true where asking again with the suspected value gives another
// rate.
var doubtful = []struct {
	rule, entry string
	changes     []set
	again       bool
}{
	{"efficiency-twice", "arms.alice.fixed_loss_db", []set{{"arms.alice.fixed_loss_db", "10.5"}}, true},
	{"efficiency-twice", "arms.bob.fixed_loss_db", []set{{"arms.bob.fixed_loss_db", "9.9"}}, true},
	{"coincidences-as-pairs", "source.pair_rate_hz", []set{{"source.pair_rate_hz", "20000"}}, true},
	{"coincidences-as-pairs", "source.pairs_per_pulse", []set{{"source.pulse_rate_hz", "100.0e+6"}, {"source.pairs_per_pulse", "5.0e-5"}}, true},
	{"too-many-pairs", "source.pairs_per_pulse", []set{{"source.pulse_rate_hz", "100.0e+6"}, {"source.pairs_per_pulse", "0.21"}, {"source.state.tangle", "1"}}, true},
	{"crowded-window", "source.pair_rate_hz", []set{{"source.max_pair_rate_hz", "1.0e+8"}, {"source.pair_rate_hz", "1.0e+8"}, {"window_ps", "500"}, {"arms.alice.detector", "nanowire"}}, false},
	{"window-and-pulses", "window_ps", []set{{"source.pulse_rate_hz", "1.0e+9"}, {"source.pairs_per_pulse", "0.01"}, {"window_ps", "800"}}, true},
	{"window-and-spread", "window_ps", []set{{"window_ps", "50"}}, true},
	{"window-and-spread", "window_ps", []set{{"window_ps", "5000"}}, true},
	{"dark-counts", "detectors.free_running.dark_counts_hz", []set{{"detectors.free_running.dark_counts_hz", "1.0e-6"}}, true},
	{"dark-counts", "detectors.free_running.dark_counts_hz", []set{{"detectors.free_running.dark_counts_hz", "60000"}, {"arms.bob.length_km", "20"}, {"source.state.tangle", "0.95"}}, true},
	{"dark-counts", "detectors.free_running.dark_counts_hz", []set{{"detectors.free_running.dark_counts_hz", "0"}}, false},
	{"detector-timing", "detectors.free_running.dead_time_ns", []set{{"detectors.free_running.dead_time_ns", "10"}}, true},
	{"detector-timing", "detectors.free_running.jitter_fwhm_ps", []set{{"detectors.free_running.jitter_fwhm_ps", "0.18"}}, true},
	{"detector-timing", "detectors.free_running.jitter_fwhm_ps", []set{{"detectors.free_running.jitter_fwhm_ps", "0"}}, false},
	{"detector-timing", "detectors.free_running.dead_time_ns", []set{{"detectors.free_running.dead_time_ns", "100000"}}, true},
	{"per-cent-or-fraction", "arms.bob.misalignment_error", []set{{"arms.bob.misalignment_error", "0.5"}}, true},
	{"per-cent-or-fraction", "detectors.free_running.afterpulsing", []set{{"detectors.free_running.afterpulsing", "0.3"}}, true},
	{"per-cent-or-fraction", "detectors.free_running.efficiency", []set{{"detectors.free_running.efficiency", "0.002"}}, true},
	{"per-cent-or-fraction", "duty_cycle", []set{{"duty_cycle", "0.009"}}, true},
	{"tomography-not-repeated", "uncertainty.tomography", []set{{"uncertainty.tomography", "repeated"}}, false},
	{"state-with-accidentals", "source.state", []set{{"source.pair_rate_hz", "1.0e+7"}, {"window_ps", "800"}}, true},
	{"light-and-glass", "arms.bob.fibre", []set{{"source.wavelength_nm", "{ alice: 1550, bob: 1200 }"}, {"arms.bob.loss_db_per_km", "1.2"}}, false},
	{"light-and-glass", "arms.bob.loss_db_per_km", []set{{"source.wavelength_nm", "{ alice: 1550, bob: 810 }"}, {"arms.bob.loss_db_per_km", "0.3"}}, true},
	{"light-and-glass", "detectors.free_running.efficiency", []set{{"detectors.free_running.class", "silicon"}, {"detectors.free_running.efficiency", "0.6"}}, true},
	{"light-and-glass", "detectors.free_running.efficiency", []set{
		{"detectors.free_running.class", "ingaas"},
		{"detectors.free_running.efficiency", "0.6"},
		{"source.wavelength_nm", "{ alice: 810, bob: 810 }"},
		{"arms.alice.loss_db_per_km", "3"},
		{"arms.bob.loss_db_per_km", "3"},
	}, true},
	{"splitter-as-loss", "arms.alice.fixed_loss_db", []set{{"arms.alice.fixed_loss_db", "3.0"}}, true},
}

// TestWarnings finds each doubtful input, with what it would change.
func TestWarnings(t *testing.T) {
	seen := map[string]bool{}
	for _, d := range doubtful {
		p := planned(t, d.changes...)
		w := warningOf(p, d.rule, d.entry)
		switch {
		case w == nil:
			t.Errorf("%s %s is not among %v", d.rule, d.changes, p.Warnings)
		case d.again && (w.UsableRateBps == nil || *w.UsableRateBps == *p.Cases[0].Answer.UsableRateBps):
			t.Errorf("%s: asked again, the rate is %v", d.rule, w.UsableRateBps)
		case !d.again && w.UsableRateBps != nil:
			t.Errorf("%s: asked again with what?", d.rule)
		}
		seen[d.rule] = true
	}
	for _, r := range rules {
		if !seen[r.name] && !slices.Contains(scenarios.RepairRules, r.name) { // those the next test holds
			t.Errorf("%s has no doubtful scenario", r.name)
		}
	}
}

// TestRepairsAreWarnings: whatever reading mends or doubts is said.
func TestRepairsAreWarnings(t *testing.T) {
	s := parse(t, base)
	for _, rule := range scenarios.RepairRules {
		s.Repairs = append(s.Repairs, scenarios.Repair{Rule: rule, Entry: "source", Sentence: "doubtful: " + rule})
	}
	var said []string
	for _, w := range warnings([]named{{"as filed", nil, newAsker(s)}}) {
		if w.Sentence == "doubtful: "+w.Rule {
			said = append(said, w.Rule)
		}
	}
	if !slices.Equal(said, scenarios.RepairRules) {
		t.Errorf("said %v of %v", said, scenarios.RepairRules)
	}
}

func warningOf(p *Plan, rule, entry string) *Warning {
	for i := range p.Warnings {
		if p.Warnings[i].Rule == rule && p.Warnings[i].Entry == entry {
			return &p.Warnings[i]
		}
	}
	return nil
}

// TestNoDoubt: a usual link has none.
func TestNoDoubt(t *testing.T) {
	if p := planned(t); len(p.Warnings) > 0 {
		t.Errorf("%v", p.Warnings)
	}
}

// TestWarningsWithCounts: with counts at the source, a fixed loss that is the
// heralding loss holds the detector's efficiency already.
func TestWarningsWithCounts(t *testing.T) {
	text := strings.Replace(base, "  pair_rate_hz: 2.0e+6\n", `  counted:
    singles_hz: { alice: 40000, bob: 40000 }
    coincidences_hz: 4000
    window_ps: 1000
    background_hz: { alice: 1200, bob: 1200 }
    detector: { alice: free_running, bob: free_running }
`, 1)
	s := parse(t, text, set{Entry: "arms.bob.fixed_loss_db", Value: "9.9"})
	found := warnings([]named{{"as filed", nil, newAsker(s)}})
	for _, w := range found {
		if w.Rule == "efficiency-twice" && w.Entry == "arms.bob.fixed_loss_db" {
			return
		}
	}
	t.Errorf("a fixed loss of -10 log10(4000/40000) = 10 dB is not doubted: %v", found)
}

// TestWarningsAreOrdered by what they would change.
func TestWarningsAreOrdered(t *testing.T) {
	p := planned(t, set{Entry: "arms.bob.misalignment_error", Value: "0.12"}, set{Entry: "window_ps", Value: "3000"},
		set{Entry: "duty_cycle", Value: "0.04"})
	usable := *p.Cases[0].Answer.UsableRateBps
	last := -1.0
	for i := len(p.Warnings) - 1; i >= 0; i-- {
		change := 0.0
		if u := p.Warnings[i].UsableRateBps; u != nil {
			change = abs(*u - usable)
		}
		if change < last {
			t.Errorf("%v before %v", p.Warnings[i], p.Warnings[i+1])
		}
		last = change
	}
	if len(p.Warnings) < 3 {
		t.Errorf("only %v", p.Warnings)
	}
}
