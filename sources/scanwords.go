package sources

import (
	"fmt"
	"strings"
)

// say fills in the sentences.
func (m *scanModel) say(r *ScanFit) {
	m.sayTold(r)
	m.sayAssumed(r)
	m.sayBounds(r)
	m.sayQuality(r)
}

// sayTold says what the scan tells and what it does not.
func (m *scanModel) sayTold(r *ScanFit) {
	switch {
	case m.options.Order == 2 && m.options.LinearNoisePerMW == [2]*float64{}:
		r.told("Pairs grow as the square of the power and other light as the power, so the scan tells the pair rate, both efficiencies, the linear noise and the constant counts of both arms.")
	case m.options.Order == 2:
		r.told("Pairs grow as the square of the power, so the scan tells the pair rate, both efficiencies and the constant counts of both arms, with linear noise taken as given: %s.", m.givenNoise())
	case m.tellsPairs():
		r.told("Pairs and linear noise both grow as the power. The pair rate and both efficiencies rest on the linear noise given: %s. The constant counts of both arms do not.", m.givenNoise())
		r.notTold("Whether the linear noise given is right: at order 1 the scan looks the same with any.")
	default:
		r.told("The scan tells how singles and coincidences grow with the power, the constant counts of both arms, an upper bound of the pair rate and lower bounds of the efficiencies.")
		r.notTold("The pair rate and the efficiencies: at order 1 pairs and linear noise grow alike. Give the linear noise of %s, 0 if there is none.", m.unknownArms())
	}
	if m.tellsPairs() {
		r.notTold("How much of an efficiency is the detector's: take it out to get the loss of the arm.")
	}
}

// givenNoise says which linear noise was given.
func (m *scanModel) givenNoise() string {
	var parts []string
	for arm, r := range m.options.LinearNoisePerMW {
		if r != nil {
			parts = append(parts, fmt.Sprintf("%.4g photons per second and mW in %s's arm", *r, armNames[arm]))
		}
	}
	return strings.Join(parts, " and ")
}

// unknownArms names the arms whose linear noise was not given.
func (m *scanModel) unknownArms() string {
	switch {
	case m.options.LinearNoisePerMW[0] != nil:
		return "Bob's arm"
	case m.options.LinearNoisePerMW[1] != nil:
		return "Alice's arm"
	}
	return "both arms"
}

// sayAssumed says what was taken for granted.
func (m *scanModel) sayAssumed(r *ScanFit) {
	switch {
	case m.scan.HasAccidentals:
	case m.scan.HasWindow:
		r.doubt("Accidentals were taken as the product of the singles and the window, which holds for a continuous pump; a pulsed one makes more: count them and give them as accidentals_hz.")
	default:
		r.doubt("Accidentals were taken as zero, as neither accidentals_hz nor window_ps is given: the pair rate then comes out too low and the efficiencies too high.")
	}
	if !m.scan.HasSeconds {
		r.doubt("No seconds are given: the error bars presume that each point was counted for one second.")
	}
	if m.options.WindowShare == 0 {
		r.doubt("The coincidence window is taken to hold all pairs.")
	} else if m.windowsDiffer() {
		r.doubt("The points have different windows, and one share of %.4g of the pairs was taken for all.", m.share)
	}
	if m.useless > 0 {
		r.doubt("Coincidences without power at %d points were left out: give their accidentals.", m.useless)
	}
}

// windowsDiffer tells whether the points have different windows.
func (m *scanModel) windowsDiffer() bool {
	for _, p := range m.scan.Points {
		if m.scan.HasWindow && p.WindowPs != m.scan.Points[0].WindowPs {
			return true
		}
	}
	return false
}

// sayBounds says which parameters an end of their range holds back.
func (m *scanModel) sayBounds(r *ScanFit) {
	for arm, name := range armNames {
		if r.fit.atBound[scanRamanA+arm] {
			r.doubt("The linear noise in %s's arm is held at its bound of 0: the counts would fit as well or better with less than none.", name)
		}
		if r.fit.atBound[scanDarkA+arm] {
			r.doubt("The constant counts of %s are held at their bound of 0: the counts would fit as well or better with less than none.", name)
		}
		if r.fit.atBound[scanEtaA+arm] {
			r.doubt("The efficiency of %s's arm is held at its bound of 1: there are too many coincidences for the other arm's singles; check the order, the accidentals, the linear noise and the window.", name)
		}
	}
}

// sayQuality says where the fit is poor or vague.
func (m *scanModel) sayQuality(r *ScanFit) {
	if r.Chance < unlikely {
		r.doubt("The counts scatter more about the fit than counting statistics allow (chi-squared per degree of freedom %.3g): another order, drift of the power, dead time or a wrong counting time; the error bars do not hold that.", r.Chi2/float64(r.DegreesOfFreedom))
	}
	if r.DegreesOfFreedom > 0 && 1-r.Chance < unlikely {
		r.doubt("The counts scatter less about the fit than counting statistics allow (chi-squared per degree of freedom %.3g): a longer counting time than was given, or averaged counts.", r.Chi2/float64(r.DegreesOfFreedom))
	}
	for _, p := range r.Parameters[:3] { // pairs and efficiencies, or the slopes
		if !(p.SD < p.Value/4) {
			r.doubt("The figure of the %s is vague (%.3g +- %.2g), and its error bar lopsided: count for longer, or over a wider range of powers.", p.Name, p.Value, p.SD)
		}
	}
	if !r.fit.converged {
		r.doubt("The fit did not settle; take its figures as rough.")
	}
}

func (r *ScanFit) told(format string, a ...any) {
	r.Told = append(r.Told, fmt.Sprintf(format, a...))
}

func (r *ScanFit) notTold(format string, a ...any) {
	r.NotTold = append(r.NotTold, fmt.Sprintf(format, a...))
}

func (r *ScanFit) doubt(format string, a ...any) {
	r.Doubts = append(r.Doubts, fmt.Sprintf(format, a...))
}
