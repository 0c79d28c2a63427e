package plan

import (
	"fmt"
	"io/fs"
	"maps"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gopkg.in/yaml.v3"

	"pairspan/scenarios"
)

// Derived: the entries that a plan calls stated are the leaves of the file,
// read here by another reader; their numbers are the file's.
func TestEntriesAreTheFile(t *testing.T) {
	texts := map[string]string{
		"base": base, "rich": rich,
		"scanned": strings.NewReplacer(
			"pair_rate_hz: 2.0e+6\n", "power_scan: { file: power-scan.csv, power_mw: 3.2, order: 2, detector: { alice: free_running, bob: free_running } }\n",
			"  max_pair_rate_hz: 2.0e+7\n", "",
			"state: { tangle: 0.86 }", "state: { counts: tomography.csv }",
		).Replace(base),
		"mapped": strings.Replace(base, "state: { tangle: 0.86 }\n  wavelength_nm: { alice: 1550, bob: 1550 }\n  bandwidth_fwhm_nm: 0.8\n",
			"spectral_map: { file: spectral-map.csv, to_nm: { alice: 1548.8 } }\n  delays: { file: delays.csv, detector: { alice: free_running, bob: free_running } }\n", 1),
		"auto": strings.Replace(base, "pair_rate_hz: 2.0e+6", "pair_rate_hz: auto", 1) + "key_basis_share: auto\n",
	}
	examples, err := fs.Glob(scenarios.Examples, "*.yaml")
	if err != nil || len(examples) < 3 {
		t.Fatal(examples, err)
	}
	for _, name := range examples {
		text, err := fs.ReadFile(scenarios.Examples, name)
		if err != nil {
			t.Fatal(err)
		}
		texts[name] = string(text)
	}
	for name, text := range texts {
		var tree map[string]any
		if err := yaml.Unmarshal([]byte(text), &tree); err != nil {
			t.Fatal(err)
		}
		want := map[string]string{}
		leaves(want, "", tree)
		got := map[string]string{}
		s, err := scenarios.Read(scenarios.Examples, name, []byte(text))
		if err != nil {
			t.Fatal(name, err)
		}
		for _, e := range entries(s) {
			if e.DefaultSource == nil {
				got[e.Entry] = e.Value
				if e.SD != nil {
					got[e.Entry] += " +- " + plain(*e.SD)
				}
			}
		}
		if diff := cmp.Diff(want, got); diff != "" {
			t.Errorf("%s:\n%s", name, diff)
		}
	}
}

