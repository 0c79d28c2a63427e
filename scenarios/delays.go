package scenarios

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"pairspan/link"
	"pairspan/sources"
)

// Delays is a histogram of the delays between a pair's detections, recorded at
// a continuous source without the link's fibre.
type Delays struct {
	Used       bool
	Detector   [2]string // that recorded it, names in Scenario.Detectors
	RestFWHMPs float64   // spread that the jitter of these does not explain: counting electronics, coherence; ps
}

const (
	delaysEntry    = "source.delays"
	delaysDoubtful = "delays" // the rule of the warning
)

// surelyNarrower is how many standard deviations a peak is narrower than its
// detectors' jitter before that is said.
const surelyNarrower = 2

// SetDelays takes what a histogram of delays says of the arrivals' spread: the
// part of the peak's width that the jitter of the detectors which recorded it
// does not explain takes the place of the coherence time, if it is longer.
// The link's own detectors, its clocks and its fibre add theirs, as ever. It
// returns what is doubtful of that.
func (s *Scenario) SetDelays(fit *sources.DelayFit, detector [2]string) (doubts []string) {
	width, jitter := fit.FWHMPs, link.RootSumSquare(s.Detector(detector[Alice]).JitterFWHMPs, s.Detector(detector[Bob]).JitterFWHMPs)
	rest := width.Value*width.Value - jitter*jitter
	s.Source.Delays = Delays{Used: true, Detector: detector, RestFWHMPs: math.Sqrt(max(0, rest))}
	if width.Value+surelyNarrower*width.SD < jitter {
		doubts = append(doubts, fmt.Sprintf("The peak of the delays is %.4g ps wide, less than the %.4g ps that the jitter of its two detectors alone would make. Either they are better than stated, and their jitter_fwhm_ps can be lowered, or others recorded it; the jitter is used as stated.", width.Value, jitter))
	}
	if fit.Kind == sources.PulsedPeaks {
		doubts = append(doubts, fmt.Sprintf("The delays show the peaks of a pulsed source, %.4g ps apart, and the source here is continuous.", fit.PeriodPs.Value))
	}
	return doubts
}

// delays fits a histogram of delays.
func (r *reader) delays(entry string, data []byte) error {
	histogram, err := sources.ReadDelayHistogram(bytes.NewReader(data))
	if err != nil {
		return err
	}
	fit, err := histogram.Fit(sources.DelayOptions{})
	if err != nil {
		return err
	}
	if fit.Kind == sources.NoPeak {
		return errors.New("no peak of coincidences stands above the floor; give a histogram that shows one")
	}
	detector := r.s.Source.Delays.Detector
	if r.s.Detector(detector[Alice]) == nil || r.s.Detector(detector[Bob]) == nil {
		return nil // which is an error already
	}
	if doubts := append(slices.Clone(fit.Doubts), r.s.SetDelays(&fit, detector)...); len(doubts) > 0 {
		r.s.Repairs = append(r.s.Repairs, Repair{delaysDoubtful, entry, strings.Join(doubts, " ")})
	}
	return nil
}

// checkDelays finds what a histogram of delays does not go with.
func (r *reader) checkDelays() {
	r.exclude("a pulsed source's photons are timed against the pulses, arm by arm: state pump_pulse_fwhm_ps and the detectors' jitter_fwhm_ps", delaysEntry, "source.pulse_rate_hz")
}
