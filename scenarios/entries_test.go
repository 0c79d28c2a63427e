package scenarios

import (
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"pairspan/sources"
)

// fullDetector is the detector of errBase.
const fullDetector = "gated"

// expanded returns a row's dotted names: both arms', the one detector's.
func expanded(r *row) []string {
	name := strings.Replace(r.name, anyDetector, fullDetector, 1)
	if !strings.Contains(name, eitherArm) {
		return []string{name}
	}
	return []string{strings.Replace(name, eitherArm, "alice", 1), strings.Replace(name, eitherArm, "bob", 1)}
}

// beside are the changes that an entry needs beside it to be complete.
func beside(name string) []Change {
	counted := []Change{{"source.counted", "{ singles_hz: { alice: 310000, bob: 290000 }, coincidences_hz: 31000, window_ps: 1000, " +
		"background_hz: { alice: 1200, bob: 1200 }, detector: { alice: gated, bob: gated } }"}, {"detectors.gated.efficiency", "0.6"}, {"detectors.gated.dead_time_ns", "40"}}
	switch r, _ := lookup(&Scenario{}, name); {
	case strings.HasPrefix(name, "source.counted"):
		return counted
	case name == "source.pairs_per_pulse":
		return []Change{{"source.pulse_rate_hz", "1.0e+8"}}
	case r.only == pulsed, name == "source.pulse_rate_hz":
		return []Change{{"source.pulse_rate_hz", "1.0e+8"}, {"source.pairs_per_pulse", "0.02"}}
	case name == "need.budget":
		return []Change{{"need.secret_rate_bps", "100"}}
	case r.only == renewing:
		return []Change{{"need.aes256_renewal_s", "60"}}
	case strings.HasPrefix(name, "source.power_scan"):
		return []Change{{"source.power_scan", "{ file: power-scan.csv, power_mw: 2, order: 2 }"}}
	case strings.HasPrefix(name, "source.spectral_map"):
		return []Change{{"source.spectral_map", "{ file: spectral-map.csv }"}}
	case strings.HasPrefix(name, "source.delays"):
		return []Change{{"source.delays", "{ file: delays.csv, detector: { alice: gated, bob: gated } }"}}
	case strings.HasPrefix(name, "finite_key"):
		return []Change{{"finite_key", "{ sifted_bits_per_block: 2.0e+6, epsilon_total: 2.0e-10 }"}}
	case strings.HasPrefix(name, "source.state.visibility"):
		return []Change{{"source.state.visibility", "{ hv: 0.9, da: 0.9 }"}}
	case strings.HasPrefix(name, "source.bandwidth_fwhm_nm."):
		return []Change{{"source.bandwidth_fwhm_nm", "{ alice: 0.7, bob: 0.7 }"}}
	}
	return nil
}

// Every entry of the table can be set by a change, and is read back where
// Number says it lives; every example of the starting file is valid.
func TestEveryEntryRoundTrips(t *testing.T) {
	base, err := Read(laboratory, "x.yaml", []byte(errBase))
	if err != nil {
		t.Fatal(err)
	}
	for i := range table {
		r := &table[i]
		if r.form == ownForm || r.form == fileForm {
			continue
		}
		for _, name := range expanded(r) {
			example := strings.Replace(r.exampleFor(""), starterDetector, fullDetector, 1)
			if strings.HasSuffix(r.name, "."+eitherArm) {
				example = r.example
				if strings.HasSuffix(name, ".bob") && r.bob != "" {
					example = r.bob
				}
				if r.form == detectorForm {
					example = fullDetector
				}
			}
			s, err := base.With(append(beside(name), Change{name, example})...)
			if err != nil {
				t.Errorf("%s: %v", name, err)
				continue
			}
			for _, d := range s.DefaultsUsed {
				if d.Entry == name {
					t.Errorf("%s: stated, and yet a default", name)
				}
			}
			if r.form != numberForm || slices.Contains(r.words, example) {
				continue
			}
			want, _, _ := parseNumber(example, "")
			if got, err := s.Number(name); err != nil || *got != want.value {
				t.Errorf("%s: got %v, %v, want %v", name, got, err, want.value)
			}
			deviation := slices.Contains(s.Deviations, Deviation{name, want.sd})
			if Stated(want.sd) != deviation {
				t.Errorf("%s: deviation kept %v", name, deviation)
			}
		}
	}
}

