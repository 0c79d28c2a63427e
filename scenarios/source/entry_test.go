package source

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"pairspan/scenarios"
	"pairspan/scenarios/plan"
)

// TestInScenario: a link whose scenario names the file itself, in the line that
// the account of the file gives, is planned as the account answers.
func TestInScenario(t *testing.T) {
	noise := 5.0e4
	for name, c := range map[string]struct {
		text    string
		options Options
		link    string // in place of plainLink
	}{
		"matrix": {text: matrixText(tilted())},
		"counts": {text: countsText(tilted(), 400)},
		"scan":   {text: scanText(2), options: Options{Order: 2}},
		"scan in part": {text: scanText(1), options: Options{
			Order: 1, LinearNoiseHzPerMW: [2]*float64{&noise, &noise}, WindowShare: 0.97,
		}},
		"delays":         {text: delaysText(400)},
		"map":            {text: mapText(t)},
		"map of one bin": {text: "alice_nm,bob_nm,share,tangle\n1550,1550,1,0.86\n"},
		"map, pulsed": {
			text: mapText(t),
			link: strings.Replace(plainLink, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: 0.02\n  schmidt_number: 1.5", 1),
		},
		"map, unpaired light": {
			text: mapText(t),
			link: strings.Replace(plainLink, "  wavelength", "  unpaired_photons_hz: { alice: 3.0e+5, bob: 2.0e+5 }\n  wavelength", 1),
		},
		"map, free pump": {
			text: mapText(t),
			link: strings.Replace(plainLink, "pair_rate_hz: 2.0e+6", "pair_rate_hz: auto\n  max_pair_rate_hz: 3.0e+7", 1),
		},
		"map, counted": {text: mapText(t), link: strings.NewReplacer(
			"pair_rate_hz: 2.0e+6", "counted: { singles_hz: { alice: 30000, bob: 28000 }, coincidences_hz: 1500, window_ps: 800, background_hz: { alice: 900, bob: 900 }, detector: { alice: a, bob: a } }",
		).Replace(plainLink)},
	} {
		if c.link == "" {
			c.link = plainLink
		}
		dir := t.TempDir()
		file, link := filepath.Join(dir, "a file.csv"), filepath.Join(dir, "link.yaml")
		for path, text := range map[string]string{file: c.text, link: c.link} {
			if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
				t.Fatal(err)
			}
		}
		r := accounted(t, Request{File: file, On: link, Options: c.options})
		s, err := scenarios.Load(link)
		if err != nil {
			t.Fatal(err)
		}
		entry, value, _ := strings.Cut(*r.InScenario, ": ")
		changes := []scenarios.Change{{Entry: "source." + entry, Value: value}}
		if name == "map of one bin" {
			changes = append(changes, scenarios.Change{Entry: "source.bandwidth_fwhm_nm", Value: "0.8"})
		}
		changed, err := s.With(changes...)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		p, err := plan.New(t.Context(), changed, "", nil)
		if err != nil {
			t.Fatal(err)
		}
		a := p.Cases[0].Answer
		if a.UsableRateBps == nil || !(*a.UsableRateBps > 0) || math.Abs(*a.UsableRateBps / *r.Link.UsableRateBps - 1) > 1e-9 || a.Sentence != r.Link.Sentence {
			t.Errorf("%s, %s:\n%s\n%s", name, *r.InScenario, a.Sentence, r.Link.Sentence)
		}
	}
}

// mapText is the invented map of the tests.
func mapText(t *testing.T) string {
	text, err := os.ReadFile(filepath.Join("testdata", "map.csv"))
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}
