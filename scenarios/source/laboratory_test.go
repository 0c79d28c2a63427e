package source

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"pairspan/keyrate"
	"pairspan/scenarios"
	"pairspan/sources"
)

// An invented source that is scanned, without any error of counting.
const (
	scanPairs              = 2.0e5 // per second and mW to the order
	scanEtaA, scanEtaB     = 0.08, 0.06
	scanNoiseA, scanNoiseB = 5.0e4, 7.0e4 // per second and mW
)

func scanText(order float64) string {
	var b strings.Builder
	b.WriteString("power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz,accidentals_hz,seconds\n")
	for _, p := range []float64{0.5, 1, 2, 4, 8, 16, 32} {
		pairs := scanPairs * math.Pow(p, order)
		fmt.Fprintf(&b, "%g,%.6f,%.6f,%.6f,0,1000\n", p, scanEtaA*(pairs+scanNoiseA*p)+500, scanEtaB*(pairs+scanNoiseB*p)+500, scanEtaA*scanEtaB*pairs)
	}
	return b.String()
}

// delaysText is a peak of so many coincidences, 300 ps wide, on a floor of 5.
func delaysText(coincidences float64) string {
	const fwhm, centre, bin = 300.0, 1000.0, 50.0
	sigma := fwhm / (2 * math.Sqrt(2*math.Ln2)) * math.Sqrt2
	var b strings.Builder
	b.WriteString("delay_ps,counts\n")
	for ps := 0.0; ps <= 2000; ps += bin {
		inside := (math.Erf((ps+bin/2-centre)/sigma) - math.Erf((ps-bin/2-centre)/sigma)) / 2
		fmt.Fprintf(&b, "%g,%.0f\n", ps, coincidences*inside+5)
	}
	return b.String()
}

// TestScan: the figures that it was made with, and the detector taken out.
func TestScan(t *testing.T) {
	half := 0.5
	r := accounted(t, Request{File: written(t, "scan.csv", scanText(2)), Options: Options{Order: 2, DetectorEfficiency: [2]*float64{&half, &half}}})
	s := r.PowerScan
	near := func(what string, got *float64, want float64) {
		t.Helper()
		if got == nil || math.Abs(*got/want-1) > 1e-3 {
			t.Errorf("%s: %v, want %v", what, got, want)
		}
	}
	near("pairs", s.PairsHzPerMWk.Value, scanPairs)
	near("noise", s.LinearNoise.Alice.Value, scanNoiseA)
	near("efficiency", s.Efficiency.Bob.Value, scanEtaB)
	near("loss", s.CollectionLossDB.Bob.Value, -10*math.Log10(scanEtaB/half))
	near("pairs at 4 mW", s.Points[3].PairRateHz.Value, 16*scanPairs)
	near("unpaired light at 4 mW", s.Points[3].UnpairedPhotonsHz.Bob.Value, 4*scanNoiseB)
	near("its deviation in dB", s.CollectionLossDB.Bob.SD, 10/math.Ln10**s.Efficiency.Bob.SD/(*s.Efficiency.Bob.Value))
	if s.Slopes != nil || len(s.Parameters) != 7 || len(s.Correlation) != 7 || r.State != nil || r.Link != nil {
		t.Errorf("%+v", s)
	}
	low := 0.01
	r = accounted(t, Request{File: written(t, "scan.csv", scanText(2)), Options: Options{Order: 2, DetectorEfficiency: [2]*float64{&low, &half}}})
	if r.PowerScan.CollectionLossDB.Alice.Value != nil || !strings.Contains(r.Warnings[len(r.Warnings)-1].Sentence, "another detector counted") {
		t.Errorf("%+v", r.Warnings)
	}
}

