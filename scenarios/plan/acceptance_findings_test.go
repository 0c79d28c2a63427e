package plan

import (
	"math"
	"strings"
	"testing"

	"pairspan/link"
)

// TestBackgroundByCAR: with nothing but a CAR and error rates, the background
// per detector is what the CAR says, and explains the errors too.
func TestBackgroundByCAR(t *testing.T) {
	s := parse(t, base, append(blind, set{"arms.alice.detector", "nanowire"}, set{"arms.bob.detector", "nanowire"})...)
	faulty := s.Clone()
	for i := range faulty.Arms {
		faulty.Arms[i].BackgroundCountsHz += 2e6
	}
	m := running(faulty)
	m.SinglesHz, m.CoincidencesHz, m.SiftedBps = [2]float64{nan, nan}, nan, nan
	out := diagnosed(s, m)
	if got := amount(t, out, anAmount+` extra counts/s in every detector`); math.Abs(got-2e6) > 5e3 {
		t.Errorf("%v counts/s, put in 2e6", got)
	}
	if len(out.Findings) != 1 || *sheetRowOf(t, out, "qber_check").MeasuredSays != "as the other figures explain" {
		t.Errorf("%q, QBER %q", out.Findings, *sheetRowOf(t, out, "qber_check").MeasuredSays)
	}
}

// TestWideWindow: where the singles fit, accidentals come from the window.
func TestWideWindow(t *testing.T) {
	s := parse(t, base, fast...)
	faulty := s.Clone()
	faulty.WindowPs *= 2.5
	m := running(faulty)
	m.QBERKey, m.QBERCheck = nan, nan
	out := diagnosed(s, m)
	if got := amount(t, out, `a window `+anAmount+` times as wide`); math.Abs(got-2.5) > 0.03 {
		t.Errorf("%v times as wide, put in 2.5: %q", got, out.Findings)
	}
}

// TestAccidentalsMeasured follow from coincidences and CAR.
func TestAccidentalsMeasured(t *testing.T) {
	s := parse(t, base, blind...)
	p := newAsker(s).point(s.DistanceKm())
	if r := sheetRowOf(t, diagnosed(s, running(s)), "accidentals_hz"); math.Abs(*r.Measured-*p.AccidentalsHz) > 1e-9**p.AccidentalsHz {
		t.Errorf("%v, want %v", *r.Measured, *p.AccidentalsHz)
	}
}

// TestSoundLink: a link that runs as planned has no findings, and every figure
// stated says so; what was not stated says nothing.
func TestSoundLink(t *testing.T) {
	for _, changes := range [][]set{blind, fast, pulse, {{"window_ps", "600"}}} {
		s := parse(t, base, changes...)
		out := diagnosed(s, running(s))
		if len(out.Findings) != 0 {
			t.Errorf("%v: %q", changes, out.Findings)
		}
		stated := 0
		for _, r := range out.Rows {
			if r.MeasuredSays != nil {
				stated++
				if *r.MeasuredSays != "as expected" {
					t.Errorf("%s: %s", r.Figure, *r.MeasuredSays)
				}
			}
		}
		if stated != 8 {
			t.Errorf("%d rows with a measured figure", stated)
		}
	}
	for _, r := range filed(t).Acceptance.Rows {
		if r.Measured != nil || r.MeasuredSays != nil {
			t.Errorf("%s: measured %v", r.Figure, r.Measured)
		}
	}
}

// TestMeasuredEntries reads the figures from the file.
func TestMeasuredEntries(t *testing.T) {
	out := filed(t, append(blind, set{"measured", "{ singles_hz: { bob: 30000 } }"})...).Acceptance
	if r := sheetRowOf(t, out, "singles_bob_hz"); r.Measured == nil || *r.Measured != 30000 || !strings.Contains(*r.MeasuredSays, "missing in Bob's arm") {
		t.Errorf("%+v", r)
	}
}

// TestWithoutSingles: coincidences alone cannot tell loss from timing, and say so.
func TestWithoutSingles(t *testing.T) {
	s := parse(t, base, blind...)
	faulty := s.Clone()
	faulty.Arms[0].FixedLossDB += 0.8
	faulty.Arms[1].FixedLossDB += 0.8
	m := running(faulty)
	m.SinglesHz = [2]float64{nan, nan}
	out := diagnosed(s, m)
	if got := amount(t, out, anAmount+` dB lost in both arms together or in timing .*the singles will tell`); math.Abs(got-1.6) > 0.005 {
		t.Errorf("%v dB, put in 0.8 in each arm", got)
	}
	if len(out.Findings) != 1 {
		t.Errorf("%q", out.Findings)
	}
}

// TestArmsAlike: without coincidences, singles that are low alike point to the
// pump, those that are not to the arms.
func TestArmsAlike(t *testing.T) {
	s := parse(t, base, fast...)
	for _, row := range []struct {
		alice, bob float64
		pattern    string
		want       float64
		count      int
	}{
		{1, 1.1, `off alike: ` + anAmount + ` dB fewer pairs .* loss in both arms`, 1, 2},
		{1, 2, anAmount + ` dB missing in Bob's arm`, 2, 2},
	} {
		faulty := s.Clone()
		faulty.Arms[0].FixedLossDB += row.alice
		faulty.Arms[1].FixedLossDB += row.bob
		m := s.Measured // nothing stated
		m.SinglesHz = running(faulty).SinglesHz
		out := diagnosed(s, m)
		if got := amount(t, out, row.pattern); math.Abs(got-row.want) > 0.011 || len(out.Findings) != row.count {
			t.Errorf("losses of %v and %v dB: %v, %q", row.alice, row.bob, got, out.Findings)
		}
	}
}

// TestPumpAndArm: fewer pairs and a little loss in one arm besides, told from
// loss in both arms by the coincidences.
func TestPumpAndArm(t *testing.T) {
	s := parse(t, base, fast...)
	faulty := s.Clone()
	faulty.Source.PairRateHz /= link.DB(-1).Transmittance()
	faulty.Arms[1].FixedLossDB += 0.2
	out := diagnosed(s, running(faulty))
	pump, arm := amount(t, out, `off alike: `+anAmount+` dB fewer pairs`), amount(t, out, `Besides, `+anAmount+` dB missing in Bob's arm`)
	if math.Abs(pump-1) > 0.005 || math.Abs(arm-0.2) > 0.005 || len(out.Findings) != 2 {
		t.Errorf("%v and %v dB: %q", pump, arm, out.Findings)
	}
}
