package plan

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

// fixed is base with its window fixed, so that a changed link keeps it, and
// with a biased choice of basis, so that every row is there.
var fixed = []set{{"window_ps", "600"}, {"key_basis_share", "0.7"}}

// quiet is a link that adds next to no error of its own.
func quiet(t *testing.T) *scenarios.Scenario {
	t.Helper()
	s := read(t, set{"source.pair_rate_hz", "1000"}, set{"window_ps", "600"}, set{"detectors.free_running.dark_counts_hz", "0"},
		set{"arms.alice.misalignment_error", "0"}, set{"arms.bob.misalignment_error", "0"}, set{"arms.bob.pmd_ps_per_sqrt_km", "0"},
		set{"arms.alice.pmd_ps_per_sqrt_km", "0"})
	return s
}

// sheetRowOf finds a row by its figure.
func sheetRowOf(t *testing.T, out *Acceptance, figure string) *AcceptanceRow {
	t.Helper()
	for i := range out.Rows {
		if out.Rows[i].Figure == figure {
			return &out.Rows[i]
		}
	}
	t.Fatalf("no row %s", figure)
	return nil
}

// TestSheetIsTheInstalledPoint: the sheet expects what the plan says of the
// installed point.
func TestSheetIsTheInstalledPoint(t *testing.T) {
	for _, changes := range [][]set{nil, fixed, {{"arms.bob.basis_choice", "active"}, {"arms.alice.basis_choice", "active"}, {"key_basis_share", "0.7"}}} {
		c := filed(t, changes...)
		p, out := &c.Installed, c.Acceptance
		for _, row := range []struct {
			figure string
			want   float64
		}{
			{"singles_alice_hz", p.SinglesHz.Alice},
			{"singles_bob_hz", p.SinglesHz.Bob},
			{"singles_key_detector_alice_hz", p.CountsPerDetectorHz.Alice},
			{"singles_key_detector_bob_hz", p.CountsPerDetectorHz.Bob},
			{"live_share_alice", p.LiveShare.Alice},
			{"live_share_bob", p.LiveShare.Bob},
			{"coincidences_hz", *p.CoincidencesHz},
			{"accidentals_hz", *p.AccidentalsHz},
			{"car", *p.CAR},
			{"sifted_bps", *p.SiftedBps},
			{"qber_key", p.QBER.Key},
			{"qber_check", p.QBER.Check},
		} {
			got := sheetRowOf(t, out, row.figure)
			if got.Expected != row.want || !(got.From < got.Expected && got.Expected < got.To) {
				t.Errorf("%v: %s: %v in %v to %v, installed %v", changes, row.figure, got.Expected, got.From, got.To, row.want)
			}
			if got.PointsTo == "" || strings.Contains(got.Label, "%") {
				t.Errorf("%s: %q, %q", row.figure, got.Label, got.PointsTo)
			}
		}
	}
}

// TestCheckDetectors stand on the sheet only where they see other light: with
// a beam splitter that is not even. There the four detectors make the singles.
func TestCheckDetectors(t *testing.T) {
	count := func(changes ...set) (n int) {
		for _, r := range filed(t, changes...).Acceptance.Rows {
			if strings.Contains(r.Figure, "check_detector") {
				n++
			}
		}
		return n
	}
	if a, b, c := count(), count(fixed...), count(append(fixed, set{"arms.bob.basis_choice", "active"})...); a != 0 || b != 2 || c != 1 {
		t.Errorf("rows of check detectors: even %d, biased %d, one active %d", a, b, c)
	}
	out := filed(t, fixed...).Acceptance
	key, check, all := sheetRowOf(t, out, "singles_key_detector_bob_hz"), sheetRowOf(t, out, "singles_check_detector_bob_hz"), sheetRowOf(t, out, "singles_bob_hz")
	if math.Abs(2*key.Expected+2*check.Expected-all.Expected) > 1e-9*all.Expected || check.Expected >= key.Expected {
		t.Errorf("2 x %v and 2 x %v make %v", key.Expected, check.Expected, all.Expected)
	}
}

// TestBlockedCounts: with the source blocked a detector registers its dark
// counts and background, less what its dead time hides: m = n/(1 + n t).
func TestBlockedCounts(t *testing.T) {
	out := filed(t, set{"arms.bob.background_counts_hz", "800"}).Acceptance
	if got, want := sheetRowOf(t, out, "source_blocked_bob_hz").Expected, 2000/(1+2000*1e-5); math.Abs(got-want) > 1e-9 {
		t.Errorf("%v, want %v", got, want)
	}
}

