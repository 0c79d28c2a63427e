package keyrate

import (
	"math"

	"pairspan/link"
)

const psPerSecond = 1e12

// view is a link at one pair rate and key share, with all that does not
// depend on the window worked out once; atWindow adds the rest. It is the
// only place that knows whether a source is pulsed.
type view struct {
	link       *Link
	pairRateHz float64
	arms       [2]armView
	stateError [2]float64 // after misalignment and PMD
	sameBases  bool       // both bases give the same slot

	slotsHz, pairs float64 // slots per second, pairs per slot
	share          float64 // window share; pulsed: the product of both arms'
	pairShare      float64 // the part of it that acts on pairs alone
}

// armView is one arm in each basis.
type armView struct {
	basis     [2]basisView
	singlesHz float64
	share     float64 // pulsed: this arm's window share; else 1
	windowS   float64
}

// basisView is one of an arm's detectors in one basis.
type basisView struct {
	efficiency   float64 // transmittance × efficiency, × share of the basis where passive
	choice       float64 // sifting factor: share of the basis where active, else 1
	registeredHz float64
	live         float64
	noiseHz      float64 // at any time: dark counts, background, afterpulses; continuous: unpaired light
	lonePerPulse float64 // pulsed: mean photons without a partner that it would count of each pulse
}

// view works out dead time and noise of every detector.
func (l *Link) view(p OperatingPoint) view {
	if l.PairsPerEmitted > 0 {
		p.PairRateHz *= l.PairsPerEmitted
	}
	v := view{link: l, pairRateHz: p.PairRateHz}
	turned := 0.0
	for i := range l.Arms {
		a := &l.Arms[i]
		turned = flips(turned, flips(a.Misalignment, a.PMDError))
		v.arms[i] = l.respond(a, p)
	}
	for b, e := range l.StateError {
		v.stateError[b] = flips(e, turned)
	}
	v.sameBases = p.KeyShare == 0.5 && l.StateError[KeyBasis] == l.StateError[CheckBasis]
	return v
}

// flips returns the chance that exactly one of two independent bit flips
// happens; correlations 1 - 2e multiply, and small errors keep their digits.
func flips(e, f float64) float64 { return e + f - 2*e*f }

// respond asks an arm's detectors, in both bases, what they make of the light.
func (l *Link) respond(a *Arm, p OperatingPoint) armView {
	det := a.Detector
	if l.PulseRateHz > 0 {
		det = det.Gated(l.PulseRateHz)
	}
	v := armView{share: 1}
	v.basis[KeyBasis] = l.respondIn(a, &det, p.PairRateHz, p.KeyShare)
	if p.KeyShare == 0.5 {
		v.basis[CheckBasis] = v.basis[KeyBasis]
	} else {
		v.basis[CheckBasis] = l.respondIn(a, &det, p.PairRateHz, 1-p.KeyShare)
	}
	v.singlesHz = 2 * v.basis[KeyBasis].registeredHz
	if a.Passive {
		v.singlesHz += 2 * v.basis[CheckBasis].registeredHz
	}
	return v
}

// respondIn is one of an arm's two detectors in the basis that is chosen with
// probability q.
func (l *Link) respondIn(a *Arm, det *link.Detector, pairRateHz, q float64) basisView {
	eta := a.Transmittance * det.Efficiency
	v := basisView{efficiency: eta, choice: q}
	detectorShare := 0.5
	if a.Passive {
		v.efficiency, v.choice = eta*q, 1
		detectorShare = q / 2
	}
	outside, lone := det.DarkCountsHz+a.BackgroundHz, a.UnpairedHz*eta*detectorShare
	if l.PulseRateHz == 0 {
		outside += lone
	} else {
		v.lonePerPulse = lone / l.PulseRateHz
	}
	clicks := outside + l.lightClicks(pairRateHz, &v)
	v.registeredHz, v.live = det.Respond(clicks)
	v.noiseHz = outside + det.Afterpulsing*v.registeredHz
	return v
}

// lightClicks returns the clicks per second that pairs make in one of a
// basis's two detectors; of a pulsed source with the light without a partner,
// which the same pulses make. A pulse makes one click at most.
func (l *Link) lightClicks(pairRateHz float64, v *basisView) float64 {
	if l.PulseRateHz == 0 {
		return pairRateHz * v.efficiency / 2
	}
	x := pairRateHz / l.PulseRateHz * v.efficiency / 2 // mean photons a pulse
	if !math.IsInf(l.Modes, 1) {
		x = l.Modes * math.Log1p(x/l.Modes)
	}
	return -l.PulseRateHz * math.Expm1(-x-v.lonePerPulse)
}

// atWindow sets the coincidence window: slots, pairs per slot, window shares.
func (v *view) atWindow(windowS float64) {
	l, windowPs := v.link, windowS*psPerSecond
	v.arms[Alice].windowS, v.arms[Bob].windowS = windowS, windowS
	if l.PulseRateHz == 0 {
		v.slotsHz, v.pairs = 1/windowS, v.pairRateHz*windowS
		v.share = link.WindowShare(windowPs, l.SpreadFWHMPs)
		v.pairShare = v.share
		return
	}
	v.slotsHz, v.pairs = l.PulseRateHz, v.pairRateHz/l.PulseRateHz
	v.share, v.pairShare = 1, 1
	for i := range v.arms {
		v.arms[i].share = link.WindowShare(windowPs, l.Arms[i].SpreadFWHMPs)
		v.share *= v.arms[i].share
	}
}

// slot returns the slot of Alice's basis a and Bob's basis b.
func (v *view) slot(a, b int, e float64) Slot {
	s := Slot{Pairs: v.pairs, Share: v.pairShare, Error: e, Modes: v.link.Modes}
	for i, basis := range [2]int{a, b} {
		arm := &v.arms[i]
		s.Efficiency[i] = arm.basis[basis].efficiency * arm.share
		s.Noise[i] = arm.basis[basis].noiseHz*arm.windowS + arm.basis[basis].lonePerPulse*arm.share
	}
	return s
}

// kept returns the factor from the chance of a slot to a rate: slots per
// second, the active choices of basis, both live shares.
func (v *view) kept(a, b int) float64 {
	x, y := &v.arms[Alice].basis[a], &v.arms[Bob].basis[b]
	return v.slotsHz * x.choice * y.choice * x.live * y.live
}

// Coincidences returns the coincidences that are counted, matched bases or
// not, and the accidental ones among them, per second. The ratio of the true
// to the accidental ones is the CAR.
func (l *Link) Coincidences(p OperatingPoint) (coincidencesHz, accidentalsHz float64) {
	v := l.view(p)
	v.atWindow(p.WindowS)
	for a := range 2 {
		for b := range 2 {
			e := 0.5 // unmatched bases: nothing to agree on
			if a == b {
				e = v.stateError[a]
			}
			s := v.slot(a, b, e)
			q, _ := s.Click()
			coincidencesHz += q * v.kept(a, b)
			accidentalsHz += s.Accidental() * v.kept(a, b)
		}
	}
	return coincidencesHz, accidentalsHz
}
