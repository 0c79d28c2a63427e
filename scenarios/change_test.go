package scenarios

import (
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"pairspan/sources"
)

// A changed scenario is the one that the file would be if a person had made
// the same change in it.
func TestChangeIsAsIfEdited(t *testing.T) {
	for name, c := range map[string]struct {
		from    string
		changes []Change
		to      string
	}{
		"a number": {errBase, []Change{{"arms.bob.length_km", "12 +- 0.5"}}, replaced(t, "length_km: 6.2", "length_km: 12 +- 0.5")},
		"a new entry": {
			errBase,
			[]Change{{"window_ps", "500"}, {"arms.alice.splices", "3"}},
			replaced(t, "length_km: 0.05", "splices: 3\n    length_km: 0.05") + "window_ps: 500\n",
		},
		"a group": {errBase, []Change{{"source.state", "{ fidelity: 0.95, measured_car: 30 }"}}, replaced(t, "tangle: 0.86", "{ fidelity: 0.95, measured_car: 30 }")},
		"another state": {
			replaced(t, "tangle: 0.86", "tangle: 0.86\n    measured_car: 30"),
			[]Change{{"source.state.visibility", "{ hv: 0.9, da: 0.95 }"}},
			replaced(t, "tangle: 0.86", "visibility: { hv: 0.9, da: 0.95 }\n    measured_car: 30"),
		},
		"to pulsed": {
			replaced(t, "pair_rate_hz: 2.0e+6", "pair_rate_hz: 2.0e+6\n  max_pair_rate_hz: 3.0e+6"),
			[]Change{{"source.pulse_rate_hz", "1e8"}, {"source.pairs_per_pulse", "0.02"}},
			replaced(t, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1e8\n  pairs_per_pulse: 0.02"),
		},
		"to continuous": {
			replaced(t, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1e8\n  pairs_per_pulse: 0.02\n  schmidt_number: 2\n  max_pairs_per_pulse: 0.1\n  pump_pulse_fwhm_ps: 3"),
			[]Change{{"source.pair_rate_hz", "2.0e+6"}},
			errBase,
		},
		"to a measured run": {
			replaced(t, "length_km: 6.2", "length_km: 6.2\n    connector_pairs: 4\n    splices: 2\n    splice_loss_db: 0.05"),
			[]Change{{"arms.bob.measured_loss_db", "2.5"}},
			replaced(t, "length_km: 6.2", "length_km: 6.2\n    measured_loss_db: 2.5"),
		},
		"to single items": {
			replaced(t, "length_km: 6.2", "length_km: 6.2\n    measured_loss_db: 2.5"),
			[]Change{{"arms.bob.splices", "2"}},
			replaced(t, "length_km: 6.2", "length_km: 6.2\n    splices: 2"),
		},
		"Bob's bandwidth": {
			errBase,
			[]Change{{"source.bandwidth_fwhm_nm.bob", "0.4"}},
			replaced(t, "bandwidth_fwhm_nm: 0.8", "bandwidth_fwhm_nm: { alice: 0.8, bob: 0.4 }"),
		},
		"both bandwidths in one": {
			replaced(t, "bandwidth_fwhm_nm: 0.8", "bandwidth_fwhm_nm: { alice: 0.8, bob: 0.4 }"),
			[]Change{{"source.bandwidth_fwhm_nm", "0.3"}},
			replaced(t, "bandwidth_fwhm_nm: 0.8", "bandwidth_fwhm_nm: 0.3"),
		},
		"a new detector": {
			errBase,
			[]Change{{"detectors.fast", "{ efficiency: 0.5, dark_counts_hz: 1, jitter_fwhm_ps: 20, dead_time_ns: 10 }"}, {"arms.bob.detector", "fast"}, {"detectors.fast.efficiency", "0.6"}},
			replaced(t, "length_km: 6.2\n    fixed_loss_db: 4.2\n    detector: gated", "length_km: 6.2\n    fixed_loss_db: 4.2\n    detector: fast") +
				"  fast: { efficiency: 0.6, dark_counts_hz: 1, jitter_fwhm_ps: 20, dead_time_ns: 10 }\n",
		},
	} {
		got, err := mustRead(t, c.from).With(c.changes...)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if diff := cmp.Diff(mustRead(t, c.to), got, sameScenario, cmpopts.IgnoreFields(Scenario{}, "Inputs")); diff != "" {
			t.Errorf("%s: %s", name, diff)
		}
	}
}

func TestChangeLeavesTheOriginalAlone(t *testing.T) {
	s := mustRead(t, errBase)
	before := s.document.root.String()
	if _, err := s.With(Change{"arms.bob.measured_loss_db", "3"}, Change{"source.counted.window_ps", "3"}); err == nil {
		t.Error("half a count was accepted")
	}
	if after := s.document.root.String(); after != before {
		t.Errorf("%s became %s", before, after)
	}
	same, err := s.With()
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(s, same, sameScenario); diff != "" {
		t.Error(diff)
	}
}

// A change that is not in the file is placed where the file has the entry,
// or what it stands in.
func TestChangesWithErrors(t *testing.T) {
	s := mustRead(t, errBase)
	for _, c := range []struct {
		change Change
		want   string
	}{
		{Change{"arms.bob.length_km", "6200"}, "x.yaml:14:5: arms.bob.length_km: 6200 is outside 0 to 500"},
		{Change{"arms.bob.lenght_km", "6"}, "x.yaml:13:3: arms.bob.lenght_km: unknown entry"},
		{Change{"arms.bob.efficiency", "0.6"}, "x.yaml:13:3: arms.bob.efficiency: unknown entry"},
		{Change{"nothing.like.this", "6"}, "x.yaml:1:1: nothing.like.this: unknown entry"},
		{Change{"", "6"}, "x.yaml:1:1: unknown entry"},
		{Change{"arms.bob.length_km", ""}, "x.yaml:14:5: arms.bob.length_km: empty"},
		{Change{"arms.bob.length_km", "[6"}, `x.yaml:14:5: arms.bob.length_km: "[6" is not a value`},
		{Change{"arms.bob.length_km", "6\n---\n7"}, `x.yaml:14:5: arms.bob.length_km: "6\n---\n7" is not a value`},
		{Change{"arms.bob.length_km", "{ a: 1 }"}, "x.yaml:14:5: arms.bob.length_km: a mapping where a single value belongs"},
		{Change{"source.state", "7"}, "x.yaml:4:3: source.state: a group of entries belongs here, not a single value"},
		{Change{"detectors.nanowire.efficiency", "0.8"}, "x.yaml:17:1: detectors.nanowire.efficiency: nanowire is not among the detectors"},
		{Change{"arms.alice.detector", "nanowire"}, "x.yaml:12:5: arms.alice.detector: nanowire is not among the detectors"},
	} {
		_, err := s.With(c.change)
		if err == nil {
			t.Errorf("%v: accepted", c.change)
			continue
		}
		if first, _, _ := strings.Cut(err.Error(), "\n"); first != c.want {
			t.Errorf("%v: %v", c.change, first)
		}
	}
}

// A pulsed source may be counted: pulses stay when counts are set.
func TestCountedPulses(t *testing.T) {
	s := mustRead(t, replaced(t, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1e8\n  pairs_per_pulse: 0.02", "dead_time_ns: 10000", "dead_time_ns: 40"))
	c, err := s.With(Change{"source.counted", "{ singles_hz: { alice: 31000, bob: 29000 }, coincidences_hz: 3100, window_ps: 1000, " +
		"background_hz: { alice: 1200, bob: 1200 }, detector: { alice: gated, bob: gated } }"}, Change{"arms.bob.fixed_loss_db", "from_counts"})
	if err != nil {
		t.Fatal(err)
	}
	if !c.Pulsed() || !c.Source.Counted.Used || Stated(c.Source.PairsPerPulse) || !c.Arms[Bob].FixedLossFromCounts || Stated(c.Arms[Bob].FixedLossDB) {
		t.Errorf("%+v", c.Source)
	}
	if c.Source.State != sources.FromTangle(0.86) {
		t.Errorf("%+v", c.Source.State)
	}
}

func FuzzChange(f *testing.F) {
	for i := range table {
		f.Add(expanded(&table[i])[0], table[i].example)
	}
	f.Add("source.state", "{ tangle: 0.9 }")
	f.Add("compare", "[ { every_detector: true } ]")
	f.Add("detectors.x", "&a { efficiency: *a }")
	s, err := Read(noFiles, "x.yaml", []byte(errBase))
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, entry, value string) {
		changed, err := s.With(Change{entry, value})
		checkOutcome(t, changed, err)
	})
}
