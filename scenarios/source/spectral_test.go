package source

import (
	"math"
	"path/filepath"
	"strings"
	"testing"

	"pairspan/scenarios"
	"pairspan/sources"
)

// tanglesText is a map of which the tangles alone are known.
const tanglesText = `alice_nm,bob_nm,share,tangle
1548,1552,0.5,0.9
1549,1551,0.3,0.8
1550,1550,0.2,0.7
`

// TestBandsCarry: the plan of the link behind the best bands gives what the
// search for them did, whatever the source and the settings.
func TestBandsCarry(t *testing.T) {
	pulsed := strings.Replace(plainLink, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: 0.02\n  schmidt_number: 1.5", 1)
	for name, link := range map[string]string{
		"plain":    plainLink,
		"set":      strings.Replace(plainLink, "need:", "window_ps: 700\nkey_basis_share: auto\nneed:", 1),
		"finite":   strings.Replace(plainLink, "need:", "finite_key: { sifted_bits_per_block: 1.0e+6, epsilon_total: 1.0e-10 }\nneed:", 1),
		"pulsed":   pulsed,
		"unpaired": strings.Replace(plainLink, "  wavelength", "  unpaired_photons_hz: { alice: 3.0e+5, bob: 2.0e+5 }\n  wavelength", 1),
		"auto":     strings.Replace(plainLink, "pair_rate_hz: 2.0e+6", "pair_rate_hz: auto\n  max_pair_rate_hz: 3.0e+7", 1),
	} {
		r := accounted(t, Request{File: filepath.Join("testdata", "map.csv"), On: written(t, "link.yaml", link)})
		const within = 1e-9
		best := r.SpectralMap.Best
		if got, want := *r.Link.UsableRateBps, best.OnLink.UsableRateBps; math.Abs(got/want-1) > within {
			t.Errorf("%s: %v, and the search %v", name, got, want)
		}
		if got, want := *r.Link.PairRateHz, best.OnLink.PairRateHz; math.Abs(got/want-1) > within {
			t.Errorf("%s: %v pairs per second, and the search %v", name, got, want)
		}
		if math.Abs(*r.State.Tangle.Value-*best.Tangle) > 1e-12 || !strings.Contains(r.Sentence, "Pass bands") {
			t.Errorf("%s: %+v", name, r.State.Tangle)
		}
	}
}

// TestMapAlone describes the whole map.
func TestMapAlone(t *testing.T) {
	r := accounted(t, Request{File: filepath.Join("testdata", "map.csv")})
	if r.SpectralMap.Best != nil || r.Link != nil || math.Abs(*r.State.Tangle.Value-*r.SpectralMap.Whole.Tangle) > 1e-12 {
		t.Errorf("%+v", r.SpectralMap.Whole)
	}
}

// TestTanglesAlone promise nothing: without a value at worst there is no answer,
// unless a single bin passes, whose tangle bounds its state.
func TestTanglesAlone(t *testing.T) {
	link := written(t, "link.yaml", plainLink)
	r := accounted(t, Request{File: written(t, "tangles.csv", tanglesText), On: link})
	if r.Link.Outcome != NotTold || r.Link.UsableRateBps != nil || r.State != nil || !strings.Contains(r.Link.Sentence, "at worst") {
		t.Errorf("%+v", r.Link)
	}
	single := "alice_nm,bob_nm,share,tangle\n1550,1550,1,0.86\n"
	r = accounted(t, Request{File: written(t, "tangles.csv", single), On: link})
	s, err := scenarios.Load(link)
	if err != nil {
		t.Fatal(err)
	}
	s.Source.State, s.Source.MeasuredCAR = sources.FromTangle(0.86), math.NaN()
	l := s.Link(s.DistanceKm(), sources.AtWorst)
	if want := l.Key(s.Settle(&l, s.Setting())).UsableBps; r.Link.State == nil || *r.Link.State != "at_worst" || math.Abs(*r.Link.UsableRateBps/want-1) > 1e-9 {
		t.Errorf("%+v, want %v", r.Link, want)
	}
}

// TestMapWithoutKey answers for the whole map.
func TestMapWithoutKey(t *testing.T) {
	far := written(t, "link.yaml", strings.Replace(plainLink, "length_km: 6", "length_km: 300", 1))
	r := accounted(t, Request{File: filepath.Join("testdata", "map.csv"), On: far})
	if r.SpectralMap.Best != nil || r.Link.Outcome != "no_key" {
		t.Errorf("%+v", r.Link)
	}
}
