package scenarios

import (
	"fmt"
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"pairspan/sources"
)

// What plainScan was counted with: four-wave mixing, no error of counting.
const (
	scanPairs              = 2.0e5 // per second and mW squared
	scanEtaA, scanEtaB     = 0.08, 0.06
	scanNoiseA, scanNoiseB = 5.0e4, 7.0e4 // per second and mW
	scanDark               = 500.0
)

// plainScan is a scan as the model itself gives it, accidentals 0.
var plainScan = scanOf(2)

func scanOf(order float64) string {
	var b strings.Builder
	b.WriteString("power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz,accidentals_hz,seconds\n")
	for _, p := range []float64{0.5, 1, 1.5, 2, 3, 4} {
		pairs := scanPairs * math.Pow(p, order)
		fmt.Fprintf(&b, "%g,%.6f,%.6f,%.6f,0,1000\n", p,
			scanEtaA*(pairs+scanNoiseA*p)+scanDark, scanEtaB*(pairs+scanNoiseB*p)+scanDark, scanEtaA*scanEtaB*pairs)
	}
	return b.String()
}

// scanned is the plain scenario with a source that was scanned.
func scanned(t *testing.T, scan string, entries string) (*Scenario, error) {
	t.Helper()
	text := replaced(t, "pair_rate_hz: 2.0e+6", "power_scan: { file: power-scan.csv, "+entries+" }")
	text = strings.Replace(text, "fixed_loss_db: 4.2", "fixed_loss_db: from_counts", 1)
	return Read(fstest.MapFS{"power-scan.csv": {Data: []byte(scan)}}, "x.yaml", []byte(text))
}

// TestPowerScanGivesTheEmission: pairs, light without a partner and collection
// losses at the power asked for are those the scan was made with.
func TestPowerScanGivesTheEmission(t *testing.T) {
	s, err := scanned(t, plainScan, "power_mw: 2.5, order: 2, detector: { alice: gated, bob: gated }")
	if err != nil {
		t.Fatal(err)
	}
	near := func(what string, got, want float64) {
		if math.Abs(got/want-1) > 1e-4 {
			t.Errorf("%s: %v, want %v", what, got, want)
		}
	}
	const mW = 2.5
	e, err := s.Emission()
	if err != nil {
		t.Fatal(err)
	}
	near("pair rate", e.PairRateHz, scanPairs*mW*mW)
	near("setting", s.Setting().PairRateHz, scanPairs*mW*mW)
	eff := s.Detector("gated").Efficiency
	near("Alice's loss", float64(e.CollectionLoss[Alice]), -10*math.Log10(scanEtaA/eff))
	near("fixed loss", float64(s.FixedLoss(Alice)), -10*math.Log10(scanEtaA/eff))
	l := s.Link(s.DistanceKm(), sources.Nominal)
	near("Alice's unpaired light", l.Arms[Alice].UnpairedHz, scanNoiseA*mW)
	near("Bob's unpaired light", l.Arms[Bob].UnpairedHz, scanNoiseB*mW)

	c := s.Clone()
	at, err := c.Number("source.power_scan.power_mw")
	if err != nil {
		t.Fatal(err)
	}
	*at = 2 * mW
	near("pair rate at twice the power", c.Setting().PairRateHz, 4*scanPairs*mW*mW)
	near("unpaired light at twice the power", c.Unpaired(Alice), 2*scanNoiseA*mW)

	c = s.Clone()
	if at, err = c.Fix("source.pair_rate_hz"); err != nil {
		t.Fatal(err)
	}
	near("pair rate written out", *at, scanPairs*mW*mW)
	fixed := c.Link(s.DistanceKm(), sources.Nominal)
	if fixed != l {
		t.Errorf("written out, the link is\n%+v\nnot\n%+v", fixed, l)
	}
}

// TestPowerScanOfOrderOne needs the linear noise, and takes it.
func TestPowerScanOfOrderOne(t *testing.T) {
	if _, err := scanned(t, scanOf(1), "power_mw: 2, order: 1, detector: { alice: gated, bob: gated }"); err == nil || !strings.Contains(err.Error(), "linear_noise_hz_per_mw") {
		t.Errorf("%v", err)
	}
	s, err := scanned(t, scanOf(1), "power_mw: 2, order: 1, linear_noise_hz_per_mw: { alice: 5.0e+4, bob: 7.0e+4 }, detector: { alice: gated, bob: gated }")
	if err != nil {
		t.Fatal(err)
	}
	if got, want := s.Setting().PairRateHz, 2*scanPairs; math.Abs(got/want-1) > 1e-4 {
		t.Errorf("%v, want %v", got, want)
	}
}

// TestPowerBeyondTheScan is doubted.
func TestPowerBeyondTheScan(t *testing.T) {
	s, err := scanned(t, plainScan, "power_mw: 40, order: 2, detector: { alice: gated, bob: gated }")
	if err != nil {
		t.Fatal(err)
	}
	found := false
	for _, r := range s.Repairs {
		found = found || r.Entry == "source.power_scan.power_mw" && strings.Contains(r.Sentence, "beyond the scan")
	}
	if !found {
		t.Errorf("%v", s.Repairs)
	}
}