func richScenario(t *testing.T) *scenarios.Scenario {
	t.Helper()
	s, err := scenarios.Read(scenarios.Examples, marker+".yaml", []byte(rich))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// leaves lists a file's values by dotted name, numbers in one form.
func leaves(into map[string]string, name string, v any) {
	if group, is := v.(map[string]any); is {
		for _, key := range slices.Sorted(maps.Keys(group)) {
			full := strings.TrimPrefix(name+"."+key, ".")
			if !slices.Contains(notListed, full) {
				leaves(into, full, group[key])
			}
		}
		return
	}
	parts := strings.Split(fmt.Sprint(v), "+-")
	for i, part := range parts {
		part = strings.TrimSpace(part)
		if x, err := strconv.ParseFloat(part, 64); err == nil {
			part = plain(x)
		}
		parts[i] = part
	}
	into[name] = strings.Join(parts, " +- ")
}

// Every default used is an entry with its source, and nothing stands twice.
func TestEntriesHoldEveryDefault(t *testing.T) {
	s := richScenario(t)
	all := map[string]Entry{}
	for _, e := range entries(s) {
		if _, twice := all[e.Entry]; twice {
			t.Errorf("%s stands twice", e.Entry)
		}
		all[e.Entry] = e
	}
	for _, d := range s.DefaultsUsed {
		if e := all[d.Entry]; e.Value != d.Value || e.DefaultSource == nil || *e.DefaultSource != d.Source {
			t.Errorf("default %+v is entry %+v", d, e)
		}
	}
}

// What an input is known by follows from its origin, its deviation, and what
// the entry means.
func TestKnownBy(t *testing.T) {
	got := map[string]string{}
	for _, e := range entries(richScenario(t)) {
		if e.KnownBy != nil {
			got[e.Entry] = *e.KnownBy
		}
	}
	for entry, want := range map[string]string{
		"source.state.tangle":                   Measured, // an origin that says so
		"source.state.measured_car":             Measured, // by its meaning
		"detectors.free_running.efficiency":     Measured, // a deviation alone
		"detectors.free_running.dark_counts_hz": FromPaper,
		"detectors.free_running.dead_time_ns":   FromPaper,
		"arms.bob.length_km":                    FromPaper, // the origin of its group
		"arms.bob.fixed_loss_db":                Assumed,   // its own origin before the group's
		"source.pair_rate_hz":                   Unreferred,
		"arms.alice.splice_loss_db":             ByDefault,
		"duty_cycle":                            ByDefault,
		"arms.alice.fibre":                      ByDefault,
		"need.secret_rate_bps":                  "",
		"window_ps":                             "",
		"arms.bob.detector":                     "",
		"detectors.free_running.price":          "",
		"detectors.free_running.class":          "",
	} {
		if got[entry] != want {
			t.Errorf("%s is known by %q, want %q", entry, got[entry], want)
		}
	}
}

func TestOriginSays(t *testing.T) {
	for text, want := range map[string]string{
		"Calibrated with a power meter, 12 March": Measured,
		"tomography on the bench, eleven runs":    Measured,
		"not measured: the usual figure":          Assumed,
		"data sheet of the maker, 2024":           FromPaper,
		"duct plan of the campus":                 FromPaper,
		"a guess":                                 Assumed,
		"to be measured in May; estimated":        Assumed,
	} {
		if got := originSays(text); got != want {
			t.Errorf("%q is %s, want %s", text, got, want)
		}
	}
}

// rich states something of everything that is withheld or sorted; marker
// stands in every word that a person is free in.
const (
	marker = "Quarrytown"
	rich   = `title: Quarrytown link
source:
  pair_rate_hz: 4.0e+6
  max_pair_rate_hz: 2.0e+7
  state: { tangle: 0.86, measured_car: 40 }
  wavelength_nm: { alice: 1550, bob: 1550 }
  bandwidth_fwhm_nm: { alice: 0.8, bob: 0.8 }
arms:
  alice: { length_km: 0.05, fixed_loss_db: 4.2, detector: free_running, basis_choice: active }
  bob: { length_km: 6.2, fixed_loss_db: 4.2, detector: free_running, connector_pairs: 4 }
detectors:
  free_running: { class: ingaas, efficiency: 0.2 +- 0.01, dark_counts_hz: 1200, jitter_fwhm_ps: 180, dead_time_ns: 10000, price: 770088001, site_price: 770088002 }
  nanowire: { efficiency: 0.85, dark_counts_hz: 100, jitter_fwhm_ps: 50, dead_time_ns: 50, price: 770088003 }
window_ps: 600 # Quarrytown comment
need: { secret_rate_bps: 100, budget: 770088004 }
distance: { points: 5, lengthen: both }
compare:
  - { name: Quarrytown first, change: { arms.bob.detector: nanowire } }
  - { name: Quarrytown second, change: { detectors.nanowire.price: 770088005, arms.alice.detector: nanowire } }
  - { name: Quarrytown third, change: { source.state: { density_matrix: pulsed-state.csv } } }
  - { name: Quarrytown fourth, change: { detectors.nanowire.price: 770088006, arms.alice.detector: nanowire } }
  - { every_detector: true }
origins:
  source.state.tangle: tomography in Quarrytown
  detectors.free_running.dark_counts_hz: data sheet, Quarrytown branch
  detectors.free_running.dead_time_ns: "Quarrytown offer"
  arms.bob: Quarrytown duct plan
  arms.bob.fixed_loss_db: a guess from Quarrytown
`
)

// TestFilesOfComparedCases are among the inputs, each once.
func TestFilesOfComparedCases(t *testing.T) {
	text := strings.Replace(base, "state: { tangle: 0.86 }", "state: { counts: tomography.csv }", 1) +
		"compare:\n  - { name: matrix, change: { source.state.density_matrix: pulsed-state.csv } }\n" +
		"  - { name: longer, change: { arms.bob.length_km: 9 } }\n"
	s, err := scenarios.Read(scenarios.Examples, "x.yaml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, in := range describe(s, "").Inputs {
		names = append(names, in.Name)
	}
	if want := []string{"x.yaml", "tomography.csv", "pulsed-state.csv"}; !slices.Equal(names, want) {
		t.Errorf("%v, want %v", names, want)
	}
}
