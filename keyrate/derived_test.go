package keyrate

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"testing"

	"pairspan/link"
)

// table is a file of derived values, made with high precision by an
// independent program: see testdata/derived/README.md.
type table struct {
	column map[string]int
	rows   [][]string
}

func derived(t *testing.T, name string) table {
	t.Helper()
	f, err := os.Open("../testdata/derived/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	tab := table{map[string]int{}, rows[1:]}
	for i, name := range rows[0] {
		tab.column[name] = i
	}
	if len(tab.rows) < 20 {
		t.Fatalf("%s: only %d rows", name, len(tab.rows))
	}
	return tab
}

// get reads one number of a row; an unknown column is a mistake in the test.
func (tab table) get(t *testing.T, row int, name string) float64 {
	t.Helper()
	i, ok := tab.column[name]
	if !ok {
		t.Fatalf("no column %s", name)
	}
	x, err := strconv.ParseFloat(tab.rows[row][i], 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// near reports whether got is want within a relative tolerance.
func near(got, want, tolerance float64) bool {
	return got == want || math.Abs(got-want) <= tolerance*math.Abs(want)
}

func TestSlotAgainstGeneratingFunctions(t *testing.T) {
	tab := derived(t, "slots.csv")
	for i := range tab.rows {
		at := func(name string) float64 { return tab.get(t, i, name) }
		s := Slot{
			Pairs: at("mu"), Efficiency: [2]float64{at("eta_a"), at("eta_b")},
			Noise: [2]float64{at("d_a"), at("d_b")}, Share: at("w"), Error: at("e"), Modes: at("modes"),
		}
		q, qber := s.Click()
		accidental := s.Accidental()
		const tolerance = 1e-14
		if !near(q, at("q"), tolerance) || !near(qber, at("qber"), tolerance) || !near(accidental, at("accidental_q"), tolerance) {
			t.Errorf("%+v: %v, %v, %v, want %v, %v, %v", s, q, qber, accidental, at("q"), at("qber"), at("accidental_q"))
		}
	}
}

// TestTextbookFormsLoseTheirDigits shows why the slot is written as it is:
// 1 - noA - noB + noAB and (1 - s/Q)/2 cancel at high loss and at low error.
// The rows are those of the test above, which hold to 1e-14.
func TestTextbookFormsLoseTheirDigits(t *testing.T) {
	tab := derived(t, "slots.csv")
	var highLoss, lowError int
	for i := range tab.rows {
		at := func(name string) float64 { return tab.get(t, i, name) }
		if !math.IsInf(at("modes"), 1) {
			continue
		}
		mu, ea, eb, e := at("mu"), at("eta_a"), at("eta_b"), at("e")
		a, b := math.Exp(-at("d_a")-mu*ea/2), math.Exp(-at("d_b")-mu*eb/2)
		y := mu * ea * eb * at("w") / 2
		q := 1 - a*a - b*b + a*a*b*b*math.Exp(2*y)
		s := 2 * a * b * (math.Exp((1-e)*y) - math.Exp(e*y))
		if near((1-s/q)/2, at("qber"), 1e-3) {
			continue
		}
		if ea*eb < 1e-12 { // 120 dB
			highLoss++
		}
		if at("qber") < 1e-6 {
			lowError++
		}
	}
	if highLoss == 0 || lowError == 0 {
		t.Errorf("the textbook forms fail in %d rows of high loss and %d of low error; there should be some of both", highLoss, lowError)
	}
}

func armOf(at func(string) float64, prefix string) Arm {
	return Arm{
		Transmittance: at(prefix + "transmittance"),
		Detector: link.Detector{
			Efficiency: at(prefix + "efficiency"), DarkCountsHz: at(prefix + "dark_counts_hz"),
			JitterFWHMPs: at(prefix + "jitter_fwhm_ps"), DeadTimeNs: at(prefix + "dead_time_ns"),
			Afterpulsing: at(prefix + "afterpulsing"),
		},
		Passive:      at(prefix+"passive") == 1,
		Misalignment: at(prefix + "misalignment_error"),
		PMDError:     link.PMDError(at(prefix+"pmd_ps"), at(prefix+"wavelength_nm"), at(prefix+"bandwidth_fwhm_nm")),
		BackgroundHz: at(prefix + "background_hz"),
		UnpairedHz:   at(prefix + "unpaired_hz"),
	}
}

// linkOf builds a row's link the way package scenarios does.
func linkOf(at func(string) float64) (Link, OperatingPoint) {
	l := Link{
		PulseRateHz: at("pulse_rate_hz"), Modes: at("modes"),
		StateError: [2]float64{at("e1"), at("e2")},
		Arms:       [2]Arm{armOf(at, "a_"), armOf(at, "b_")},

		ErrorCorrectionF: at("f"), DutyCycle: 1,
	}
	clock := at("clock_jitter_fwhm_ps")
	if l.PulseRateHz > 0 {
		for i, prefix := range []string{"a_", "b_"} {
			l.Arms[i].SpreadFWHMPs = link.RootSumSquare(l.Arms[i].Detector.JitterFWHMPs, clock,
				at("pump_pulse_fwhm_ps"), at(prefix+"dispersion_ps"))
		}
	} else {
		l.SpreadFWHMPs = link.RootSumSquare(at("a_jitter_fwhm_ps"), at("b_jitter_fwhm_ps"), clock,
			max(link.CoherenceTime(at("a_wavelength_nm"), at("a_bandwidth_fwhm_nm")),
				link.CoherenceTime(at("b_wavelength_nm"), at("b_bandwidth_fwhm_nm"))),
			at("a_dispersion_ps")+at("b_dispersion_ps"))
	}
	return l, OperatingPoint{at("pair_rate_hz"), at("window_ps") / psPerSecond, at("key_share")}
}

func TestLinkAgainstHighPrecision(t *testing.T) {
	tab := derived(t, "links.csv")
	for i := range tab.rows {
		at := func(name string) float64 { return tab.get(t, i, name) }
		l, p := linkOf(at)
		r := l.Key(p)
		coincidences, accidentals := l.Coincidences(p)
		const tolerance = 1e-10
		for name, got := range map[string]float64{
			"window_share": r.WindowShare, "live_a_key": r.Arms[Alice].Live, "live_b_key": r.Arms[Bob].Live,
			"counts_a_key_hz": r.Arms[Alice].CountsHz, "counts_b_key_hz": r.Arms[Bob].CountsHz,
			"singles_a_hz": r.Arms[Alice].SinglesHz, "singles_b_hz": r.Arms[Bob].SinglesHz,
			"coincidences_hz": coincidences, "accidentals_hz": accidentals,
			"sifted_key_hz": r.SiftedHz[KeyBasis], "sifted_check_hz": r.SiftedHz[CheckBasis],
			"qber_key": r.QBER[KeyBasis], "qber_check": r.QBER[CheckBasis],
		} {
			if !near(got, at(name), tolerance) {
				t.Errorf("row %d: %s %v, want %v (%.2g off)", i+2, name, got, at(name), got/at(name)-1)
			}
		}
		if math.Abs(r.SecretBps-at("secret_rate_bps")) > 1e-12*r.SiftedBps() {
			t.Errorf("row %d: secret rate %v, want %v", i+2, r.SecretBps, at("secret_rate_bps"))
		}
	}
}

func TestBlockAgainstTwoDimensionalSearch(t *testing.T) {
	tab := derived(t, "finite.csv")
	for i := range tab.rows {
		at := func(name string) float64 { return tab.get(t, i, name) }
		b := Block{at("n"), at("k"), at("e_key"), at("delta"), at("f"), at("epsilon_total") / 2, at("epsilon_total") / 2}
		got, want := b.SecretBits(), at("secret_bits")
		if want <= 0 && math.IsInf(got, -1) {
			continue // too small to say anything, and no key
		}
		if math.Abs(got-want) > 1e-6+1e-12*at("m") {
			t.Errorf("row %d: %v bits, want %v", i+2, got, want)
		}
	}
}
