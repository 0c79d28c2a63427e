package scenarios

import (
	"fmt"
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"pairspan/sources"
)

// plainMap is a map of two bins a side, 1 nm wide, in which the pairs off the
// diagonal are less entangled.
var plainMap = mapText(map[[2]int]mapBin{
	{0, 1}: {0.45, 0.48}, {1, 0}: {0.35, 0.46}, {0, 0}: {0.12, 0.30}, {1, 1}: {0.08, 0.20},
})

type mapBin struct{ share, coherence float64 }

var (
	mapAlice = [2]float64{1549.5, 1550.5}
	mapBob   = [2]float64{1555.5, 1556.5}
)

func mapText(bins map[[2]int]mapBin) string {
	var b strings.Builder
	b.WriteString("alice_nm,bob_nm,share,row,col,re,im\n")
	for i, alice := range mapAlice {
		for k, bob := range mapBob {
			bin := bins[[2]int{i, k}]
			for row := range 4 {
				for col := row; col < 4; col++ {
					re := 0.0
					switch {
					case row == col && (row == 0 || row == 3):
						re = 0.5
					case row == 0 && col == 3:
						re = bin.coherence
					}
					fmt.Fprintf(&b, "%g,%g,%g,%d,%d,%g,0\n", alice, bob, bin.share, row, col, re)
				}
			}
		}
	}
	return b.String()
}

// mapped is the plain scenario with a spectral map in place of its state.
func mapped(t *testing.T, text, entries string, changes ...string) (*Scenario, error) {
	t.Helper()
	scenario := replaced(t, append([]string{
		"  state:\n    tangle: 0.86\n  wavelength_nm: { alice: 1550, bob: 1550 }\n  bandwidth_fwhm_nm: 0.8\n",
		"  spectral_map: { file: map.csv" + entries + " }\n",
	}, changes...)...)
	return Read(fstest.MapFS{"map.csv": {Data: []byte(text)}}, "x.yaml", []byte(scenario))
}

// TestSpectralMapInAScenario: behind pass bands a source is one with the pairs
// that pass both, in the mixture of their states, and with light without a
// partner where one photon passes alone. For Poisson light, pulsed or not, that
// holds to rounding, so the same scenario with these figures stated makes the
// same key.
func TestSpectralMapInAScenario(t *testing.T) {
	for _, c := range []struct {
		entries                     string
		share, aloneAlice, aloneBob float64
		coherence                   float64
		alice, bob                  [2]float64 // edges
	}{
		{
			entries: "", share: 1, coherence: 0.45*0.48 + 0.35*0.46 + 0.12*0.30 + 0.08*0.20,
			alice: [2]float64{1549, 1551}, bob: [2]float64{1555, 1557},
		},
		{
			entries: ", from_nm: { bob: 1556 }, to_nm: { alice: 1550 }", share: 0.45, aloneAlice: 0.12, aloneBob: 0.08, coherence: 0.48,
			alice: [2]float64{1549, 1550}, bob: [2]float64{1556, 1557},
		},
		{
			entries: ", to_nm: { alice: 1550 }", share: 0.57, aloneBob: 0.43, coherence: (0.45*0.48 + 0.12*0.30) / 0.57,
			alice: [2]float64{1549, 1550}, bob: [2]float64{1555, 1557},
		},
	} {
		for _, emission := range [][2]string{
			{"pair_rate_hz: 2.0e+6", "pair_rate_hz: %.17g"},
			{"pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: 0.02", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: %.17g"},
		} {
			rate, pairs := 2e6, 2e6*c.share
			if strings.Contains(emission[0], "pulse") {
				pairs = 0.02 * c.share
			}
			s, err := mapped(t, plainMap, c.entries, "pair_rate_hz: 2.0e+6", emission[0])
			if err != nil {
				t.Fatal(err)
			}
			middle := func(edges [2]float64) float64 { return (edges[0] + edges[1]) / 2 }
			stated, err := Read(noFiles, "x.yaml", []byte(replaced(t,
				"pair_rate_hz: 2.0e+6", fmt.Sprintf(emission[1]+"\n  unpaired_photons_hz: { alice: %.17g, bob: %.17g }", pairs, rate*c.aloneAlice, rate*c.aloneBob),
				"tangle: 0.86", fmt.Sprintf("visibility: { hv: 1, da: %.17g }", 2*c.coherence),
				"wavelength_nm: { alice: 1550, bob: 1550 }", fmt.Sprintf("wavelength_nm: { alice: %g, bob: %g }", middle(c.alice), middle(c.bob)),
				"bandwidth_fwhm_nm: 0.8", fmt.Sprintf("bandwidth_fwhm_nm: { alice: %g, bob: %g }", c.alice[1]-c.alice[0], c.bob[1]-c.bob[0]),
			)))
			if err != nil {
				t.Fatal(err)
			}
			for _, km := range []float64{0, 6.2, 60} {
				sameRates(t, fmt.Sprintf("%q, %s at %g km", c.entries, emission[0], km), s, stated, km)
			}
		}
	}
}

// sameRates holds two scenarios to the same rates at the second one's best
// setting, the pump as each states it.
func sameRates(t *testing.T, name string, s, stated *Scenario, km float64) {
	t.Helper()
	l, want := s.Link(km, sources.Nominal), stated.Link(km, sources.Nominal)
	p := stated.Settle(&want, stated.Setting())
	q := p
	q.PairRateHz = s.Setting().PairRateHz
	got, is := l.Key(q), want.Key(p)
	for _, x := range [][2]float64{
		{got.UsableBps, is.UsableBps},
		{got.SiftedHz[0], is.SiftedHz[0]},
		{got.QBER[0], is.QBER[0]},
		{got.QBER[1], is.QBER[1]},
		{got.Arms[Alice].SinglesHz, is.Arms[Alice].SinglesHz},
		{got.Arms[Bob].SinglesHz, is.Arms[Bob].SinglesHz},
	} {
		if math.Abs(x[0]-x[1]) > 1e-9*x[1] {
			t.Errorf("%s: %v, and %v with the figures stated", name, got, is)
			break
		}
	}
}

// TestSpectralMapTells what it takes the place of, in the list of defaults.
func TestSpectralMapTells(t *testing.T) {
	s, err := mapped(t, plainMap, ", from_nm: { bob: 1556 }")
	if err != nil {
		t.Fatal(err)
	}
	found := map[string]string{}
	for _, d := range s.DefaultsUsed {
		found[d.Entry] = d.Value
	}
	for entry, want := range map[string]string{
		"source.wavelength_nm.alice": "1550", "source.wavelength_nm.bob": "1556.5",
		"source.bandwidth_fwhm_nm.alice": "2", "source.bandwidth_fwhm_nm.bob": "1",
		"source.spectral_map.from_nm.alice": "all", "source.spectral_map.to_nm.bob": "all",
	} {
		if found[entry] != want {
			t.Errorf("%s: %q, want %q", entry, found[entry], want)
		}
	}
}

// TestSpectralMapOfOneBin does not tell a bandwidth, which is then required.
func TestSpectralMapOfOneBin(t *testing.T) {
	single := "alice_nm,bob_nm,share,tangle\n1550,1556,1,0.81\n"
	if _, err := mapped(t, single, ""); err == nil || !strings.Contains(err.Error(), "source.bandwidth_fwhm_nm: required") {
		t.Errorf("%v", err)
	}
	s, err := mapped(t, single, "", "arms:\n", "  bandwidth_fwhm_nm: 0.8\narms:\n")
	if err != nil {
		t.Fatal(err)
	}
	if s.Source.State != sources.FromTangle(0.81) {
		t.Errorf("%+v", s.Source.State)
	}
	if got, want := s.Bandwidth(Bob), 0.8*math.Pow(1556.0/1550, 2); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("Bob's bandwidth %v, want %v", got, want)
	}
}

