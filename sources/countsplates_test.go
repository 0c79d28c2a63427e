package sources

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"
)

// samples is how often a field is sampled in one period.
const samples = 64

// A field over one period, H and V, Re(amplitude exp(-iωt)).
type field [samples][2]float64

func fieldOf(a Analyser) (f field) {
	for n := range f {
		turn := cmplx.Exp(complex(0, -2*math.Pi*float64(n)/samples))
		f[n] = [2]float64{real(a[0] * turn), real(a[1] * turn)}
	}
	return f
}

// through returns the field behind a plate whose slow axis is late by a share of
// the period.
func (f field) through(fastAxisDeg, late float64) (behind field) {
	sin, cos := math.Sincos(fastAxisDeg * math.Pi / 180)
	delay := int(late * samples)
	for n := range f {
		then := f[(n-delay+samples)%samples]
		fast := cos*f[n][0] + sin*f[n][1]
		slow := -sin*then[0] + cos*then[1]
		behind[n] = [2]float64{cos*fast - sin*slow, sin*fast + cos*slow}
	}
	return behind
}

// The plates' analyser against what they do to a field in time: the slow axis
// lags, by a quarter of a period in the quarter-wave plate, by half of one in
// the half-wave plate; the polariser keeps H.
func TestPlatesActOnFields(t *testing.T) {
	d := normalDrawer(81)
	for range 300 {
		plates := Plates{HWPDeg: 180 * d(), QWPDeg: 180 * d()}
		u := d.turn()
		light := Analyser{u[0][0], u[0][1]}
		behind := fieldOf(light).through(plates.QWPDeg, 0.25).through(plates.HWPDeg, 0.5)
		passed := 0.0
		for _, e := range behind {
			passed += e[0] * e[0] * 2 / samples
		}
		a := plates.Analyser()
		overlap := cmplx.Abs(cmplx.Conj(a[0])*light[0] + cmplx.Conj(a[1])*light[1])
		near(t, "share that passes", overlap*overlap, passed, 1e-12)
	}
}

// For one who looks towards the source, H to the right and V up, the field of R
// turns clockwise.
func TestRTurnsClockwise(t *testing.T) {
	for letter, sign := range map[string]float64{"R": -1, "L": 1} {
		a, _ := LetterAnalyser(letter)
		f := fieldOf(a)
		if turn := f[0][0]*f[1][1] - f[0][1]*f[1][0]; turn*sign <= 0 {
			t.Errorf("%s turns the wrong way", letter)
		}
	}
}

// The table of the doc comment; turning a plate by 180 degrees changes nothing.
func TestPlatesOfLetters(t *testing.T) {
	for letter, plates := range letterPlates {
		want, _ := LetterAnalyser(letter)
		for _, more := range []Plates{{}, {180, 0}, {0, -180}, {-180, 180}} {
			got := Plates{plates.HWPDeg + more.HWPDeg, plates.QWPDeg + more.QWPDeg}.Analyser()
			for i, s := range got.stokes() {
				near(t, fmt.Sprintf("S%d of %s", i, letter), s, want.stokes()[i], 1e-15)
			}
		}
	}
}

var letterPlates = map[string]Plates{
	"H": {0, 0}, "V": {45, 0},
	"D": {22.5, 45}, "A": {-22.5, 45},
	"R": {22.5, 0}, "L": {22.5, 90},
}

// One measurement, written by letters and by wave plates, is one state.
func TestPlatesAndLettersAgree(t *testing.T) {
	counts := normalDrawer(82).varied(combinations("HVDRAL"), 20).simulated(Werner(0.8), 900, 7)
	text := "counts,seconds,accidentals,alice_qwp_deg,alice_hwp_deg,bob_hwp_deg,bob_qwp_deg\n"
	for _, s := range counts.Settings {
		a, b := letterPlates[s.Names[0]], letterPlates[s.Names[1]]
		text += fmt.Sprintf("%.0f,%.17g,%.17g,%g,%g,%g,%g\n", s.Counts, s.Exposure, s.Accidentals, a.QWPDeg, a.HWPDeg, b.HWPDeg, b.QWPDeg)
	}
	byPlates, err := ReadCounts(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	byLetters, err := ReadCounts(strings.NewReader(counts.written()))
	if err != nil {
		t.Fatal(err)
	}
	expect(t, byPlates.Settings[5].Names[1], "hwp 22.5 qwp 90")
	a, errA := byLetters.MaximumLikelihood()
	b, errB := byPlates.MaximumLikelihood()
	if errA != nil || errB != nil {
		t.Fatal(errA, errB)
	}
	near(t, "distance of the states", distance(a.Rho, b.Rho), 0, 1e-9)
	near(t, "ratio of the totals", a.Total/b.Total, 1, 1e-9)
}
