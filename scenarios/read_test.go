package scenarios

import (
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"pairspan/link"
	"pairspan/sources"
)

// sameScenario compares scenarios by what they hold; absent numbers are equal.
var sameScenario = cmp.Options{
	cmpopts.IgnoreUnexported(Scenario{}, sources.State{}),
	cmpopts.EquateNaNs(),
}

// The required entries and the documented defaults make this scenario.
func TestDefaults(t *testing.T) {
	nan := math.NaN()
	arm := Arm{
		Fibre: "G.652.D", LossDBPerKm: nan, DispersionPsPerNmKm: nan, PMDPsPerSqrtKm: nan,
		ConnectorPairLossDB: 0.3, SpliceLossDB: 0.1, MeasuredLossDB: nan, FixedLossDB: 4.2,
		MisalignmentError: 0.01, Detector: "gated", Passive: true,
	}
	alice, bob := arm, arm
	alice.LengthKm, bob.LengthKm = 0.05, 6.2
	want := &Scenario{
		Title: "Test link",
		Source: Source{
			PairRateHz: 2e6, PulseRateHz: nan, PairsPerPulse: nan, SchmidtNumber: nan, MaxPairRateHz: nan, MaxPairsPerPulse: nan,
			Counted:   Counted{SinglesHz: [2]float64{nan, nan}, CoincidencesHz: nan, WindowPs: nan, BackgroundHz: [2]float64{nan, nan}},
			PowerScan: PowerScan{PowerMW: nan, WindowShare: nan, Order: nan, LinearNoiseHzPerMW: [2]float64{nan, nan}},
			State:     sources.FromTangle(0.86), MeasuredCAR: nan, WavelengthNm: [2]float64{1550, 1550},
			PumpPulseFWHMPs: nan, BandwidthFWHMNm: [2]float64{0.8, nan},
			SpectralMap: SpectralMap{FromNm: [2]float64{nan, nan}, ToNm: [2]float64{nan, nan}},
		},
		Arms:       [2]Arm{alice, bob},
		Detectors:  []Detector{{Name: "gated", Price: nan, SitePrice: nan, Detector: link.Detector{Efficiency: 0.2, DarkCountsHz: 1200, JitterFWHMPs: 180, DeadTimeNs: 10000}}},
		WindowAuto: true, WindowPs: nan, KeyBasisShare: 0.5, ErrorCorrectionF: 1.16, DutyCycle: 1,
		SiftedBitsPerBlock: nan, EpsilonTotal: nan, AuthenticationBitsPerBlock: nan,
		NeedBps: nan, AES256RenewalS: nan, EncryptedConnections: nan, KeyBitsPerDay: nan, Budget: nan, Draws: 2000, Seed: 1,
		Measured: Measured{[2]float64{nan, nan}, nan, nan, nan, nan, nan},
		ToKm:     nan, Points: 241, Lengthen: LengthenBob,
		Inputs: []Input{{Name: "x.yaml", Text: errBase}},
	}
	s := mustRead(t, errBase)
	used := s.DefaultsUsed
	s.DefaultsUsed = nil
	if diff := cmp.Diff(want, s, sameScenario); diff != "" {
		t.Error(diff)
	}
	var got []string
	for _, d := range used {
		got = append(got, d.Entry+" "+d.Value)
		if d.Source == "" {
			t.Errorf("%s: no source", d.Entry)
		}
	}
	want2 := `source.unpaired_photons_hz.alice 0
source.unpaired_photons_hz.bob 0
source.bandwidth_fwhm_nm.bob 0.8
arms.alice.fibre G.652.D
arms.alice.loss_db_per_km 0.275
arms.alice.dispersion_ps_per_nm_km 17.4606
arms.alice.pmd_ps_per_sqrt_km 0.1
arms.alice.connector_pairs 0
arms.alice.connector_pair_loss_db 0.3
arms.alice.splices 0
arms.alice.splice_loss_db 0.1
arms.alice.misalignment_error 0.01
arms.alice.background_counts_hz 0
arms.alice.basis_choice passive
arms.bob.fibre G.652.D
arms.bob.loss_db_per_km 0.275
arms.bob.dispersion_ps_per_nm_km 17.4606
arms.bob.pmd_ps_per_sqrt_km 0.1
arms.bob.connector_pairs 0
arms.bob.connector_pair_loss_db 0.3
arms.bob.splices 0
arms.bob.splice_loss_db 0.1
arms.bob.misalignment_error 0.01
arms.bob.background_counts_hz 0
arms.bob.basis_choice passive
detectors.gated.afterpulsing 0
window_ps auto
clock_jitter_fwhm_ps 0
key_basis_share 0.5
error_correction_f 1.16
duty_cycle 1
distance.to_km chosen by the planner
distance.points 241
distance.lengthen bob
uncertainty.draws 2000
uncertainty.seed 1`
	if diff := cmp.Diff(want2, strings.Join(got, "\n")); diff != "" {
		t.Error(diff)
	}
}

