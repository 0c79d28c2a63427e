package sources

import (
	"fmt"
	"math"
)

// say fills in the sentences of a fit.
func (r *DelayFit) say(m *delayModel) {
	switch r.Kind {
	case PulsedPeaks:
		r.told("Peaks every %.6g ps stand out, %d besides the tallest: the source is pulsed. The coincidences are what the tallest has more than the others, and the accidentals what the others have.", r.PeriodPs.Value, r.SidePeaks)
	default:
		r.told("One peak stands out. The coincidences are its area above a flat floor, and the accidentals the floor.")
	}
	r.told("Coincidences and accidentals are compared in a window of %.4g ps full width around the peak, which holds %.1f %% of it.", r.WindowPs, 100*r.WindowShare.Value)
	r.sayPeak(m)
	if r.Chance < unlikely {
		r.doubt("The counts scatter more about the fit than counting statistics allow (chi-squared per degree of freedom %.3g): tails of the detectors, an echo, a floor that is not flat or side peaks of different height; the error bars do not hold that.", r.Chi2/float64(r.DegreesOfFreedom))
	}
	if r.DegreesOfFreedom > 0 && 1-r.Chance < unlikely {
		r.doubt("The counts scatter less about the fit than counting statistics allow (chi-squared per degree of freedom %.3g): counts that were smoothed, averaged or scaled.", r.Chi2/float64(r.DegreesOfFreedom))
	}
	if !r.fit.converged {
		r.doubt("The fit did not settle; take its figures as rough.")
	}
}

// sayPeak says what is amiss with the peak.
func (r *DelayFit) sayPeak(m *delayModel) {
	f, bins := r.fit, float64(len(m.fit.counts))
	if c := r.Coincidences; r.Kind == PulsedPeaks && !(c.Value > leastSigmas(r.SidePeaks+1)*c.SD) {
		r.doubt("No peak stands above the others by more than chance: the coincidences may all be accidental, and the delay that of any peak.")
	}
	if f.theta[delayFWHM] < 1 {
		r.doubt("The peak is narrower than a bin of %.4g ps, so its width is vague: record narrower bins.", r.BinWidthPs)
	}
	if f.theta[delayFWHM] > bins/3 {
		r.doubt("The peak is as wide as a third of the histogram or more, so that peak and floor are hard to tell apart: record a wider range of delays.")
	}
	if edge := min(f.theta[delayCentre], bins-1-f.theta[delayCentre]); edge < f.theta[delayFWHM] {
		r.doubt("The peak stands at the edge of the histogram: shift the delay.")
	}
	if f.atBound[delayFloor] && r.Kind == OnePeak {
		r.doubt("Hardly anything was counted beside the peak, so the ratio of coincidences to accidentals is not known: count for longer.")
	}
}

// leastSigmas returns how many standard deviations the tallest of several equal
// peaks exceeds with a chance of less than 0.1 %.
func leastSigmas(peaks int) float64 { return math.Sqrt(delayThreshold(peaks)) }

// sayNone fills in the sentences of a histogram without a peak.
func (r *DelayFit) sayNone() {
	r.told("No peak stands above the floor by more than chance. One of %.3g coincidences or more, with a FWHM up to a tenth of the histogram, would have been found.", math.Ceil(r.CoincidencesLimit))
	r.doubt("Check the delay between the arms, record a wider range of delays, or count for longer.")
	if r.Chance < unlikely {
		r.doubt("The counts scatter more than those of a flat floor: it is not flat.")
	}
}

func (r *DelayFit) told(format string, a ...any) {
	r.Told = append(r.Told, fmt.Sprintf(format, a...))
}

func (r *DelayFit) doubt(format string, a ...any) {
	r.Doubts = append(r.Doubts, fmt.Sprintf(format, a...))
}
