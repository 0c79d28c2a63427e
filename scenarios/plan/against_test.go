package plan

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"math"
	"runtime"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"pairspan/scenarios"
)

// comparedLinks is base with a few cases and a curve of as many points as an axis.
var comparedLinks = strings.Replace(base, "distance: { points: 21 }", `distance: { to_km: 20, points: 121 }
compare:
  - { name: nanowire-at-bob, change: { arms.bob.detector: nanowire } }
  - { name: longer, change: { arms.bob.length_km: 9 } }
  - { name: visibilities, change: { source.state: { visibility: { hv: 0.96, da: 0.94 } } } }
  - { name: pulsed, change: { source.pulse_rate_hz: 1.0e+8, source.pairs_per_pulse: 0.02 } }`, 1)

// comparedText leaves out the ceiling, which a pulsed source does not have.
var comparedText = strings.Replace(comparedLinks, "  max_pair_rate_hz: 2.0e+7\n", "", 1)

func over(t *testing.T, s *scenarios.Scenario, entry, from, to string) *Against {
	t.Helper()
	x, err := NewAxis(s, entry, from, to)
	if err != nil {
		t.Fatal(err)
	}
	var p Plan
	if err := p.AddAgainst(t.Context(), x, nil); err != nil {
		t.Fatal(err)
	}
	return p.Against
}

// TestAgainstLengthIsTheCurve: over the length of the arm that lengthens the
// points are those of the curve, in every case.
func TestAgainstLengthIsTheCurve(t *testing.T) {
	measured := strings.Replace(comparedText, "connector_pairs: 4", "measured_loss_db: 3.17", 1)
	for _, text := range []string{comparedText, measured} {
		text = strings.Replace(text, "  - { name: longer, change: { arms.bob.length_km: 9 } }\n", "", 1)
		s := parse(t, text)
		p, err := New(t.Context(), s, "test", nil)
		if err != nil {
			t.Fatal(err)
		}
		a := over(t, s, "arms.bob.length_km", "", "")
		for i, c := range a.Cases {
			if c.Name != p.Cases[i].Name || len(c.Points) != 121 {
				t.Fatalf("%s with %d points", c.Name, len(c.Points))
			}
			for k, point := range c.Points {
				if diff := cmp.Diff(p.Cases[i].Curve[k], point.Point); diff != "" || point.Value != p.Cases[i].Curve[k].DistanceKm {
					t.Fatalf("%s at %v km: %s", c.Name, point.Value, diff)
				}
			}
		}
	}
}

// TestAgainstIsThePlan of the scenario with the value in place.
func TestAgainstIsThePlan(t *testing.T) {
	s := parse(t, comparedText)
	for _, entry := range []string{"window_ps", "source.pair_rate_hz", "source.state.tangle", "detectors.free_running.dark_counts_hz", "arms.alice.length_km", "key_basis_share"} {
		a := over(t, s, entry, "", "")
		for _, k := range []int{0, 57, 120} {
			value := a.Cases[0].Points[k].Value
			changed := parse(t, comparedText, set{entry, plain(value)})
			if diff := cmp.Diff(answeredCase(changed).Installed, a.Cases[0].Points[k].Point); diff != "" {
				t.Errorf("%s = %v: %s", entry, value, diff)
			}
			if entry == "window_ps" && math.Abs(*a.Cases[1].Points[k].Point.WindowPs-value) > 1e-9*value {
				t.Errorf("a window of %v where %v stands", *a.Cases[1].Points[k].Point.WindowPs, value)
			}
		}
	}
}

// TestAgainstInEveryCase: a case that changes the entry takes the values of
// the others; one that does not depend on it stays as it is.
func TestAgainstInEveryCase(t *testing.T) {
	s := parse(t, comparedText)
	length := over(t, s, "arms.bob.length_km", "", "")
	if diff := cmp.Diff(length.Cases[0].Points, length.Cases[2].Points); diff != "" {
		t.Errorf("the longer case differs: %s", diff)
	}
	asFiled := func(i int) Point { return newAsker(s.Compare[i-1].Scenario).point(6.2) }
	for entry, flat := range map[string]int{"source.state.tangle": 3, "source.pair_rate_hz": 4} {
		for _, p := range over(t, s, entry, "", "").Cases[flat].Points {
			if diff := cmp.Diff(asFiled(flat), p.Point); diff != "" {
				t.Fatalf("%s moves case %d: %s", entry, flat, diff)
			}
		}
	}
	nanowire := over(t, s, "detectors.nanowire.efficiency", "", "") // used by one case alone
	if first, last := nanowire.Cases[1].Points[0].Point, nanowire.Cases[1].Points[120].Point; *first.UsableRateBps >= *last.UsableRateBps {
		t.Errorf("%v and %v with a better detector", *first.UsableRateBps, *last.UsableRateBps)
	}
}

