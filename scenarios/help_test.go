package scenarios

import (
	"io/fs"
	"strings"
	"testing"
	"testing/fstest"
)

// errBase is a scenario with nothing but what is required.
const errBase = `title: Test link
source:
  pair_rate_hz: 2.0e+6
  state:
    tangle: 0.86
  wavelength_nm: { alice: 1550, bob: 1550 }
  bandwidth_fwhm_nm: 0.8
arms:
  alice:
    length_km: 0.05
    fixed_loss_db: 4.2
    detector: gated
  bob:
    length_km: 6.2
    fixed_loss_db: 4.2
    detector: gated
detectors:
  gated:
    efficiency: 0.2
    dark_counts_hz: 1200
    jitter_fwhm_ps: 180
    dead_time_ns: 10000
`

var noFiles fs.FS = fstest.MapFS{}

// laboratory is a folder with the files that the examples of the table name.
var laboratory = fstest.MapFS{
	"state.csv": {Data: []byte(bellCSV)}, "counts.csv": {Data: []byte(bellCounts)}, "power-scan.csv": {Data: []byte(plainScan)},
	"spectral-map.csv": {Data: []byte(plainMap)}, "delays.csv": {Data: []byte(plainDelays)},
}

func mustRead(t testing.TB, text string) *Scenario {
	t.Helper()
	s, err := Read(noFiles, "x.yaml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// replaced returns errBase with pairs of texts replaced.
func replaced(t testing.TB, pairs ...string) string {
	t.Helper()
	text := errBase
	for i := 0; i < len(pairs); i += 2 {
		if !strings.Contains(text, pairs[i]) {
			t.Fatalf("no %q", pairs[i])
		}
		text = strings.Replace(text, pairs[i], pairs[i+1], 1)
	}
	return text
}