// TestBestPower: no power of a fine grid makes more key than the one found, and
// the link's answer is that at this power. Too strong a pump blinds and crowds.
func TestBestPower(t *testing.T) {
	link := written(t, "link.yaml", plainLink)
	r := accounted(t, Request{File: written(t, "scan.csv", scanText(2)), On: link, Options: Options{Order: 2}})
	p := r.Link.Pump
	if p.AtEnd != "" || p.PowerMW <= p.FromMW || p.PowerMW >= p.ToMW || p.FromMW != 0.5 || p.ToMW != 32 {
		t.Fatalf("%+v", p)
	}
	s, err := scenarios.Load(link)
	if err != nil {
		t.Fatal(err)
	}
	usable := func(mW float64) float64 { // from the figures that the scan was made with
		c := s.Clone()
		c.Source.PairRateHz = scanPairs * mW * mW
		c.Source.UnpairedHz = [2]float64{scanNoiseA * mW, scanNoiseB * mW}
		l := c.Link(c.DistanceKm(), sources.AtWorst)
		return l.Key(c.Settle(&l, c.Setting())).UsableBps
	}
	if got, want := p.UsableRateBps, usable(p.PowerMW); math.Abs(got/want-1) > 1e-3 {
		t.Errorf("%v, want %v", got, want)
	}
	for mW := p.FromMW; mW <= p.ToMW; mW *= 1.01 {
		if more := usable(mW); more > p.UsableRateBps*(1+1e-3) {
			t.Errorf("%v mW makes %v bit/s, and the best is %v at %v mW", mW, more, p.UsableRateBps, p.PowerMW)
		}
	}
	if math.Abs(*r.Link.UsableRateBps/p.UsableRateBps-1) > 1e-12 || *r.Link.PairRateHz != p.PairRateHz || p.PowerMW != keyrate.Round3(p.PowerMW, math.Inf(1)) {
		t.Errorf("%+v\n%+v", r.Link, p)
	}
	if len(p.Points) != powersShown || p.Points[0].PowerMW != p.FromMW || p.Points[powersShown-1].PowerMW != p.ToMW {
		t.Errorf("%v", p.Points)
	}
}

// TestBestPowerAtAnEnd says so.
func TestBestPowerAtAnEnd(t *testing.T) {
	header, rows, _ := strings.Cut(scanText(2), "\n")
	lines := strings.SplitAfter(rows, "\n")
	weak, strong := strings.Join(lines[:4], ""), strings.Join(lines[3:], "")
	for end, c := range map[string]struct{ link, scan string }{
		"upper": {strings.Replace(plainLink, "dead_time_ns: 1000", "dead_time_ns: 10", 1), header + "\n" + weak},
		"lower": {strings.Replace(plainLink, "dead_time_ns: 1000", "dead_time_ns: 100000", 1), header + "\n" + strong},
	} {
		p := accounted(t, Request{File: written(t, "scan.csv", c.scan), On: written(t, "link.yaml", c.link), Options: Options{Order: 2}}).Link.Pump
		if p.AtEnd != end {
			t.Errorf("%s: %+v", end, p)
		}
	}
}

// TestScanLeavesOpen what order 1 cannot tell, and what a state would.
func TestScanLeavesOpen(t *testing.T) {
	link := written(t, "link.yaml", plainLink)
	r := accounted(t, Request{File: written(t, "scan.csv", scanText(1)), On: link, Options: Options{Order: 1}})
	if r.PowerScan.PairsHzPerMWk.Value != nil || r.PowerScan.Slopes == nil || r.Link.Outcome != NotTold || *r.Link.NeedBps != 100 || !strings.Contains(r.Link.Sentence, "--raman-alice") {
		t.Errorf("%+v", r.Link)
	}
	none := 0.0
	r = accounted(t, Request{File: written(t, "scan.csv", scanText(1)), On: link, Options: Options{Order: 1, LinearNoiseHzPerMW: [2]*float64{&none, &none}}})
	if r.Link.Pump == nil || r.PowerScan.PairsHzPerMWk.Value == nil {
		t.Errorf("%+v", r.Link)
	}
	stateless := written(t, "link.yaml", strings.Replace(plainLink, "  state: { tangle: 0.86 +- 0.02, measured_car: 60 }\n", "", 1))
	r = accounted(t, Request{File: written(t, "scan.csv", scanText(2)), On: stateless, Options: Options{Order: 2}})
	if r.Link.Outcome != NotTold || !strings.Contains(r.Link.Sentence, "entanglement") {
		t.Errorf("%+v", r.Link)
	}
}