// TestAxisRanges are those chosen where none are given.
func TestAxisRanges(t *testing.T) {
	for _, row := range []struct {
		entry    string
		from, to float64
		scale    string
		points   int
		changes  []set
	}{
		{"source.state.tangle", 0, 1, "linear", 121, nil},
		{"detectors.free_running.efficiency", 0.01, 1, "linear", 121, nil},
		{"duty_cycle", 0.01, 1, "linear", 121, nil},
		{"key_basis_share", 0.5, 0.99, "linear", 121, nil},
		{"arms.bob.misalignment_error", 0, 0.05, "linear", 121, nil},
		{"arms.bob.misalignment_error", 0, 0.1, "linear", 121, []set{{"arms.bob.misalignment_error", "0"}}},
		{"source.state.fidelity", 0.51, 1, "linear", 121, []set{{"source.state", "{ fidelity: 0.9 }"}}},
		{"detectors.free_running.dark_counts_hz", 120, 12000, "log", 121, nil},
		{"source.pair_rate_hz", 2e5, 2e7, "log", 121, nil},
		{"source.pair_rate_hz", 2e5, 3e6, "log", 121, []set{{"source.max_pair_rate_hz", "3.0e+6"}}}, // as far as the pump goes
		{"window_ps", 60, 6000, "log", 121, []set{{"window_ps", "600"}}},
		{"arms.bob.length_km", 0, 20, "linear", 121, nil},
		{"arms.alice.length_km", 0, 50, "linear", 121, []set{{"arms.alice.length_km", "25"}}},
		{"arms.bob.connector_pairs", 0, 8, "linear", 9, nil},
		{"arms.bob.dispersion_ps_per_nm_km", -36, 36, "linear", 121, []set{{"arms.bob.dispersion_ps_per_nm_km", "18"}}},
		{"error_correction_f", 1, 2.32, "linear", 121, nil},
		{"arms.bob.fixed_loss_db", 0, 10, "linear", 121, nil},
	} {
		x, err := NewAxis(read(t, row.changes...), row.entry, "", "")
		if err != nil {
			t.Error(err)
			continue
		}
		first, last := x.values[0], x.values[len(x.values)-1]
		if math.Abs(first-row.from) > 1e-12*row.to || math.Abs(last-row.to) > 1e-12*row.to || x.scale != row.scale || len(x.values) != row.points {
			t.Errorf("%s: %d values from %v to %v, %s", row.entry, len(x.values), first, last, x.scale)
		}
	}
}

// TestAxisShrinks where the scenario cannot take the whole of a range: at
// 1565 nm the fibre's class ends.
func TestAxisShrinks(t *testing.T) {
	x, err := NewAxis(read(t, set{"source.wavelength_nm.bob", "1560"}), "source.wavelength_nm.bob", "", "")
	if err != nil {
		t.Fatal(err)
	}
	if last := x.values[120]; !(last > 1560 && last <= 1565) {
		t.Errorf("up to %v nm", last)
	}
}

