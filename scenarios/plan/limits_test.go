package plan

import (
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"

	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/sources"
)

// limitsOf are the limits at so many distances up to 40 km.
func limitsOf(t testing.TB, s *scenarios.Scenario, points int) *Limits {
	t.Helper()
	curve := make([]Point, points)
	for i := range curve {
		curve[i].DistanceKm = 40 * float64(i) / float64(max(1, points-1))
	}
	found, err := newAsker(s).limits(t.Context(), curve, func() {})
	if err != nil {
		t.Fatal(err)
	}
	return found
}

// TestLimitsAreInOrder: the best setting makes no less than the one described,
// a perfect state and perfect detectors no less than that; and none of what
// exists exceeds the bound of a direct line.
func TestLimitsAreInOrder(t *testing.T) {
	for _, row := range settable(t) {
		for _, p := range limitsOf(t, row.s, 25).Points {
			if !(p.AsDescribedBps <= p.AtBestBps && p.AtBestBps <= p.PerfectStateBps && p.AtBestBps <= p.PerfectDetectorsBps && p.PerfectStateBps < *p.RepeaterlessBps) {
				t.Errorf("%s: %+v, at most %v", row.name, p, *p.RepeaterlessBps)
			}
		}
	}
}

// TestLimitsPutBack states what each limit supposes in the scenario, leaves all
// that can be set to the planner, and plans it.
func TestLimitsPutBack(t *testing.T) {
	const perfect = "{ efficiency: 1, dark_counts_hz: 0, jitter_fwhm_ps: 0, dead_time_ns: 0 }"
	auto := []set{{"source.pair_rate_hz", "auto"}, {"window_ps", "auto"}}
	pulsedAuto := []set{{"source.pairs_per_pulse", "auto"}, {"window_ps", "auto"}}
	noisy := set{"arms.bob.background_counts_hz", "700"}
	for _, row := range []struct {
		name    string
		text    string
		changes []set
		auto    []set
	}{
		{"continuous", base, []set{noisy}, auto},
		{"blocks", base, []set{blocks}, append(auto, set{"key_basis_share", "auto"})},
		{"pulsed", pulsedBase, []set{noisy}, pulsedAuto},
		{"pulsed blocks", pulsedBase, []set{blocks}, append(pulsedAuto, set{"key_basis_share", "auto"})},
	} {
		l := newLimiter(newAsker(parse(t, row.text, row.changes...)))
		p := l.point(l.s.DistanceKm())
		for _, limit := range []struct {
			name    string
			changes []set
			got     float64
		}{
			{"as described", nil, p.AsDescribedBps},
			{"best setting", row.auto, p.AtBestBps},
			{"perfect state", slices.Concat(row.auto, []set{{"source.state.tangle", "1"}}), p.PerfectStateBps},
			{"perfect detectors", slices.Concat(row.auto, []set{{"detectors.free_running", perfect}}), p.PerfectDetectorsBps},
		} {
			a := newAsker(parse(t, row.text, slices.Concat(row.changes, limit.changes)...))
			if want := a.at(a.s.DistanceKm(), judged, nil).rate.UsableBps; !within(limit.got, want, 1e-3) || want == 0 {
				t.Errorf("%s, %s: %v bit/s, put back %v", row.name, limit.name, limit.got, want)
			}
		}
	}
}

// TestPerfectDetectorsKnowTheTime: their jitter, independent of the rest of the
// spread, is gone from its square.
func TestPerfectDetectorsKnowTheTime(t *testing.T) {
	for _, text := range []string{base, pulsedBase} {
		s := parse(t, text, set{"clock_jitter_fwhm_ps", "40"}, set{"arms.alice.detector", "nanowire"})
		ideal := withPerfectDetectors(s)
		real, perfect := s.Link(20, sources.AtWorst), ideal.Link(20, sources.AtWorst)
		less := func(spread float64, jitters ...float64) float64 {
			square := spread * spread
			for _, j := range jitters {
				square -= j * j
			}
			return math.Sqrt(square)
		}
		if got, want := perfect.SpreadFWHMPs, less(real.SpreadFWHMPs, 50, 180); !s.Pulsed() && !within(got, want, 1e-9) {
			t.Errorf("a spread of %v ps, want %v", got, want)
		}
		for i, jitter := range []float64{50, 180} {
			arm := &perfect.Arms[i]
			if got, want := arm.SpreadFWHMPs, less(real.Arms[i].SpreadFWHMPs, jitter); s.Pulsed() && !within(got, want, 1e-9) {
				t.Errorf("arm %d: a spread of %v ps, want %v", i, got, want)
			}
			if arm.Detector != ideal.Detectors[0].Detector || arm.Detector.Efficiency != 1 || arm.Transmittance != real.Arms[i].Transmittance {
				t.Errorf("arm %d: %+v", i, *arm)
			}
		}
	}
}

