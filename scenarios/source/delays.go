package source

import (
	"bytes"
	"fmt"

	"pairspan/scenarios/plan"
	"pairspan/sources"
)

// peakKinds are what stands in a histogram, as JSON says it.
var peakKinds = map[sources.PeakKind]string{sources.NoPeak: "none", sources.OnePeak: "one_peak", sources.PulsedPeaks: "pulsed"}

// delays says what a histogram of delays tells.
func (t *task) delays(text []byte) error {
	h, err := sources.ReadDelayHistogram(bytes.NewReader(text))
	if err != nil {
		return t.wrong(err)
	}
	fit, err := h.Fit(sources.DelayOptions{WindowPs: t.Options.WindowPs})
	if err != nil {
		return t.wrong(err)
	}
	t.Delays = delaysOf(h, fit)
	t.warn("delays", fit.Doubts...)
	t.Sentence = t.Delays.sentence()
	if t.link == nil {
		return nil
	}
	return t.timed(fit)
}

// delaysOf writes a fit down.
func delaysOf(h sources.DelayHistogram, fit sources.DelayFit) *DelayResult {
	r := &DelayResult{
		Kind: peakKinds[fit.Kind], BinWidthPs: fit.BinWidthPs, DelayPs: estimated(fit.DelayPs), FWHMPs: estimated(fit.FWHMPs),
		Coincidences: estimated(fit.Coincidences), FloorPerBin: estimated(fit.FloorPerBin),
		PeriodPs: estimated(fit.PeriodPs), SidePeak: estimated(fit.SidePeak), SidePeaks: fit.SidePeaks,
		WindowPs: number(fit.WindowPs), WindowShare: estimated(fit.WindowShare), InWindow: estimated(fit.CoincidencesInWindow),
		AccidentalsIn: estimated(fit.AccidentalsInWindow), CAR: estimated(fit.CAR), CoincidencesLimit: number(fit.CoincidencesLimit),
		Chi2: fit.Chi2, DegreesOfFreedom: fit.DegreesOfFreedom, Chi2PerDof: perDegree(fit.Chi2, fit.DegreesOfFreedom), PValue: number(fit.Chance),
		Bins: []DelayBin{}, Told: listed(fit.Told), Doubts: listed(fit.Doubts),
	}
	for i, ps := range h.DelayPs {
		r.Bins = append(r.Bins, DelayBin{ps, h.Counts[i], fit.Fitted[i]})
	}
	return r
}

// sentence says what the histogram tells.
func (r *DelayResult) sentence() string {
	if r.Kind == "none" {
		return "No peak of coincidences stands above the floor."
	}
	kind := "Pairs"
	if r.Kind == "pulsed" {
		kind = fmt.Sprintf("A pulsed source, %s ps from peak to peak, whose pairs", r.PeriodPs.Text())
	}
	ratio := "the ratio to the accidentals is not known"
	if r.CAR.Value != nil {
		ratio = "coincidences to accidentals " + r.CAR.Text()
	}
	return fmt.Sprintf("%s arrive within %s ps FWHM at a delay of %s ps; in a window of %s ps %s coincidences, %s.",
		kind, r.FWHMPs.Text(), r.DelayPs.Text(), three(*r.WindowPs), r.InWindow.Text(), ratio)
}

// timed says what the link carries with the spread of the arrivals as measured.
func (t *task) timed(fit sources.DelayFit) error {
	switch {
	case fit.Kind == sources.NoPeak:
		t.notTold("without a peak the histogram tells no spread of the arrivals.")
		return nil
	case t.link.Pulsed():
		t.notTold("the link's source is pulsed, so each arm is timed against the pulses, and a histogram of both does not tell how much is whose.")
		return nil
	}
	t.delaysInScenario(t.link)
	c := t.link.Clone()
	before := c.Spread(c.DistanceKm())
	t.warn("delays", c.SetDelays(&fit, [2]string{c.Arms[0].Detector, c.Arms[1].Detector})...)
	t.warn("delays", fmt.Sprintf("The histogram is taken for one of the link's own detectors without its fibre. With its clocks and the fibre's dispersion the arrivals spread by %s ps, where the scenario's figures give %s ps.",
		three(c.Spread(c.DistanceKm())), three(before)))
	return t.carry(c, []plan.Change{
		{Entry: "source.delays.file", Value: t.Title},
		{Entry: "source.delays.detector.alice", Value: c.Arms[0].Detector},
		{Entry: "source.delays.detector.bob", Value: c.Arms[1].Detector},
	})
}