// TestDelays: the figures that the histogram was made with; on a link the spread
// stands in place of all that the scenario has for it, as a clock of that jitter
// does where nothing else spreads the arrivals.
func TestDelays(t *testing.T) {
	link := written(t, "link.yaml", plainLink)
	r := accounted(t, Request{File: written(t, "delays.csv", delaysText(40_000)), On: link})
	d := r.Delays
	if d.Kind != "one_peak" || math.Abs(*d.FWHMPs.Value-300) > 2 || math.Abs(*d.DelayPs.Value-1000) > 2 || len(d.Bins) != 41 || d.Bins[20].DelayPs != 1000 {
		t.Errorf("%+v", d)
	}
	s, err := scenarios.Load(link)
	if err != nil {
		t.Fatal(err)
	}
	s.Detectors[0].JitterFWHMPs = 0
	s.ClockJitterFWHMPs = 0
	coherence := s.Spread(0)
	s.ClockJitterFWHMPs = math.Sqrt(*d.FWHMPs.Value**d.FWHMPs.Value - coherence*coherence)
	l := s.Link(s.DistanceKm(), sources.AtWorst)
	if want := l.Key(s.Settle(&l, s.Setting())).UsableBps; math.Abs(*r.Link.UsableRateBps/want-1) > 1e-9 {
		t.Errorf("%v, want %v", *r.Link.UsableRateBps, want)
	}

	r = accounted(t, Request{File: written(t, "delays.csv", delaysText(0)), On: link})
	if r.Delays.Kind != "none" || r.Link.Outcome != NotTold {
		t.Errorf("%+v", r.Link)
	}
	pulsed := strings.Replace(plainLink, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+8\n  pairs_per_pulse: 0.02", 1)
	r = accounted(t, Request{File: written(t, "delays.csv", delaysText(40_000)), On: written(t, "link.yaml", pulsed)})
	if r.Link.Outcome != NotTold || !strings.Contains(r.Link.Sentence, "pulsed") {
		t.Errorf("%+v", r.Link)
	}
}

// TestSourceOnAnotherLink: the whole source moves, what was counted at it
// written out; on its own link nothing is replaced.
func TestSourceOnAnotherLink(t *testing.T) {
	counted := strings.Replace(plainLink, "pair_rate_hz: 2.0e+6", `counted:
    singles_hz: { alice: 200000, bob: 180000 }
    coincidences_hz: 15000
    window_ps: 1000
    background_hz: { alice: 1000, bob: 1000 }
    detector: { alice: a, bob: a }`, 1)
	counted = strings.Replace(counted, "state: { tangle: 0.86 +- 0.02, measured_car: 60 }", "state: { visibility: { hv: 0.97, da: 0.95 } }", 1)
	file := written(t, "counted.yaml", counted)
	of, err := scenarios.Load(file)
	if err != nil {
		t.Fatal(err)
	}
	other := written(t, "link.yaml", strings.Replace(plainLink, "a: { efficiency: 0.2", "a: { efficiency: 0.7", 1))
	r := accounted(t, Request{File: file, On: other})
	s, err := scenarios.Load(other)
	if err != nil {
		t.Fatal(err)
	}
	s.Source.PairRateHz, s.Source.State, s.Source.MeasuredCAR = of.Setting().PairRateHz, of.Source.State, math.NaN()
	l := s.Link(s.DistanceKm(), sources.AtWorst)
	if want := l.Key(s.Settle(&l, s.Setting())).UsableBps; math.Abs(*r.Link.UsableRateBps/want-1) > 1e-9 {
		t.Errorf("%v, want %v", *r.Link.UsableRateBps, want)
	}
	if own := accounted(t, Request{File: file}); len(own.Link.Replaced) != 0 || own.State.Known != Visibilities || own.Form != FormScenario {
		t.Errorf("%+v", own.Link)
	}

	pulsed := strings.Replace(strings.Replace(plainLink, "pair_rate_hz: 2.0e+6", "pulse_rate_hz: 1.0e+9\n  pairs_per_pulse: 0.02", 1), "need:", "window_ps: 900\nneed:", 1)
	wide := strings.Replace(plainLink, "need:", "window_ps: 1200\nneed:", 1)
	if _, err := Account(t.Context(), Request{File: written(t, "pulsed.yaml", pulsed), On: written(t, "wide.yaml", wide)}); err == nil || !strings.Contains(err.Error(), "from pulse to pulse") {
		t.Errorf("%v", err)
	}
}
