package source

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/fstest"

	"pairspan/scenarios"
	"pairspan/sources"
)

// inventedSource is a source whose photon pairs lie on a diagonal of
// wavelengths, as energy conservation demands, and lose a phase across the
// spectrum that the whole does not show.
type inventedSource struct {
	bins       int
	stepNm     float64
	centreNm   [2]float64
	acrossNm   float64 // rms of the pairs' spectrum along the diagonal
	pumpNm     float64 // rms of what the pump adds
	phasePerNm float64 // of VV against HH, growing along the diagonal, radian
	noise      float64 // white, in the middle
	noisePerNm float64 // what it grows by to both sides
}

// readmeSource is the source of testdata/map.csv.
var readmeSource = inventedSource{
	bins: 8, stepNm: 0.4, centreNm: [2]float64{1548, 1552}, acrossNm: 0.75, pumpNm: 0.2,
	phasePerNm: 0.85, noise: 0.02, noisePerNm: 0.035,
}

// text returns the source's spectral map as a file, upper triangles alone.
func (s inventedSource) text() string {
	var shares [][]float64
	sum := 0.0
	for i := range s.bins {
		shares = append(shares, make([]float64, s.bins))
		for j := range s.bins {
			along, off := (s.detuning(i)-s.detuning(j))/2, (s.detuning(i)+s.detuning(j))/2
			shares[i][j] = math.Exp(-along*along/(2*s.acrossNm*s.acrossNm) - off*off/(2*s.pumpNm*s.pumpNm))
			sum += shares[i][j]
		}
	}
	var text strings.Builder
	text.WriteString("alice_nm,bob_nm,share,row,col,re,im\n")
	for i := range s.bins {
		for j := range s.bins {
			if share := math.Round(shares[i][j]/sum*1e5) / 1e5; share > 0 {
				s.writeBin(&text, i, j, share)
			}
		}
	}
	return text.String()
}

// detuning returns how far a bin lies from the middle of the spectrum.
func (s inventedSource) detuning(bin int) float64 {
	return (float64(bin) - float64(s.bins-1)/2) * s.stepNm
}

func (s inventedSource) writeBin(text *strings.Builder, i, j int, share float64) {
	along := (s.detuning(i) - s.detuning(j)) / 2
	white := min(1, s.noise+s.noisePerNm*math.Abs(along))
	sin, cos := math.Sincos(s.phasePerNm * along)
	for row := range 4 {
		for col := row; col < 4; col++ {
			re, im := 0.0, 0.0
			switch {
			case row == col:
				re = white / 4
				if row%3 == 0 {
					re = 0.5 - white/4
				}
			case row == 0 && col == 3:
				re, im = (1-white)/2*cos, -(1-white)/2*sin
			}
			fmt.Fprintf(text, "%s,%s,%.5f,%d,%d,%s,%s\n", tidy(s.centreNm[0]+s.detuning(i)), tidy(s.centreNm[1]+s.detuning(j)), share, row, col, tidy(re), tidy(im))
		}
	}
}

// tidy writes a number with six decimals at most.
func tidy(x float64) string {
	text := strings.TrimRight(strings.TrimRight(fmt.Sprintf("%.6f", x), "0"), ".")
	if text == "-0" {
		return "0"
	}
	return text
}

func (s inventedSource) spectralMap(t testing.TB) *sources.SpectralMap {
	t.Helper()
	m, err := sources.ReadSpectralMap(strings.NewReader(s.text()))
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// bandCampus is a link for such a source; changes replace its lines.
const bandCampus = `title: Two wings of one building
source:
  pair_rate_hz: 2.0e+6
  wavelength_nm: { alice: 1548, bob: 1552 }
  bandwidth_fwhm_nm: 1.8
arms:
  alice: { length_km: 0.05, fixed_loss_db: 4.5, detector: free_running }
  bob: { length_km: 9, connector_pairs: 4, fixed_loss_db: 4.5, detector: free_running }
detectors:
  free_running: { efficiency: 0.2, dark_counts_hz: 900, jitter_fwhm_ps: 170, dead_time_ns: 9000, afterpulsing: 0.02 }
window_ps: auto
`

// bandScenario reads the campus with pairs of old and new text exchanged.
func bandScenario(t testing.TB, changes ...string) *scenarios.Scenario {
	t.Helper()
	text := bandCampus
	for k := 0; k < len(changes); k += 2 {
		if !strings.Contains(text, changes[k]) {
			t.Fatalf("no %q to change", changes[k])
		}
		text = strings.Replace(text, changes[k], changes[k+1], 1)
	}
	s, err := scenarios.Read(fstest.MapFS{}, "campus.yaml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// testdata/map.csv is what the generator makes; WRITE_MAP=1 writes it anew.
func TestMapFile(t *testing.T) {
	name, want := filepath.Join("testdata", "map.csv"), readmeSource.text()
	if os.Getenv("WRITE_MAP") != "" {
		if err := os.WriteFile(name, []byte(want), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	got, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	if string(got) != want {
		t.Errorf("%s is not what its generator makes", name)
	}
}
