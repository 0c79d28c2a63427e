package scenarios

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// TestQuantity holds what the table says of a few entries, and the figures in
// use where the file leaves them out.
func TestQuantity(t *testing.T) {
	s := mustRead(t, errBase)
	for _, row := range []struct {
		entry           string
		lo, hi, inUse   float64
		whole, fraction bool
		decades         bool
	}{
		{"source.state.tangle", 0, 1, 0.86, false, true, false},
		{"detectors.gated.efficiency", 5e-324, 1, 0.2, false, true, false},
		{"detectors.gated.dark_counts_hz", 0, 1e9, 1200, false, false, true},
		{"detectors.gated.afterpulsing", 0, math.Nextafter(1, 0), 0, false, true, false},
		{"arms.bob.length_km", 0, 500, 6.2, false, false, false},
		{"arms.bob.connector_pairs", 0, 1000, 0, true, false, false},
		{"arms.bob.loss_db_per_km", 0, 100, 0.275, false, false, false},
		{"arms.bob.pmd_ps_per_sqrt_km", 0, 100, 0.1, false, false, true},
		{"arms.bob.dispersion_ps_per_nm_km", -1000, 1000, 17.4606188231345, false, false, false},
		{"source.bandwidth_fwhm_nm.bob", 5e-324, 200, 0.8, false, false, true},
		{"source.wavelength_nm.bob", 400, 2000, 1550, false, false, false},
		{"error_correction_f", 1, 10, 1.16, false, false, false},
		{"window_ps", 5e-324, 1e9, math.NaN(), false, false, true},
	} {
		q, err := s.Quantity(row.entry)
		same := q.InUse == row.inUse || math.Abs(q.InUse-row.inUse) < 1e-9 || math.IsNaN(q.InUse) && math.IsNaN(row.inUse)
		if err != nil || q.Lo != row.lo || q.Hi != row.hi || !same || q.Whole != row.whole || q.Fraction != row.fraction || q.Decades != row.decades {
			t.Errorf("%s: %+v, %v", row.entry, q, err)
		}
	}
	for entry, says := range map[string]string{
		"arms.bob.lenght_km":        "unknown entry",
		"arms.bob":                  "a group of entries, not a number",
		"arms.bob.detector":         "not a number",
		"detectors.none.efficiency": "the scenario has no such detector",
	} {
		if _, err := s.Quantity(entry); err == nil || !strings.Contains(err.Error(), says) || !strings.Contains(err.Error(), "hint: ") {
			t.Errorf("%s: %v", entry, err)
		}
	}
}

// countedBase is errBase with a source that was counted, and auto settings.
const countedChanges = `{ singles_hz: { alice: 310000, bob: 290000 }, coincidences_hz: 31000, window_ps: 1000,
  background_hz: { alice: 1200, bob: 1200 }, detector: { alice: gated, bob: gated } }`

// TestFixKeepsTheLink: writing the figure in use where it was left to
// something else changes nothing of the link; and then it can be changed.
func TestFixKeepsTheLink(t *testing.T) {
	s := mustRead(t, errBase)
	counted, err := s.With(Change{"source.counted", countedChanges}, Change{"detectors.gated.efficiency", "0.6"},
		Change{"detectors.gated.dead_time_ns", "40"}, Change{"arms.bob.fixed_loss_db", "from_counts"})
	if err != nil {
		t.Fatal(err)
	}
	for _, s := range []*Scenario{s, counted} {
		before, at := s.Link(6.2, 0), s.Setting()
		for _, entry := range append(s.Figures(), "source.pair_rate_hz", "arms.bob.fixed_loss_db") {
			c := s.Clone()
			place, err := c.Fix(entry)
			if err != nil {
				t.Fatal(err)
			}
			after := c.Link(6.2, 0)
			if d := after.Arms[Bob].Transmittance/before.Arms[Bob].Transmittance - 1; math.Abs(d) > 1e-12 {
				t.Errorf("%s: Bob's transmittance is off by %v", entry, d)
			}
			after.Arms[Bob].Transmittance = before.Arms[Bob].Transmittance
			if p := c.Setting(); after != before || math.Abs(p.PairRateHz/at.PairRateHz-1) > 1e-12 {
				t.Errorf("%s: fixed, the link is another", entry)
			}
			*place *= 1.25
			if entry == "source.pair_rate_hz" && math.Abs(c.Setting().PairRateHz/at.PairRateHz-1.25) > 1e-12 {
				t.Errorf("a pair rate of %v after it was raised from %v", c.Setting().PairRateHz, at.PairRateHz)
			}
		}
	}
	c := s.Clone()
	if at, err := c.Fix("window_ps"); err != nil || Stated(*at) || c.WindowAuto {
		t.Errorf("a searched window: %v, %v", at, err)
	}
}

// TestFigures: measured ones, each once, and none of a setting or a wish.
func TestFigures(t *testing.T) {
	s := mustRead(t, errBase)
	names := s.Figures()
	for _, want := range []string{"source.pair_rate_hz", "source.state.tangle", "source.bandwidth_fwhm_nm", "arms.bob.loss_db_per_km", "detectors.gated.efficiency", "duty_cycle"} {
		if !slices.Contains(names, want) {
			t.Errorf("%s is missing", want)
		}
	}
	for _, other := range []string{"window_ps", "source.bandwidth_fwhm_nm.alice", "source.bandwidth_fwhm_nm.bob", "source.state.fidelity", "source.pulse_rate_hz", "arms.bob.connector_pairs", "arms.bob.measured_loss_db"} {
		if slices.Contains(names, other) {
			t.Errorf("%s is among them", other)
		}
	}
	both, err := s.With(Change{"source.bandwidth_fwhm_nm", "{ alice: 0.8, bob: 0.7 }"})
	if err != nil {
		t.Fatal(err)
	}
	if names := both.Figures(); slices.Contains(names, "source.bandwidth_fwhm_nm") || !slices.Contains(names, "source.bandwidth_fwhm_nm.alice") || !slices.Contains(names, "source.bandwidth_fwhm_nm.bob") {
		t.Errorf("two bandwidths: %v", names)
	}
}

// TestAlone reads the changed scenario as With does, without its cases.
func TestAlone(t *testing.T) {
	s, err := LoadFS(Examples, "demo.yaml")
	if err != nil {
		t.Fatal(err)
	}
	change := Change{"arms.bob.length_km", "9"}
	with, err := s.With(change)
	if err != nil {
		t.Fatal(err)
	}
	alone, err := s.Alone(change)
	if err != nil || len(alone.Compare) > 0 || alone.Link(9, 0) != with.Link(9, 0) {
		t.Errorf("%v, %d cases", err, len(alone.Compare))
	}
	if _, err := s.Alone(Change{"arms.bob.length_km", "900"}); err == nil {
		t.Error("900 km are taken")
	}
}