// Defaults that do not apply are not used: a measured run holds connectors
// and splices, and only a pulsed source has modes and a pulse length.
func TestDefaultsThatDoNotApply(t *testing.T) {
	uses := func(s *Scenario, entry string) (string, bool) {
		for _, d := range s.DefaultsUsed {
			if d.Entry == entry {
				return d.Value, true
			}
		}
		return "", false
	}
	s := mustRead(t, replaced(t, "length_km: 6.2", "length_km: 6.2\n    measured_loss_db: 3.1"))
	for _, entry := range []string{"arms.bob.connector_pairs", "arms.bob.splices"} {
		if _, is := uses(s, entry); is {
			t.Errorf("%s used beside measured_loss_db", entry)
		}
	}
	// More fibre has the class's attenuation; where the class has no figure,
	// that of the run: 3.1 dB over 6.2 km are 0.5 dB/km.
	if v, _ := uses(s, "arms.bob.loss_db_per_km"); v != "0.275" || Stated(s.Arms[Bob].LossDBPerKm) {
		t.Errorf("coefficient %s, %v", v, s.Arms[Bob].LossDBPerKm)
	}
	between := strings.Replace(replaced(t, "length_km: 6.2", "length_km: 6.2\n    measured_loss_db: 3.1"), "bob: 1550", "bob: 1450", 1)
	s = mustRead(t, between)
	if v, _ := uses(s, "arms.bob.loss_db_per_km"); v != "0.5" || s.Arms[Bob].LossDBPerKm != 0.5 {
		t.Errorf("coefficient %s, %v", v, s.Arms[Bob].LossDBPerKm)
	}
	// A run of no length says nothing of a kilometre.
	s = mustRead(t, replaced(t, "length_km: 0.05", "length_km: 0\n    measured_loss_db: 0.4"))
	if v, _ := uses(s, "arms.alice.loss_db_per_km"); v != "0.275" {
		t.Errorf("coefficient %s", v)
	}
	if _, is := uses(s, "source.schmidt_number"); is {
		t.Error("modes of a continuous source")
	}
	s = mustRead(t, replaced(t, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: 0.02"))
	if v, is := uses(s, "source.schmidt_number"); !is || v != "none" || Stated(s.Source.SchmidtNumber) {
		t.Errorf("modes %q, %v", v, s.Source.SchmidtNumber)
	}
	if v, _ := uses(s, "source.pump_pulse_fwhm_ps"); v != "0" || s.Source.PumpPulseFWHMPs != 0 {
		t.Errorf("pump pulse %q, %v", v, s.Source.PumpPulseFWHMPs)
	}
}

// Each description of a state becomes that state.
func TestStates(t *testing.T) {
	for text, want := range map[string]sources.State{
		"{ tangle: 0.86 }":                    sources.FromTangle(0.86),
		"{ concurrence: 0.9 }":                sources.FromConcurrence(0.9),
		"{ fidelity: 0.97 }":                  sources.FromFidelity(0.97),
		"{ visibility: { da: 0.9, hv: 0.8 }}": sources.FromVisibilities(0.8, 0.9),
	} {
		s := mustRead(t, replaced(t, "state:\n    tangle: 0.86", "state: "+text))
		if s.Source.State != want {
			t.Errorf("%s: %+v", text, s.Source.State)
		}
	}
	s := mustRead(t, replaced(t, "  state:\n    tangle: 0.86\n", ""))
	if s.Source.State.Knowledge() != sources.Unknown {
		t.Errorf("a state from nowhere: %+v", s.Source.State)
	}
}

// Deviations and origins keep the order of the file.
func TestFileOrderIsKept(t *testing.T) {
	s := mustRead(t, `origins: { arms.bob: "as built", detectors.b.efficiency: "  calibrated
   in March ", source.state.tangle: bench }
detectors:
  b: { efficiency: 0.3 +- 0.02, dark_counts_hz: 100 ± 5, jitter_fwhm_ps: 50, dead_time_ns: 30 }
  a: { dark_counts_hz: 100, efficiency: 0.3 +- 0.01, jitter_fwhm_ps: 50, dead_time_ns: 30 }
`+replaced(t, "0.86", "0.86 +- 0.03", "detector: gated", "detector: a", "detector: gated", "detector: b",
		"detectors:\n  gated:\n    efficiency: 0.2\n    dark_counts_hz: 1200\n    jitter_fwhm_ps: 180\n    dead_time_ns: 10000\n", ""))
	want := []Deviation{{"detectors.b.efficiency", 0.02}, {"detectors.b.dark_counts_hz", 5}, {"detectors.a.efficiency", 0.01}, {"source.state.tangle", 0.03}}
	if diff := cmp.Diff(want, s.Deviations); diff != "" {
		t.Error(diff)
	}
	origins := []Origin{{"arms.bob", "as built"}, {"detectors.b.efficiency", "calibrated in March"}, {"source.state.tangle", "bench"}}
	if diff := cmp.Diff(origins, s.Origins); diff != "" {
		t.Error(diff)
	}
	if s.Detectors[0].Name != "b" || s.Detectors[1].Name != "a" {
		t.Errorf("detectors %v", s.Detectors)
	}
}

// The form of an error is fixed.
func TestErrorForm(t *testing.T) {
	e := Error{"lab/link.yaml", 9, 16, "detectors.gated.efficiency", "85 is outside 0 to 1", "efficiency is a fraction: 0.85"}
	want := "lab/link.yaml:9:16: detectors.gated.efficiency: 85 is outside 0 to 1\n        hint: efficiency is a fraction: 0.85"
	if e.Error() != want {
		t.Errorf("got %q", e.Error())
	}
	e = Error{File: "a\x1b[31m.yaml", Line: 1, Column: 1, Problem: "the file is empty"}
	if want := `a\x1b[31m.yaml:1:1: the file is empty`; e.Error() != want {
		t.Errorf("got %q", e.Error())
	}
	_, err := Read(noFiles, "lab/link.yaml", []byte(replaced(t, "efficiency: 0.2", "efficiency: 85")))
	want = "lab/link.yaml:19:17: detectors.gated.efficiency: 85 is outside 0 to 1\n        hint: efficiency is a fraction: 0.85"
	if err == nil || err.Error() != want {
		t.Errorf("got %v", err)
	}
	// The place is that of the value, and of an unknown entry's name.
	_, err = Read(noFiles, "x.yaml", []byte(replaced(t, "    detector: gated\n  bob", "    efficiency: 0.2\n    detector: gated\n  bob")))
	want = "x.yaml:12:5: arms.alice.efficiency: unknown entry\n        hint: a detector's efficiency belongs under detectors.gated"
	if err == nil || err.Error() != want {
		t.Errorf("got %v", err)
	}
}

func TestManyErrorsAreCut(t *testing.T) {
	text := errBase + "x0: 1\n"
	var b strings.Builder
	b.WriteString(text)
	for i := range 500 {
		b.WriteString("x" + figure(float64(i+1)) + ": 1\n")
	}
	_, err := Read(noFiles, "x.yaml", []byte(b.String()))
	if errs, ok := err.(Errors); !ok || len(errs) != 501 {
		t.Fatalf("%d errors", len(err.(Errors)))
	}
	if n := strings.Count(err.Error(), "unknown entry"); n != maxErrors || !strings.HasSuffix(err.Error(), "\nand more") {
		t.Errorf("%d errors shown", n)
	}
}
