package plan

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/sources"
)

// blocks turns base to finite-size keys.
var blocks = set{"finite_key", "{ sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }"}

// pulsedBase is base with a pulsed source.
var pulsedBase = strings.NewReplacer(
	"pair_rate_hz: 2.0e+6", "pulse_rate_hz: 8.0e+7\n  pairs_per_pulse: 0.004\n  pump_pulse_fwhm_ps: 5",
	"max_pair_rate_hz: 2.0e+7", "max_pairs_per_pulse: 0.2").Replace(base)

// countedBase is base with a source that was counted.
var countedBase = strings.Replace(base, "pair_rate_hz: 2.0e+6",
	"counted: { singles_hz: { alice: 60000, bob: 60000 }, coincidences_hz: 3000, window_ps: 1000, background_hz: { alice: 1200, bob: 1200 }, detector: { alice: free_running, bob: free_running } }", 1)

// settable are scenarios whose settings are stated, searched or bounded in every way.
func settable(t testing.TB) []struct {
	name string
	s    *scenarios.Scenario
	free []string
} {
	const pair, pulse, window, share = "source.pair_rate_hz", "source.pairs_per_pulse", "window_ps", "key_basis_share"
	noCeiling := strings.Replace(base, "  max_pair_rate_hz: 2.0e+7\n", "", 1)
	return []struct {
		name string
		s    *scenarios.Scenario
		free []string
	}{
		{"window searched", read(t), []string{pair, window}},
		{"all stated", read(t, set{window, "400"}), []string{pair, window}},
		{"no ceiling", parse(t, noCeiling, set{window, "400"}), []string{window}},
		{"no ceiling, window searched", parse(t, noCeiling), []string{window}},
		{"all searched", read(t, set{pair, "auto"}), []string{pair, window}},
		{"at a low ceiling", read(t, set{"source.max_pair_rate_hz", "3.0e+6"}), []string{pair, window}},
		{"visibilities", read(t, set{"source.state", "{ visibility: { hv: 0.97, da: 0.94 } }"}), []string{pair, window}},
		{"blocks", read(t, blocks), []string{pair, window, share}},
		{"blocks, share searched", read(t, blocks, set{share, "auto"}), []string{pair, window, share}},
		{"blocks, all searched", read(t, blocks, set{share, "auto"}, set{pair, "auto"}), []string{pair, window, share}},
		{"active, share searched", read(t, set{share, "auto"}, set{"arms.alice.basis_choice", "active"}, set{"arms.bob.basis_choice", "active"}), []string{pair, window, share}},
		{"pulsed", parse(t, pulsedBase), []string{pulse, window}},
		{"pulsed, searched", parse(t, pulsedBase, set{pulse, "auto"}), []string{pulse, window}},
		{"pulsed, blocks", parse(t, pulsedBase, blocks), []string{pulse, window, share}},
		{"far", read(t, set{"arms.bob.length_km", "95"}), []string{pair, window}},
		{"too far", read(t, set{"arms.bob.length_km", "150"}), []string{pair, window}},
	}
}

// TestBestPutBack states the best setting in the scenario: it makes as much as
// the plan says, no less than as described, and no setting close by makes more.
func TestBestPutBack(t *testing.T) {
	for _, row := range settable(t) {
		a := newAsker(row.s)
		b := a.best()
		if !slices.Equal(b.Free, row.free) {
			t.Errorf("%s: free are %v, want %v", row.name, b.Free, row.free)
		}
		s := row.s.Clone()
		for entry, value := range map[string]float64{pumpEntry(s): b.PairRateHz, "window_ps": b.WindowPs, "key_basis_share": b.KeyBasisShare} {
			at, err := s.Fix(entry)
			if err != nil {
				t.Fatal(err)
			}
			if *at = value; s.Pulsed() && entry == pumpEntry(s) {
				*at /= s.Source.PulseRateHz
			}
		}
		is := newAsker(s)
		now := is.at(s.DistanceKm(), judged, nil)
		if !within(now.rate.UsableBps, b.UsableRateBps, 1e-9) || !within(now.rate.PairsPerSlot, b.PairsPerSlot, 1e-9) {
			t.Errorf("%s: put back it makes %v bit/s with %v pairs per slot, want %+v", row.name, now.rate.UsableBps, now.rate.PairsPerSlot, *b)
		}
		described := a.at(row.s.DistanceKm(), judged, nil).rate.UsableBps
		switch {
		case described > 0 && !within(*b.Factor*described, b.UsableRateBps, 1e-12), described > b.UsableRateBps:
			t.Errorf("%s: %v bit/s as described, a factor of %v to %v", row.name, described, *b.Factor, b.UsableRateBps)
		case described == 0 && b.Factor != nil:
			t.Errorf("%s: a factor of %v from nothing", row.name, *b.Factor)
		}
		for _, near := range []float64{0.98, 1.02} {
			for _, p := range []keyrate.OperatingPoint{
				{PairRateHz: min(now.setting.PairRateHz*near, a.freed().MaxPairRateHz), WindowS: now.setting.WindowS, KeyShare: now.setting.KeyShare},
				{PairRateHz: now.setting.PairRateHz, WindowS: now.setting.WindowS * near, KeyShare: now.setting.KeyShare},
				{PairRateHz: now.setting.PairRateHz, WindowS: now.setting.WindowS, KeyShare: max(0.5, min(0.99, now.setting.KeyShare*near))},
			} {
				if !slices.Contains(b.Free, pumpEntry(s)) {
					p.PairRateHz = now.setting.PairRateHz
				}
				if !slices.Contains(b.Free, "key_basis_share") {
					p.KeyShare = now.setting.KeyShare
				}
				if got := now.link.Key(p); got.UsableBps > 1.0002*b.UsableRateBps {
					t.Errorf("%s: %v bit/s at %v, %v at %v", row.name, b.UsableRateBps, now.setting, got.UsableBps, p)
				}
			}
		}
	}
}

