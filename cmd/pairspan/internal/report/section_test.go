package report

import (
	"fmt"
	"strings"
	"testing"

	"pairspan/scenarios/plan"
)

// The part that is first in the way is marked at the step where it acts.
func TestStepsMarkTheLimit(t *testing.T) {
	for part, want := range map[string]string{
		"pump": "Pairs made", "coupling": "Lost on the way", "fibre": "Lost on the way", "detectors": "Detectors live",
		"timing": "Coincidences", "state": "QBER", "alignment": "QBER", "dark_counts": "QBER", "outside_light": "QBER",
	} {
		c := &samplePlan().Cases[0]
		c.Answer.FirstInTheWay = &plan.PartFactor{Part: part}
		marked := []string{}
		for _, s := range steps(c) {
			if s.First {
				marked = append(marked, s.Name)
			}
		}
		if len(marked) != 1 || !strings.HasPrefix(marked[0], want) {
			t.Errorf("%s is marked at %q, want %s", part, marked, want)
		}
	}
	c := &samplePlan().Cases[0]
	c.Answer.FirstInTheWay = nil
	for _, s := range steps(c) {
		if s.First {
			t.Errorf("%s is marked, and nothing is in the way", s.Name)
		}
	}
}

func TestGrounds(t *testing.T) {
	got := ""
	for _, g := range grounds(samplePlan()) {
		got += fmt.Sprintf("%s: %s\n", g.Name, g.Inputs)
	}
	want := `Measured: tangle, efficiency
From a data sheet or document: dead time
Assumed, as the file says: fixed loss (Alice)
Assumed: stated without an origin: pair rate, fixed loss (Bob)
Assumed: a default: connector pair loss
`
	if got != want {
		t.Errorf("grounds\n%swant\n%s", got, want)
	}
}

// Every input of the filed case is named under exactly one ground, and the
// names of entries lose their units only.
func TestGroundsNameEveryInput(t *testing.T) {
	for entry, want := range map[string]string{
		"source.pair_rate_hz":                   "pair rate",
		"source.state.visibility.hv":            "visibility HV",
		"source.unpaired_photons_hz.bob":        "unpaired photons/Bob",
		"source.bandwidth_fwhm_nm":              "bandwidth",
		"source.counted.singles_hz.alice":       "counted singles/Alice",
		"source.state.measured_car":             "CAR",
		"arms.bob.loss_db_per_km":               "loss per km/Bob",
		"arms.alice.dispersion_ps_per_nm_km":    "dispersion/Alice",
		"arms.alice.pmd_ps_per_sqrt_km":         "PMD/Alice",
		"arms.bob.connector_pair_loss_db":       "connector pair loss/Bob",
		"detectors.free_running.jitter_fwhm_ps": "jitter/free_running",
		"error_correction_f":                    "error correction",
	} {
		in := inputOf(&plan.Entry{Entry: entry, KnownBy: ptr(plan.Measured)})
		if got := strings.TrimSuffix(in.words+"/"+in.who, "/"); got != want {
			t.Errorf("%s is called %q, want %q", entry, got, want)
		}
	}
}

// A doubt stands beside the figures that its entry shapes, and in one place.
func TestDoubtsStandBesideTheirFigures(t *testing.T) {
	for entry, want := range map[string]string{
		"source.state.tangle": besideErrors, "arms.bob.misalignment_error": besideErrors, "detectors.a.dark_counts_hz": besideErrors,
		"arms.alice.fixed_loss_db": besideLosses, "arms.bob.fibre": besideLosses, "arms.bob.measured_loss_db": besideLosses,
		"source.pair_rate_hz": besideLink, "window_ps": besideLink, "detectors.a.efficiency": besideLink, "detectors.a.dead_time_ns": besideLink,
		"duty_cycle": besideRates, "": besideLink,
	} {
		if got := touches(entry); got != want {
			t.Errorf("%s touches the %s, want the %s", entry, got, want)
		}
	}
	page := pageOf(t, samplePlan(), fakeLibrary)
	for i := range samplePlan().Warnings {
		if n := strings.Count(page, fmt.Sprintf(` id="doubt-%d"`, i+1)); n != 1 {
			t.Errorf("doubt %d stands %d times", i+1, n)
		}
	}
}

func TestScenarioTables(t *testing.T) {
	var captions []string
	rows := 0
	for _, table := range scenarioTables(samplePlan()) {
		captions = append(captions, table.Caption)
		rows += len(table.Rows)
	}
	if got := strings.Join(captions, ", "); got != "source, arms.alice, arms.bob, detectors.free_running, detectors.nanowire, the link, the need and the plan" {
		t.Errorf("tables of %s", got)
	}
	if rows != len(samplePlan().Entries) {
		t.Errorf("%d rows of %d entries", rows, len(samplePlan().Entries))
	}
	for value, want := range map[plan.Entry]string{
		{Value: "3.2e+06", Unit: "Hz"}:                "3_200_000_Hz",
		{Value: "0.86", SD: ptr(0.02)}:                "0.86_±_0.02",
		{Value: "auto", Unit: "ps"}:                   "auto",
		{Value: "0.2"}:                                "0.2",
		{Value: "17.4606", Unit: "ps/(nm km)"}:        "17.4606_ps/(nm_km)",
		{Value: "G.652.D"}:                            "G.652.D",
		{Value: "1e-10"}:                              "1×10⁻¹⁰",
		{Value: "0.105", Unit: "dB", SD: ptr(0.0025)}: "0.105_±_0.0025_dB",
	} {
		if got := valueWords(&value); got != strings.ReplaceAll(want, "_", nbsp) {
			t.Errorf("%s %s reads %q, want %q", value.Value, value.Unit, got, want)
		}
	}
}

// A copy for others says what it leaves out.
func TestPageSaysWhatIsWithheld(t *testing.T) {
	p := samplePlan().Withhold()
	page := pageOf(t, p, fakeLibrary)
	for _, gone := range []string{"Harbour", "harbour.yaml", "calibrated with a power meter", "a guess"} {
		if strings.Contains(page, gone) {
			t.Errorf("the page still says %q", gone)
		}
	}
	for _, said := range []string{"Withheld from this copy: the title, the names of compared cases", "The text is withheld.", strings.Repeat("0123456789abcdef", 4)} {
		if !strings.Contains(page, said) {
			t.Errorf("the page does not say %q", said)
		}
	}
	if strings.Contains(pageOf(t, samplePlan(), fakeLibrary), "ithheld") {
		t.Error("a whole report says that something is withheld")
	}
}