// TestAxisRefusals name the entry, what is wrong and what to do.
func TestAxisRefusals(t *testing.T) {
	for _, row := range []struct{ entry, from, to, says, hint string }{
		{"arms.bob.length_km", "0", "900", "900 is outside 0 to 500", "kilometres, not metres?"},
		{"detectors.free_running.efficiency", "0.1", "85", "85 is outside 0 to 1", "efficiency is a fraction: 0.85"},
		{"detectors.free_running.efficiency", "10 %", "", "is in per cent", "write a fraction: 0.1"},
		{"window_ps", "auto", "900", "auto is not a number", "numbers"},
		{"window_ps", "900", "200", "from 900 to 200 is no range", "smaller"},
		{"window_ps", "900", "900", "is no range", "smaller"},
		{"detectors.nanowire.efficiency", "", "", "no rate depends on it", "the arms use free_running"},
		{"detectors.gated.efficiency", "", "", "no such detector", "free_running, nanowire"},
		{"arms.bob.lenght_km", "", "", "unknown entry", "did you mean length_km?"},
		{"arms.bob", "", "", "a group of entries", "it takes length_km"},
		{"arms.bob.fibre", "", "", "not a number", "pairspan entries"},
		{"need.secret_rate_bps", "", "", "no rate depends on it", "arms.bob.length_km"},
		{"source.state.fidelity", "", "", "no rate depends on it", "source.state.tangle"},
		{"source.pairs_per_pulse", "", "", "no rate depends on it", "source.pair_rate_hz"},
		{"source.max_pair_rate_hz", "", "", "no rate depends on it", ""},
		{"arms.bob.measured_loss_db", "2", "9", "no rate depends on it", "fixed_loss_db"},
		{"arms.bob.background_counts_hz", "", "", "figure", "both the first and the last value"},
		{"source.pair_rate_hz", "1.0e+6", "5.0e+7", "is above source.max_pair_rate_hz", "wrong"},
		{"arms.bob.connector_pairs", "0", "2.5", "not a whole number", "counts things"},
		{"source.wavelength_nm.bob", "1300", "1550", "required at", "loss_db_per_km"},
	} {
		x, err := NewAxis(read(t), row.entry, row.from, row.to)
		if err == nil { // a value between the ends
			err = new(Plan).AddAgainst(t.Context(), x, nil)
		}
		if err == nil || !strings.HasPrefix(err.Error(), row.entry) && !strings.Contains(err.Error(), row.entry) ||
			!strings.Contains(err.Error(), row.says) || !strings.Contains(err.Error(), "hint: ") || !strings.Contains(err.Error(), row.hint) {
			t.Errorf("%s from %q to %q: %v", row.entry, row.from, row.to, err)
		}
	}
}

// TestAgainstUnknownState: a tangle can take the place of what is not known.
func TestAgainstUnknownState(t *testing.T) {
	s := parse(t, strings.Replace(base, "  state: { tangle: 0.86 }\n", "", 1))
	a := over(t, s, "source.state.tangle", "", "")
	if last := a.Cases[0].Points[120].Point; a.InUse != nil || *last.UsableRateBps == 0 {
		t.Errorf("with a tangle of 1: %v", *last.UsableRateBps)
	}
	w := over(t, s, "window_ps", "", "")
	if p := w.Cases[0].Points[60].Point; p.UsableRateBps != nil || p.AccidentalsHz == nil {
		t.Errorf("%+v", p)
	}
}

// TestAgainstSameBytesOnOneCoreAndTwo.
func TestAgainstSameBytesOnOneCoreAndTwo(t *testing.T) {
	var texts [2][]byte
	for i := range texts {
		before := runtime.GOMAXPROCS(i + 1)
		texts[i], _ = json.Marshal(over(t, parse(t, comparedText), "source.pair_rate_hz", "", ""))
		runtime.GOMAXPROCS(before)
	}
	if !bytes.Equal(texts[0], texts[1]) || len(texts[0]) < 1000 {
		t.Error("the number of cores changes the points")
	}
}

// TestAgainstInterrupted leaves the plan as it was, as does a plan that ends
// while what would serve is searched.
func TestAgainstInterrupted(t *testing.T) {
	s := read(t)
	x, err := NewAxis(s, "window_ps", "", "")
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	var p Plan
	if err := p.AddAgainst(ctx, x, nil); !errors.Is(err, context.Canceled) || p.Against != nil {
		t.Errorf("%v, %v", err, p.Against)
	}
	if _, err := newAsker(s).serves(ctx); !errors.Is(err, context.Canceled) {
		t.Errorf("what serves: %v", err)
	}
	if _, err := newAsker(s).tangleNeeded(ctx, 40); !errors.Is(err, context.Canceled) {
		t.Errorf("the tangle needed: %v", err)
	}
}

func BenchmarkAgainst(b *testing.B) {
	s := parse(b, comparedText)
	b.ReportAllocs()
	for b.Loop() {
		x, err := NewAxis(s, "source.pair_rate_hz", "", "")
		if err != nil {
			b.Fatal(err)
		}
		if err := new(Plan).AddAgainst(b.Context(), x, nil); err != nil {
			b.Fatal(err)
		}
	}
}