// TestBlockedCountsGated: between the pulses of a source a dead time of less
// than their period hides nothing.
func TestBlockedCountsGated(t *testing.T) {
	out := filed(t, append(pulse, set{"detectors.nanowire.dead_time_ns", "8"}, set{"detectors.nanowire.dark_counts_hz", "1.0e+5"})...).Acceptance
	if got := sheetRowOf(t, out, "source_blocked_bob_hz").Expected; got != 1e5 {
		t.Errorf("%v, want 1e5", got)
	}
}

// worsenings are ways to make a deviation worse through the scenario's own entries.
var worsenings = map[string]func(s *scenarios.Scenario, x float64){
	"bob's loss": func(s *scenarios.Scenario, x float64) { s.Arms[1].FixedLossDB += x },
	"both losses": func(s *scenarios.Scenario, x float64) {
		s.Arms[0].FixedLossDB += x
		s.Arms[1].FixedLossDB += x
	},
	"misalignment": func(s *scenarios.Scenario, x float64) {
		e := &s.Arms[0].MisalignmentError
		*e += x / 100 * (1 - 2**e)
	},
	"bob's background": func(s *scenarios.Scenario, x float64) { s.Arms[1].BackgroundCountsHz += math.Pow(10, x/5) - 1 },
	"both backgrounds": func(s *scenarios.Scenario, x float64) {
		s.Arms[0].BackgroundCountsHz += math.Pow(10, x/5) - 1
		s.Arms[1].BackgroundCountsHz += math.Pow(10, x/5) - 1
	},
}

// TestLevelsPutBack makes the link worse through the scenario's entries until
// it shows the level given: there the need, or the key, is just kept, and a
// little further it is lost.
func TestLevelsPutBack(t *testing.T) {
	for _, extra := range [][]set{nil, {{"finite_key", "{ sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"}}, {{"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"}}} {
		s := read(t, append(extra, fixed...)...)
		out := newAsker(s).acceptance()
		for _, row := range []struct{ figure, cause string }{
			{"singles_bob_hz", "bob's loss"},
			{"singles_key_detector_bob_hz", "bob's loss"},
			{"coincidences_hz", "both losses"},
			{"sifted_bps", "both losses"},
			{"accidentals_hz", "both backgrounds"},
			{"car", "both backgrounds"},
			{"source_blocked_bob_hz", "bob's background"},
			{"live_share_bob", "bob's background"},
			{"qber_key", "misalignment"},
			{"qber_check", "misalignment"},
		} {
			r := sheetRowOf(t, out, row.figure)
			worse := func(x float64) *asker {
				c := s.Clone()
				worsenings[row.cause](c, x)
				return newAsker(c)
			}
			figureAt := func(x float64) float64 {
				a := worse(x)
				now := a.at(a.s.DistanceKm(), judged, nil)
				d := &firstDay{}
				d.expected = sheetOf(&now.link, now.setting)
				for i := range readings {
					if rowFigure(i) == row.figure {
						return d.expected[i]
					}
				}
				return nan
			}
			for _, level := range []struct {
				name string
				at   *float64
				ok   func(keyrate.Rate) bool
			}{
				{"need", r.NeedLostAt, func(rate keyrate.Rate) bool { return rate.UsableBps >= 100 }},
				{"key", r.KeyLostAt, func(rate keyrate.Rate) bool { return rate.UsableBps > 0 }},
			} {
				if level.at == nil {
					t.Errorf("%v: %s: no level for the %s", extra, row.figure, level.name)
					continue
				}
				most := 49.0
				if row.figure == "accidentals_hz" {
					most = 32 // where more background blinds the detectors, accidentals fall again
				}
				x, ok := sizeOf(most, *level.at, figureAt)
				if !ok {
					t.Errorf("%v: %s of %v is never seen", extra, row.figure, *level.at)
					continue
				}
				const little = 1e-4
				for _, side := range []float64{-little, little} {
					a := worse(x + side)
					if got := level.ok(a.at(a.s.DistanceKm(), judged, nil).rate); got != (side < 0) {
						t.Errorf("%v: %s at %v, %s %v: the %s is kept: %v", extra, row.figure, *level.at, row.cause, x+side, level.name, got)
					}
				}
			}
		}
	}
}

