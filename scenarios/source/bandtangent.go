package source

import (
	"math"

	"pairspan/keyrate"
)

// A tangent bounds what all settings make of a link by what one of them does. It
// holds the key of each basis there and how that grows with each setting.
//
// The logarithm of a basis's key is a concave function of those of the pair rate
// B, the window τ and the basis's share q, and lies below its tangent planes. To
// first order in the photons of a slot that key is T φ(ρ), T the true coincidences
// and ρ the accidental ones per true one:
//
//   - T is a product of powers, of w(τ), whose logarithm is concave (w = erf), and
//     of live shares 1/(1 + n t), n being a sum of powers: ln T is concave.
//   - ρ is a sum of products of powers, over w: ln ρ is convex. In the other
//     basis, of share 1−q, no power of the share is above 0, and it is so too.
//   - φ(ρ) = (1+ρ)(1 − f h(E) − h(E')), with errors E = (e + ρ/2)/(1+ρ), falls. It
//     is concave in ln ρ while it is positive: with g(E) = −½ log₂(E(1−E)) its
//     second derivative is less than ρ (1 − f (g(E)−c) − (g(E')−c)), c = 1/(2 ln 2),
//     and g(E) + g(E') − 2c is 1.9 at least where h(E) + h(E') < 1.
//
// A falling concave function of a convex one is concave, and so is the sum.
//
// What is left out is small: more photons in a slot, and afterpulses of detectors
// that are blind, which are no sum of powers. So the slopes are taken as uncertain
// by clicksDoubt n/r (pulsedDoubt with pulses) and blindDoubt p (1−L)/r, with n
// clicks in a slot, afterpulses p, live share L and secret fraction r. In the whole
// model the tests then find no setting above the tangent that makes more than the
// one where it touches, and a range is passed over only while that is not enough.
// They find the same of a block whose division between the bases stays, as it does
// with even shares; the proof does not speak of what its size costs.
type tangent struct {
	at    keyrate.OperatingPoint
	bases int // 1 for a block, whose check basis makes no key
	key   [2]basisKey
	doubt float64 // of the slopes
}

// basisKey is the usable key of a basis, and its logarithm's slopes with those of
// the pair rate, the window and the basis's own share.
type basisKey struct{ bps, pump, window, share float64 }

// Doubts are a few times what random links of all kinds need.
const (
	slopeStep     = 1e-5 // relative
	slopeSlack    = 1e-3 // what that step leaves open
	clicksDoubt   = 2.0
	pulsedDoubt   = 0.5
	blindDoubt    = 0.05
	mostDoubt     = 0.05 // of a tangent that is of use
	leastFraction = 0.02 // of a secret fraction to set out from
	mostWider     = 12.0 // window: beyond, a slot holds more clicks than were looked at
	mostStronger  = 12.0 // pump: the same
)

// tangentAt returns the tangent at a setting, with slopes for what a range leaves
// free. It is not ok where there is too little key to be sure of it.
func (x *bandBound) tangentAt(p keyrate.OperatingPoint, free *settingRange) (t tangent, ok bool) {
	t = tangent{at: p, bases: 2}
	if x.link.BlockBits > 0 {
		t.bases = 1
	}
	bps, fraction, leftOut := x.keyOfBases(p)
	t.doubt = leftOut / fraction
	if !(fraction > leastFraction && t.doubt < mostDoubt && bps[t.bases-1] > 0 && p.WindowS*mostWider > free.hi.WindowS) {
		return t, false
	}
	var pump, window, share [2]float64
	if free.lo.PairRateHz < free.hi.PairRateHz {
		pump = x.slopes(&bps, keyrate.OperatingPoint{PairRateHz: p.PairRateHz * (1 + slopeStep), WindowS: p.WindowS, KeyShare: p.KeyShare})
	}
	if free.lo.WindowS < free.hi.WindowS {
		window = x.slopes(&bps, keyrate.OperatingPoint{PairRateHz: p.PairRateHz, WindowS: p.WindowS * (1 + slopeStep), KeyShare: p.KeyShare})
	}
	if free.lo.KeyShare < free.hi.KeyShare {
		share = x.slopes(&bps, keyrate.OperatingPoint{PairRateHz: p.PairRateHz, WindowS: p.WindowS, KeyShare: p.KeyShare * (1 + slopeStep)})
		share[keyrate.CheckBasis] *= (p.KeyShare - 1) / p.KeyShare
	}
	for b := range t.bases {
		t.key[b] = basisKey{bps[b], pump[b], window[b], share[b]}
	}
	return t, true
}

// slopes returns how the logarithms of both bases' key grow from a setting to
// the next, slopeStep away.
func (x *bandBound) slopes(bps *[2]float64, next keyrate.OperatingPoint) (slope [2]float64) {
	there, _, _ := x.keyOfBases(next)
	for b := range slope {
		slope[b] = math.Log(there[b]/bps[b]) / slopeStep
	}
	return slope
}