// TestTanglesOfSeveralBins leave the state open: nothing is known at worst.
func TestTanglesOfSeveralBins(t *testing.T) {
	s, err := mapped(t, "alice_nm,bob_nm,share,tangle\n1549,1557,0.5,0.81\n1551,1555,0.5,0.64\n", "")
	if err != nil {
		t.Fatal(err)
	}
	if s.Source.State.Knowledge() != sources.Unknown || len(s.Repairs) != 1 || !strings.Contains(s.Repairs[0].Sentence, "at most 0.7225") {
		t.Errorf("%+v: %v", s.Source.State, s.Repairs) // ((0.9+0.8)/2)²
	}
}

// TestCountedWithoutPassBands: what was counted at the source is the whole
// light, whatever pass bands stand before the link.
func TestCountedWithoutPassBands(t *testing.T) {
	counted := "counted: { singles_hz: { alice: 30000, bob: 28000 }, coincidences_hz: 1500, window_ps: 800, background_hz: { alice: 1200, bob: 1200 }, detector: { alice: gated, bob: gated } }"
	var rates [2]float64
	for i, entries := range []string{"", ", to_nm: { alice: 1550 }"} {
		s, err := mapped(t, plainMap, entries, "pair_rate_hz: 2.0e+6", counted)
		if err != nil {
			t.Fatal(err)
		}
		rates[i] = s.Setting().PairRateHz
	}
	if rates[0] != rates[1] || rates[0] == 0 {
		t.Errorf("%v", rates)
	}
}

// TestStateReplacesSpectralMap in a compared case, which then states the rest.
func TestStateReplacesSpectralMap(t *testing.T) {
	s, err := mapped(t, plainMap, "")
	if err != nil {
		t.Fatal(err)
	}
	c, err := s.With(Change{"source.state.tangle", "0.8"}, Change{"source.wavelength_nm", "{ alice: 1550, bob: 1556 }"}, Change{"source.bandwidth_fwhm_nm", "2"})
	if err != nil || c.Source.SpectralMap.Used || c.Link(0, sources.Nominal).PairsPerEmitted != 0 {
		t.Errorf("%v, %+v", err, c)
	}
	if _, err := s.With(Change{"source.state.tangle", "0.8"}); err == nil || !strings.Contains(err.Error(), "source.wavelength_nm: required") {
		t.Errorf("%v", err)
	}
	back, err := c.With(Change{"source.spectral_map.file", "map.csv"})
	if err != nil || !back.Source.SpectralMap.Used || back.Source.WavelengthNm != s.Source.WavelengthNm {
		t.Errorf("%v", err)
	}
}

// TestPassBandThatCutsBins counts as the bins whose middles it holds, and that
// is said.
func TestPassBandThatCutsBins(t *testing.T) {
	s, err := mapped(t, plainMap, ", to_nm: { alice: 1550.3 }")
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Repairs) != 1 || !strings.Contains(s.Repairs[0].Sentence, "Alice's pass band does not end where bins end: it counts as 1549 to 1550 nm") {
		t.Errorf("%v", s.Repairs)
	}
}
