package scenarios

import (
	"fmt"

	"pairspan/link"
	"pairspan/sources"
)

// Emission is what the source emits, however it was described.
type Emission struct {
	PairRateHz     float64    // pairs per second made inside the source
	CollectionLoss [2]link.DB // of each arm, where it was counted; detector taken out
}

// Emission returns the pair rate as stated, or as the counts at the source
// tell. The error says which counts cannot be.
func (s *Scenario) Emission() (Emission, error) {
	src := &s.Source
	switch {
	case src.Counted.Used:
		return s.counted()
	case src.PowerScan.Used:
		return s.scanned()
	case s.Pulsed():
		return Emission{PairRateHz: src.PulseRateHz * src.PairsPerPulse}, nil
	}
	return Emission{PairRateHz: src.PairRateHz}, nil
}

// Ceiling returns the pair rate that the pump can reach; ok where it is stated.
func (s *Scenario) Ceiling() (pairRateHz float64, ok bool) {
	if s.Pulsed() {
		most := s.Source.MaxPairsPerPulse
		return most * s.Source.PulseRateHz, Stated(most)
	}
	return s.Source.MaxPairRateHz, Stated(s.Source.MaxPairRateHz)
}

// counted takes dead time, noise and accidentals out of what was counted at
// the source, and the detectors out of the arms' efficiencies.
func (s *Scenario) counted() (Emission, error) {
	c := &s.Source.Counted
	pure := sources.Counted{CoincidencesHz: c.CoincidencesHz, UnpairedHz: s.Source.UnpairedHz, WindowShare: s.countingShare()}
	accidentals := c.WindowPs / psPerSecond
	if s.Pulsed() {
		accidentals = 1 / s.Source.PulseRateHz
	}
	for i, arm := range armNames {
		det := s.countingDetector(i)
		clicks, live := det.Incident(c.SinglesHz[i])
		if !Stated(live) {
			return Emission{}, fmt.Errorf("%s's singles are more than a detector with a dead time of %g ns can register", arm, det.DeadTimeNs)
		}
		noise, _ := det.Incident(c.BackgroundHz[i])
		pure.SinglesHz[i] = clicks - noise
		pure.CoincidencesHz /= live
		accidentals *= c.SinglesHz[i] / live // afterpulses make accidentals too
	}
	pure.CoincidencesHz -= accidentals
	if pure.CoincidencesHz <= 0 {
		return Emission{}, fmt.Errorf("all the coincidences are accidental: these singles alone make %.4g per second", accidentals)
	}
	return s.collected(pure)
}

// collected turns pure counts into pair rate and collection losses.
func (s *Scenario) collected(pure sources.Counted) (Emission, error) {
	rate, err := pure.PairRateHz()
	if err != nil {
		return Emission{}, err
	}
	e := Emission{PairRateHz: rate}
	var efficiency [2]float64
	if efficiency[Alice], efficiency[Bob], err = pure.ArmEfficiencies(); err != nil {
		return Emission{}, err
	}
	for i, arm := range armNames {
		det := s.countingDetector(i)
		if efficiency[i] > det.Efficiency {
			return Emission{}, fmt.Errorf("%s's arm would let through %.4g of the photons with its detector, which alone has an efficiency of %g",
				arm, efficiency[i], det.Efficiency)
		}
		e.CollectionLoss[i] = link.LossOf(efficiency[i] / det.Efficiency)
	}
	return e, nil
}

// countingDetector returns the detector with which an arm was counted at the source.
func (s *Scenario) countingDetector(i int) link.Detector {
	det := s.Detector(s.Source.Counted.Detector[i]).Detector
	if s.Pulsed() {
		det = det.Gated(s.Source.PulseRateHz)
	}
	return det
}

// countingShare returns the window share when the pairs were counted at the
// source, where no fibre spreads them and no pass band narrows them.
func (s *Scenario) countingShare() float64 {
	c := &s.Source.Counted
	a, b := s.countingDetector(Alice).JitterFWHMPs, s.countingDetector(Bob).JitterFWHMPs
	if !s.Pulsed() {
		return link.WindowShare(c.WindowPs, link.RootSumSquare(a, b, s.ClockJitterFWHMPs, s.unfiltered().coherence()))
	}
	pump := s.Source.PumpPulseFWHMPs
	return link.WindowShare(c.WindowPs, link.RootSumSquare(a, s.ClockJitterFWHMPs, pump)) *
		link.WindowShare(c.WindowPs, link.RootSumSquare(b, s.ClockJitterFWHMPs, pump))
}

// armNames are the arms as people are told of them.
var armNames = [2]string{"alice", "bob"}