// keyOfBases returns the usable key of each basis in bit/s, negative where it is
// none; the lesser secret fraction; and how much of the model a tangent may leave
// out. Of a block it takes whole bits for granted.
func (x *bandBound) keyOfBases(p keyrate.OperatingPoint) (bps [2]float64, fraction, leftOut float64) {
	l := x.link
	l.BlockBits = 0 // or the block would be worked out twice
	r := l.Key(p)
	leftOut = max(leftOutOf(&l, &r, keyrate.Alice), leftOutOf(&l, &r, keyrate.Bob))
	if x.link.BlockBits > 0 {
		block := x.link.Split(&r)
		block.KeyBits = x.link.BlockBits * r.SiftedHz[keyrate.KeyBasis] / r.SiftedBps() // not rounded: that would be stairs
		block.CheckBits = x.link.BlockBits - block.KeyBits
		fraction = (block.SecretBits() + roundedBits - l.AuthenticationBits) / x.link.BlockBits
		bps[keyrate.KeyBasis] = l.DutyCycle * r.SiftedBps() * fraction
		return bps, fraction, leftOut
	}
	hk, hc := keyrate.BinaryEntropy(r.QBER[keyrate.KeyBasis]), keyrate.BinaryEntropy(r.QBER[keyrate.CheckBasis])
	key, check := 1-l.ErrorCorrectionF*hk-hc, 1-l.ErrorCorrectionF*hc-hk
	bps[keyrate.KeyBasis] = l.DutyCycle * r.SiftedHz[keyrate.KeyBasis] * key
	bps[keyrate.CheckBasis] = l.DutyCycle * r.SiftedHz[keyrate.CheckBasis] * check
	return bps, min(key, check), leftOut
}

// leftOutOf returns the doubt of slopes, for a secret fraction of one, by the
// clicks of an arm in a slot and the afterpulses that its blind time swallows.
func leftOutOf(l *keyrate.Link, r *keyrate.Rate, arm int) float64 {
	a, doubt := &r.Arms[arm], clicksDoubt
	if l.PulseRateHz > 0 {
		doubt = pulsedDoubt
	}
	return doubt*a.SinglesHz/a.Live/r.SlotsHz + blindDoubt*l.Arms[arm].Detector.Afterpulsing*(1-a.Live)
}

// sum returns the usable rate where the tangent touches.
func (t *tangent) sum() float64 { return t.key[0].bps + t.key[1].bps }

// most returns what a basis makes at most in a range of settings; +Inf where the
// tangent does not tell.
func (t *tangent) most(basis int, s *settingRange) float64 {
	k := &t.key[basis]
	switch {
	case basis >= t.bases:
		return 0
	case s.hi.PairRateHz > t.at.PairRateHz*mostStronger:
		return math.Inf(1)
	}
	rise := t.rise(k.pump, s.lo.PairRateHz, t.at.PairRateHz, s.hi.PairRateHz) +
		t.rise(k.window, s.lo.WindowS, t.at.WindowS, s.hi.WindowS)
	if basis == keyrate.KeyBasis {
		rise += t.rise(k.share, s.lo.KeyShare, t.at.KeyShare, s.hi.KeyShare)
	} else {
		rise += t.rise(k.share, 1-s.hi.KeyShare, 1-t.at.KeyShare, 1-s.lo.KeyShare)
	}
	return k.bps * math.Exp(rise) * (1 + slopeSlack)
}

// rise returns how far the logarithm may rise on the way to either end.
func (t *tangent) rise(slope, lo, at, hi float64) float64 {
	if lo == at && at == hi {
		return 0
	}
	below, above := math.Log(lo/at), math.Log(hi/at)
	return max(slope*below+t.doubt*math.Abs(below), slope*above+t.doubt*math.Abs(above))
}

// How far the next tangent lies from a tangent that still rises: by its slope
// times about the inverse of a usual curvature.
const (
	pumpPace   = 0.9
	windowPace = 0.6
	sharePace  = 0.8
	mostPace   = 0.7
)

// onward returns a setting near the peak, within a range.
func (t *tangent) onward(s *settingRange) keyrate.OperatingPoint {
	var mean basisKey
	for b := range t.bases {
		k := &t.key[b]
		part := k.bps / t.sum()
		mean.pump += part * k.pump
		mean.window += part * k.window
		if b == keyrate.KeyBasis { // in terms of the check basis's share
			part *= (t.at.KeyShare - 1) / t.at.KeyShare
		}
		mean.share += part * k.share
	}
	return keyrate.OperatingPoint{
		PairRateHz: pace(t.at.PairRateHz, pumpPace*mean.pump, s.lo.PairRateHz, s.hi.PairRateHz),
		WindowS:    pace(t.at.WindowS, windowPace*mean.window, s.lo.WindowS, s.hi.WindowS),
		KeyShare:   1 - pace(1-t.at.KeyShare, sharePace*mean.share, 1-s.hi.KeyShare, 1-s.lo.KeyShare),
	}
}

// pace goes from a setting by a logarithm, kept to a range.
func pace(at, by, lo, hi float64) float64 {
	return min(hi, max(lo, at*math.Exp(min(mostPace, max(-mostPace, by)))))
}