// TestPerfectDetectorsDidNotCountTheSource: emission and losses are those that
// the real detectors counted.
func TestPerfectDetectorsDidNotCountTheSource(t *testing.T) {
	s := parse(t, countedBase, set{"arms.bob.fixed_loss_db", "from_counts"})
	ideal := withPerfectDetectors(s)
	if got, want := ideal.Setting(), s.Setting(); got != want {
		t.Errorf("emission %v, counted %v", got, want)
	}
	for i := range s.Arms {
		if got, want := ideal.Loss(i, 5), s.Loss(i, 5); !within(float64(got), float64(want), 1e-12) {
			t.Errorf("arm %d loses %v dB, counted %v", i, got, want)
		}
	}
	if s.Detector("free_running").Efficiency != 0.2 || !s.Source.Counted.Used {
		t.Error("the scenario itself was edited")
	}
	if searched := withPerfectDetectors(read(t, set{"source.pair_rate_hz", "auto"})); !searched.Source.PumpAuto {
		t.Error("a pump that is searched no longer is")
	}
}

// TestRepeaterlessBound: slots times -log2(1 - t), in a form of its own, and
// none where nothing is lost.
func TestRepeaterlessBound(t *testing.T) {
	s := read(t)
	l := newLimiter(newAsker(s))
	for _, km := range []float64{0, 6.2, 150} {
		p := l.point(km)
		loss := l.asker.point(km).LossDB
		through := math.Pow(10, -(loss.Alice+loss.Bob)/10)
		if want := p.SlotsHz * math.Log(1/(1-through)) / math.Log(2); !within(*p.RepeaterlessBps, want, 1e-6) {
			t.Errorf("%v km: %v bit/s, want %v", km, *p.RepeaterlessBps, want)
		}
		if best := l.at(km).best; p.SlotsHz != 1/best.setting.WindowS {
			t.Errorf("%v km: %v slots/s of %v s", km, p.SlotsHz, best.setting.WindowS)
		}
	}
	lossless := read(t, set{"arms.alice.length_km", "0"}, set{"arms.bob.length_km", "0"}, set{"arms.bob.connector_pairs", "0"},
		set{"arms.alice.fixed_loss_db", "0"}, set{"arms.bob.fixed_loss_db", "0"})
	found := limitsOf(t, lossless, 2)
	if _, err := json.Marshal(found); err != nil || found.Points[0].RepeaterlessBps != nil || found.Points[1].RepeaterlessBps == nil {
		t.Errorf("nothing lost: %v, %v", found.Points, err)
	}
}

// TestPublishedRepeaterlessBound: Pirandola et al., Nat. Commun. 8, 15043
// (2017), -log2(1 - t); the figures are computed.
func TestPublishedRepeaterlessBound(t *testing.T) {
	for _, row := range []struct{ t, want, tolerance float64 }{
		{0.5, 1, 1e-12}, {0.1, 0.15200309, 1e-7}, {0.01, 0.01449957, 1e-6}, {1e-6, 1.4426958e-6, 1e-7},
	} {
		r := reply{link: keyrate.Link{Arms: [2]keyrate.Arm{{Transmittance: 1}, {Transmittance: row.t}}}, rate: keyrate.Rate{SlotsHz: 1}}
		if got := repeaterless(&r); !within(got, row.want, row.tolerance) {
			t.Errorf("transmittance %v: %v bits a slot, want %v", row.t, got, row.want)
		}
	}
}