// within reports whether got is want within a relative tolerance.
func within(got, want, tolerance float64) bool {
	return got == want || math.Abs(got-want) <= tolerance*math.Abs(want)
}

// TestKeeps95PutBack asks at both ends of the range, and just beyond them.
func TestKeeps95PutBack(t *testing.T) {
	for _, row := range settable(t) {
		a := newAsker(row.s)
		b := a.best()
		if pumped := slices.Contains(b.Free, pumpEntry(row.s)); (b.Keeps95 != nil) != (pumped && b.UsableRateBps > 0) {
			t.Errorf("%s: keeps 95 %% in %v", row.name, b.Keeps95)
		}
		if b.Keeps95 == nil {
			continue
		}
		l := a.s.Link(a.s.DistanceKm(), a.members(judged)[0])
		share := func(pairRateHz float64) float64 {
			r := l.Key(keyrate.OperatingPoint{PairRateHz: pairRateHz, WindowS: b.WindowPs / psPerSecond, KeyShare: b.KeyBasisShare})
			return r.UsableBps / b.UsableRateBps
		}
		// A block's whole bits are stairs of some 1e-5.
		const stairs = 1e-4
		from, to := b.Keeps95.From, b.Keeps95.To
		if x := share(from); !within(x, 0.95, stairs) || share(from*0.99) >= 0.95 {
			t.Errorf("%s: %v of the rate at the lower end, %v pairs/s", row.name, x, from)
		}
		ceiling, _ := a.s.Ceiling()
		if x := share(to); to < ceiling && (!within(x, 0.95, stairs) || share(to*1.01) >= 0.95) || to >= ceiling && (to != ceiling || x < 0.95) {
			t.Errorf("%s: %v of the rate at the upper end, %v pairs/s", row.name, x, to)
		}
		for i := range 100 {
			if x := from * math.Pow(to/from, float64(i)/99); share(x) < 0.95-stairs {
				t.Errorf("%s: %v of the rate at %v between %v and %v", row.name, share(x), x, from, to)
			}
		}
	}
}

// TestBestNeverFallsBehind: whatever is stated, even the best to its last
// digit, the best setting makes no less.
func TestBestNeverFallsBehind(t *testing.T) {
	s := read(t, set{"window_ps", "400"})
	rapid.Check(t, func(t *rapid.T) {
		c := s.Clone()
		c.Source.PairRateHz = math.Pow(10, rapid.Float64Range(4, 7.3).Draw(t, "pair rate"))
		c.WindowPs = math.Pow(10, rapid.Float64Range(0, 4).Draw(t, "window"))
		c.Arms[scenarios.Bob].LengthKm = rapid.Float64Range(0, 120).Draw(t, "length")
		b := newAsker(c).best()
		if b.Factor != nil && *b.Factor < 1 {
			t.Errorf("a best setting of %v bit/s, %v of what was", b.UsableRateBps, *b.Factor)
		}
		c.Source.PairRateHz, c.WindowPs = b.PairRateHz*1.0001, b.WindowPs*0.9999
		if at := newAsker(c).best(); at.Factor != nil && !(*at.Factor >= 1 && *at.Factor < 1.001) {
			t.Errorf("the best setting, nearly, can be improved by %v", *at.Factor)
		}
	})
}

// TestBestOfACountedSource above its own ceiling: it stays where it is.
func TestBestOfACountedSource(t *testing.T) {
	a := newAsker(parse(t, countedBase, set{"source.max_pair_rate_hz", "1.0e+6"}))
	b := a.best()
	if b.PairRateHz <= 1e6 || *b.Factor != 1 || b.Keeps95.To != b.PairRateHz || !slices.Equal(b.Free, []string{"source.pair_rate_hz", "window_ps"}) {
		t.Errorf("%+v, keeps 95 %% in %v", *b, b.Keeps95)
	}
}

// TestDecidingSentences pins what is said of settings, limits and blocks.
func TestDecidingSentences(t *testing.T) {
	var b strings.Builder
	for _, row := range settable(t) {
		c := answeredCase(row.s)
		limits, err := newAsker(row.s).limits(t.Context(), nil, func() {})
		if err != nil {
			t.Fatal(err)
		}
		fmt.Fprintf(&b, "%s\n    %s\n    %s\n", row.name, c.Best.Sentence, limits.Sentence)
		if c.Block != nil {
			fmt.Fprintf(&b, "    %s\n", c.Block.Sentence)
		}
	}
	pinned(t, "deciding.txt", b.String())
}

// BenchmarkBestSetting is the optimum of pump and window at one distance, the
// link made anew.
func BenchmarkBestSetting(b *testing.B) {
	a := newAsker(read(b))
	b.ReportAllocs()
	for b.Loop() {
		a.atBestSetting(a.s.Link(6.2, sources.AtWorst))
	}
}

// BenchmarkLimits is four limits at 241 distances.
func BenchmarkLimits(b *testing.B) {
	a := newAsker(read(b))
	curve := make([]Point, 241)
	for i := range curve {
		curve[i].DistanceKm = 40 * float64(i) / 240
	}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := a.limits(b.Context(), curve, func() {}); err != nil {
			b.Fatal(err)
		}
	}
}