// Both ends of each range are accepted or refused as the table says, and
// what lies just beyond is refused.
func TestRangesHoldAtTheirEnds(t *testing.T) {
	base := mustRead(t, errBase)
	for i := range table {
		r := &table[i]
		if r.form != numberForm {
			continue
		}
		name := expanded(r)[0]
		accepts := func(x float64) bool {
			_, err := base.With(append(beside(name), Change{name, figure(x)})...)
			if err == nil {
				return true
			}
			for _, e := range err.(Errors) {
				if e.Entry == name && (strings.Contains(e.Problem, "outside") || strings.Contains(e.Problem, "is not above "+figure(r.lo)) || strings.Contains(e.Problem, "is not below")) {
					return false
				}
			}
			return true // refused for what it means beside the others
		}
		for _, c := range []struct {
			x    float64
			want bool
		}{
			{r.lo, !r.above},
			{r.hi, !r.below},
			{math.Nextafter(r.lo, math.Inf(-1)), false},
			{math.Nextafter(r.hi, math.Inf(1)), false},
		} {
			if r.whole && c.x != math.Trunc(c.x) {
				c.x = math.Floor(c.x)
				if c.x >= r.lo {
					c.x = math.Ceil(r.hi) + 1
				}
			}
			if got := accepts(c.x); got != c.want {
				t.Errorf("%s: %v accepted %v", name, c.x, got)
			}
		}
	}
}

// The table is complete: an entry is described in full, its default is a
// value that it takes, and its name is its own.
func TestTableIsComplete(t *testing.T) {
	seen := map[string]bool{}
	for i := range table {
		r := &table[i]
		if seen[r.name] {
			t.Errorf("%s stands twice", r.name)
		}
		seen[r.name] = true
		switch {
		case r.meaning == "" || r.example == "":
			t.Errorf("%s: no meaning or no example", r.name)
		case (r.def == "") != (r.source == ""):
			t.Errorf("%s: a default without a source", r.name)
		case r.required && r.def != "":
			t.Errorf("%s: required, with a default", r.name)
		case r.form == numberForm && (r.at == nil || !(r.lo < r.hi)):
			t.Errorf("%s: no place or no range", r.name)
		case r.form != numberForm && r.form != ownForm && r.set == nil:
			t.Errorf("%s: nothing stores it", r.name)
		case r.unit != "" && !strings.Contains(r.name, unitWord[r.unit]):
			t.Errorf("%s: its unit %s does not end its name", r.name, r.unit)
		}
		if r.form == numberForm && r.def != "" && !r.asSaid && r.derive == nil && !slices.Contains(r.words, r.def) {
			if x, err := strconv.ParseFloat(r.def, 64); err != nil || !r.contains(x) {
				t.Errorf("%s: default %s", r.name, r.def)
			}
		}
		if r.form == choiceForm && r.def != "" && !slices.Contains(r.words, r.def) {
			t.Errorf("%s: default %s", r.name, r.def)
		}
	}
	if got := len(Entries()); got != len(table) {
		t.Errorf("%d entries described of %d", got, len(table))
	}
}

// unitWord is how a unit ends an entry's name.
var unitWord = map[string]string{
	"Hz": "_hz", "ps": "_ps", "ns": "_ns", "nm": "_nm", "km": "_km", "dB": "_db", "dB/km": "_db_per_km", "bit/s": "_bps",
	"ps/(nm km)": "_ps_per_nm_km", "ps/sqrt(km)": "_ps_per_sqrt_km",
}

func TestNumberSaysWhatItCannotResolve(t *testing.T) {
	s := mustRead(t, errBase)
	for name, want := range map[string]string{
		"arms.bob.length":               "arms.bob.length: unknown entry",
		"arms.bob":                      "arms.bob: unknown entry",
		"detectors.NAME.efficiency":     "detectors.NAME.efficiency: unknown entry",
		"arms.{alice,bob}.length_km":    "arms.{alice,bob}.length_km: unknown entry",
		"title":                         "title: not a number",
		"arms.bob.detector":             "arms.bob.detector: not a number",
		"detectors.nanowire.efficiency": "detectors.nanowire.efficiency: the scenario has no such detector",
		"source.state.fidelity":         "source.state.fidelity: the state is not known by it",
		"a\x1b[0m":                      `a\x1b[0m: unknown entry`,
	} {
		if _, err := s.Number(name); err == nil || err.Error() != want {
			t.Errorf("%q: %v", name, err)
		}
	}
}

// A number is resolved once and written through; a clone's is its own.
func TestNumberPointsIntoItsScenario(t *testing.T) {
	s := mustRead(t, errBase)
	for _, name := range []string{"detectors.gated.efficiency", "arms.bob.length_km", "source.state.tangle", "window_ps"} {
		c := s.Clone()
		at, err := c.Number(name)
		if err != nil {
			t.Fatal(err)
		}
		*at = 0.125
		again, _ := c.Number(name)
		original, _ := s.Number(name)
		if *again != 0.125 || *original == 0.125 {
			t.Errorf("%s: %v in the clone, %v in the original", name, *again, *original)
		}
	}
	s.Source.State = sources.FromTangle(0.5)
	if at, err := s.Number("source.state.tangle"); err != nil || *at != 0.5 {
		t.Error(at, err)
	}
	// The bandwidth of the source is that of Alice's photon.
	a, _ := s.Number("source.bandwidth_fwhm_nm")
	b, _ := s.Number("source.bandwidth_fwhm_nm.alice")
	if a != b {
		t.Error("two places for one number")
	}
}
