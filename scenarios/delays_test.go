package scenarios

import (
	"fmt"
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"pairspan/sources"
)

const plainDelaysFWHM = 300.0 // ps

// plainDelays is a histogram as the model itself gives it, without errors of
// counting.
var plainDelays = delaysOf(plainDelaysFWHM)

func delaysOf(fwhmPs float64) string {
	const binPs, pairs, floor = 20.0, 40000, 25.0
	sigma := fwhmPs / (2 * math.Sqrt(2*math.Ln2))
	upTo := func(x float64) float64 { return math.Erf(x/(sigma*math.Sqrt2)) / 2 }
	var b strings.Builder
	b.WriteString("delay_ps,counts\n")
	for x := -1500.0; x <= 1500; x += binPs {
		fmt.Fprintf(&b, "%g,%.0f\n", x, floor+pairs*(upTo(x+binPs/2)-upTo(x-binPs/2)))
	}
	return b.String()
}

// delayed is the plain scenario with a histogram of delays, and a second
// detector.
func delayed(t *testing.T, histogram string, changes ...string) (*Scenario, error) {
	t.Helper()
	text := replaced(t, append([]string{
		"  bandwidth_fwhm_nm: 0.8", "  bandwidth_fwhm_nm: 0.8\n  delays: { file: delays.csv, detector: { alice: gated, bob: gated } }",
		"detectors:\n", "clock_jitter_fwhm_ps: 40\ndetectors:\n  quick: { efficiency: 0.8, dark_counts_hz: 100, jitter_fwhm_ps: 50, dead_time_ns: 50 }\n",
	}, changes...)...)
	return Read(fstest.MapFS{"delays.csv": {Data: []byte(histogram)}}, "x.yaml", []byte(text))
}

// TestDelaysGiveTheSpread: with the detectors that recorded them the arrivals
// spread as measured, with others their jitter is exchanged; clocks and fibre
// come on top.
func TestDelaysGiveTheSpread(t *testing.T) {
	s, err := delayed(t, plainDelays)
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Repairs) != 1 || !strings.Contains(s.Repairs[0].Sentence, "smoothed") || strings.Contains(s.Repairs[0].Sentence, "jitter") {
		t.Errorf("%v", s.Repairs) // of counts without scatter
	}
	without := func(sum float64, less ...float64) float64 {
		for _, x := range less {
			sum -= x * x
		}
		return math.Sqrt(sum)
	}
	const gated, quick, clock = 180, 50, 40
	near := func(what string, got, want float64) {
		if math.Abs(got/want-1) > 1e-3 {
			t.Errorf("%s: %v ps, want %v", what, got, want)
		}
	}
	near("no fibre", s.differenceSpread([2]float64{}), math.Hypot(plainDelaysFWHM, clock))
	km := s.Lengths(s.DistanceKm())
	fibre := s.dispersionSpread(Alice, km[Alice]) + s.dispersionSpread(Bob, km[Bob])
	near("installed", s.Link(s.DistanceKm(), sources.Nominal).SpreadFWHMPs, math.Hypot(math.Hypot(plainDelaysFWHM, clock), fibre))

	c, err := s.With(Change{"arms.bob.detector", "quick"})
	if err != nil {
		t.Fatal(err)
	}
	near("another detector", c.differenceSpread([2]float64{}),
		math.Sqrt(plainDelaysFWHM*plainDelaysFWHM-gated*gated+quick*quick+clock*clock))

	// More jitter than when it was recorded makes the spread wider.
	c = s.Clone()
	c.Detector("gated").JitterFWHMPs = 2 * gated
	near("more jitter", c.differenceSpread([2]float64{}),
		math.Hypot(without(plainDelaysFWHM*plainDelaysFWHM, gated, gated), math.Hypot(clock, 2*gated*math.Sqrt2)))
}

// TestDelaysThatCannotBe are doubted, or refused.
func TestDelaysThatCannotBe(t *testing.T) {
	s, err := delayed(t, delaysOf(150))
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Repairs) != 1 || !strings.Contains(s.Repairs[0].Sentence, "jitter of its two detectors alone") {
		t.Errorf("%v", s.Repairs)
	}
	if got, want := s.differenceSpread([2]float64{}), math.Hypot(40, math.Hypot(180*math.Sqrt2, s.coherence())); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("%v ps, want %v", got, want)
	}
	flat := "delay_ps,counts\n" + strings.ReplaceAll("1,25\n2,25\n3,25\n4,25\n5,25\n6,25\n7,25\n8,25\n9,25\n", ",", "0,")
	if _, err := delayed(t, flat); err == nil || !strings.Contains(err.Error(), "no peak of coincidences") {
		t.Errorf("%v", err)
	}
	if _, err := delayed(t, plainDelays, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: 0.02"); err == nil || !strings.Contains(err.Error(), "cannot stand beside") {
		t.Errorf("%v", err)
	}
}

// TestPulsesReplaceDelays: a compared case with a pulsed source leaves the
// histogram out.
func TestPulsesReplaceDelays(t *testing.T) {
	s, err := delayed(t, plainDelays)
	if err != nil {
		t.Fatal(err)
	}
	c, err := s.With(Change{"source.pulse_rate_hz", "1.0e+8"}, Change{"source.pairs_per_pulse", "0.02"})
	if err != nil || c.Source.Delays.Used {
		t.Errorf("%v, %+v", err, c)
	}
}