// TestHeldBack spoils one thing after the other of a link that is good in all.
func TestHeldBack(t *testing.T) {
	good := []set{
		{"detectors.free_running", "{ efficiency: 0.98, dark_counts_hz: 1, jitter_fwhm_ps: 20, dead_time_ns: 1 }"},
		{"source.state.tangle", "0.99"},
		{"source.pair_rate_hz", "1.5e+7"},
	}
	for _, row := range []struct {
		part    string
		changes []set
		of      func(p LimitPoint) float64
	}{
		{"setting", []set{{"source.pair_rate_hz", "1.0e+5"}}, func(p LimitPoint) float64 { return p.AtBestBps / p.AsDescribedBps }},
		{"state", []set{{"source.state.tangle", "0.72"}}, func(p LimitPoint) float64 { return p.PerfectStateBps / p.AtBestBps }},
		{"detectors", []set{{"detectors.free_running.efficiency", "0.1"}}, func(p LimitPoint) float64 { return p.PerfectDetectorsBps / p.AtBestBps }},
	} {
		s := read(t, slices.Concat(good, row.changes)...)
		found := limitsOf(t, s, 0)
		p := newLimiter(newAsker(s)).point(s.DistanceKm())
		if found.HeldBack == nil || found.HeldBack.Part != row.part || !within(*found.HeldBack.Factor, row.of(p), 1e-12) {
			t.Errorf("%s spoilt: held back by %v; %+v", row.part, found.HeldBack, p)
		}
		if !strings.Contains(found.Sentence, InWords(row.part)+" ho") { // holds or hold
			t.Errorf("%s spoilt: %s", row.part, found.Sentence)
		}
	}
}

// TestHeldBackFromNothing: a factor from nothing is none, and the sentence
// says what would make key.
func TestHeldBackFromNothing(t *testing.T) {
	for _, row := range []struct {
		name    string
		changes []set
		part    string
		words   string
	}{
		{"too far for these detectors", []set{{"arms.bob.length_km", "150"}}, "detectors", "nor would a perfect state; perfect detectors"},
		{"no entanglement", []set{{"source.state.tangle", "0.3"}}, "state", "nor would perfect detectors; a perfect state"},
		{"either would do", []set{{"arms.bob.length_km", "110"}}, "detectors", "perfect detectors would make"},
		{"far too far", []set{{"source.state.tangle", "0.3"}, {"arms.bob.length_km", "200"}}, "", "nor would a perfect state or perfect detectors alone"},
		{"pumped too hard", []set{{"source.pair_rate_hz", "1.0e+9"}, {"source.max_pair_rate_hz", "1.0e+9"}, {"window_ps", "900"}}, "setting", "as described there is no key"},
	} {
		s := read(t, row.changes...)
		found := limitsOf(t, s, 0)
		part := ""
		if found.HeldBack != nil {
			part = found.HeldBack.Part
		}
		if part != row.part || part != "" && found.HeldBack.Factor != nil || !strings.Contains(found.Sentence, row.words) {
			t.Errorf("%s: %v, %s", row.name, found.HeldBack, found.Sentence)
		}
	}
	all := limitsOf(t, read(t, set{"detectors.free_running", "{ efficiency: 1, dark_counts_hz: 0, jitter_fwhm_ps: 0, dead_time_ns: 0 }"},
		set{"source.state.tangle", "1"}, set{"source.pair_rate_hz", "auto"}), 0)
	if all.HeldBack != nil || !strings.Contains(all.Sentence, "neither setting nor state nor detectors") {
		t.Errorf("nothing to better: %v, %s", all.HeldBack, all.Sentence)
	}
}

// TestLimitsOfThePlan are at the curve's distances, for the scenario as filed.
func TestLimitsOfThePlan(t *testing.T) {
	p := planned(t, set{"compare", "[{ change: { arms.bob.detector: nanowire } }]"})
	if p.Cases[1].Limits != nil || p.Cases[1].Best == nil {
		t.Errorf("the compared case: limits %v, best %v", p.Cases[1].Limits, p.Cases[1].Best)
	}
	for i, at := range p.Cases[0].Limits.Points {
		if c := p.Cases[0].Curve[i]; at.DistanceKm != c.DistanceKm || at.AsDescribedBps != c.Bounds.AtWorst.UsableRateBps {
			t.Errorf("%+v beside %+v", at, c)
		}
	}
}