func rowFigure(r reading) string {
	if r < ofTheLink {
		return strings.Replace(r.row().figure, "%s", armKey[r.arm()], 1)
	}
	return r.row().figure
}

// TestLevelsOf: the levels are of the first state that meets the need.
func TestLevelsOf(t *testing.T) {
	for _, row := range []struct {
		need, want string
		needLost   bool
	}{{"100", "at_worst", true}, {"900", "nominal", true}, {"1000", "at_best", true}, {"1200", "at_worst", false}} {
		s := parse(t, strings.Replace(base, "secret_rate_bps: 100", "secret_rate_bps: "+row.need, 1))
		out := newAsker(s).acceptance()
		r := sheetRowOf(t, out, "qber_key")
		if *out.LevelsOf != row.want || (r.NeedLostAt != nil) != row.needLost || r.KeyLostAt == nil {
			t.Errorf("need %s: %s, need %v, key %v", row.need, *out.LevelsOf, r.NeedLostAt, r.KeyLostAt)
		}
	}
	if out := filed(t, set{"arms.bob.length_km", "110"}).Acceptance; out.LevelsOf != nil || sheetRowOf(t, out, "car").KeyLostAt != nil {
		t.Error("levels without a key")
	}
}

// TestOddSheets: no state, no light to speak of, perfect detectors, every kind
// of link: no panic, and nothing that JSON does not know.
func TestOddSheets(t *testing.T) {
	if out := newAsker(parse(t, strings.Replace(base, "  state: { tangle: 0.86 }\n", "", 1))).acceptance(); out != nil {
		t.Error("a sheet without a state")
	}
	for _, changes := range [][]set{
		{{"arms.bob.fixed_loss_db", "300"}, {"arms.alice.fixed_loss_db", "300"}, {"detectors.free_running.dark_counts_hz", "0"}, {"window_ps", "600"}},
		{{"arms.bob.fixed_loss_db", "0"}, {"arms.bob.connector_pairs", "0"}, {"arms.bob.length_km", "0"}, {"detectors.free_running.efficiency", "1"}, {"source.pair_rate_hz", "1.0e+12"}, {"source.max_pair_rate_hz", "1.0e+12"}},
		{{"detectors.free_running.dark_counts_hz", "0"}, {"detectors.free_running.dead_time_ns", "0"}},
		{{"source.state.tangle", "1 +- 0.1"}},
		{{"source.state.tangle", "0"}},
		{{"window_ps", "1.0e-3"}},
		{{"window_ps", "1.0e+9"}},
	} {
		for _, m := range []scenarios.Measured{
			{SinglesHz: [2]float64{nan, nan}, CoincidencesHz: nan, CAR: nan, SiftedBps: nan, QBERKey: nan, QBERCheck: nan},
			{},
			{SinglesHz: [2]float64{1e12, 1e12}, CoincidencesHz: 1e12, CAR: 1e9, SiftedBps: 1e12, QBERKey: 0.5, QBERCheck: 0.5},
			{SinglesHz: [2]float64{1e5, nan}, CoincidencesHz: 0, CAR: nan, SiftedBps: 3, QBERKey: 0.5, QBERCheck: 0},
		} {
			s := read(t, changes...)
			s.Measured = m
			out := newAsker(s).acceptance()
			b, err := json.Marshal(out)
			if err != nil {
				t.Fatalf("%v: %v", changes, err)
			}
			if text := string(b); strings.Contains(text, "NaN") || strings.Contains(text, "Inf") {
				t.Errorf("%v, %+v: %s", changes, m, text)
			}
		}
	}
}

// BenchmarkAcceptance is the whole sheet with a running link's figures.
func BenchmarkAcceptance(b *testing.B) {
	s := read(b, set{"arms.bob.fixed_loss_db", "4.2 +- 0.3"})
	s.Measured = scenarios.Measured{SinglesHz: [2]float64{90_000, 50_000}, CoincidencesHz: 900, CAR: 100, SiftedBps: 450, QBERKey: 0.06, QBERCheck: 0.08}
	a := newAsker(s)
	b.ReportAllocs()
	for b.Loop() {
		a.acceptance()
	}
}
