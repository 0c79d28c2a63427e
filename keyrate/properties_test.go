package keyrate

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// sane reports what a rate can never be.
func sane(t interface{ Errorf(string, ...any) }, r Rate) {
	for name, x := range map[string]float64{
		"slots": r.SlotsHz, "pairs per slot": r.PairsPerSlot, "window share": r.WindowShare,
		"Alice's counts": r.Arms[Alice].CountsHz, "Bob's counts": r.Arms[Bob].CountsHz,
		"Alice's live share": r.Arms[Alice].Live, "Bob's live share": r.Arms[Bob].Live,
		"Alice's singles": r.Arms[Alice].SinglesHz, "Bob's singles": r.Arms[Bob].SinglesHz,
		"sifted key": r.SiftedHz[KeyBasis], "sifted check": r.SiftedHz[CheckBasis],
		"QBER key": r.QBER[KeyBasis], "QBER check": r.QBER[CheckBasis],
		"secret": r.SecretBps, "finite": r.FiniteBps, "usable": r.UsableBps,
	} {
		if !(x >= 0) || math.IsInf(x, 1) {
			t.Errorf("%s is %v", name, x)
		}
	}
	for b, e := range r.QBER {
		if e > 0.5 {
			t.Errorf("QBER of basis %d is %v", b, e)
		}
	}
	for i, arm := range r.Arms {
		if arm.Live > 1 {
			t.Errorf("live share of arm %d is %v", i, arm.Live)
		}
	}
	const rounding = 1 + 1e-12
	if r.WindowShare > 1 || r.SecretBps > r.SiftedBps()*rounding || r.FiniteBps > r.SiftedHz[KeyBasis]*rounding {
		t.Errorf("window share above 1, or more secret than sifted bits: %+v", r)
	}
}

func TestRatesAreSane(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(12)
		if u.often() {
			l = u.blocks(l)
		}
		r := l.Key(p)
		sane(t, r)
		coincidences, accidentals := l.Coincidences(p)
		const rounding = 1 + 1e-12
		if !(accidentals >= 0 && accidentals <= coincidences*rounding && r.SiftedBps() <= coincidences*rounding) {
			t.Errorf("%v sifted and %v accidental of %v coincidences\n%+v\n%+v", r.SiftedBps(), accidentals, coincidences, l, p)
		}
	})
}

// ErrorParts adds one cause after the other.
func TestErrorPartsAddUp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(6)
		parts := l.ErrorParts(p)
		list := []float64{parts.State, parts.Alignment, parts.MultiPair, parts.DetectorNoise, parts.OutsideLight}
		var sum float64
		for _, part := range list {
			if !(part >= -1e-12) {
				t.Errorf("%+v has a negative part\n%+v\n%+v", parts, l, p)
			}
			sum += part
		}
		if qber := l.Key(p).QBER[KeyBasis]; math.Abs(sum-qber) > 1e-12 {
			t.Errorf("%+v add up to %v, QBER %v", parts, sum, qber)
		}
	})
}

// Each part is named after what it vanishes without.
func TestErrorPartsVanishWithTheirCause(t *testing.T) {
	l, p := campus()
	for i := range l.Arms {
		l.Arms[i].BackgroundHz, l.Arms[i].UnpairedHz = 500, 1e5
	}
	full := l.ErrorParts(p)
	clean := func(spoil func(*Arm)) ErrorParts {
		l := l
		for i := range l.Arms {
			spoil(&l.Arms[i])
		}
		return l.ErrorParts(p)
	}
	straight := clean(func(a *Arm) { a.Misalignment, a.PMDError = 0, 0 })
	quiet := clean(func(a *Arm) { a.Detector.DarkCountsHz, a.Detector.Afterpulsing = 0, 0 })
	dark := clean(func(a *Arm) { a.BackgroundHz, a.UnpairedHz = 0, 0 })
	if straight.Alignment != 0 || quiet.DetectorNoise != 0 || dark.OutsideLight != 0 {
		t.Errorf("without their causes: alignment %v, detector noise %v, outside light %v", straight.Alignment, quiet.DetectorNoise, dark.OutsideLight)
	}
	if full.State != l.StateError[KeyBasis] || full.Alignment <= 0 || full.MultiPair <= 0 || full.DetectorNoise <= 0 || full.OutsideLight <= 0 {
		t.Errorf("%+v: every part should show", full)
	}
	p.PairRateHz = 1
	if lone := clean(func(a *Arm) { a.Detector.DarkCountsHz, a.BackgroundHz, a.Detector.Afterpulsing = 0, 0, 0 }).MultiPair; lone > 1e-6 {
		t.Errorf("a pair a second: %v of several pairs", lone)
	}
}

// At equal shares the bases differ in their state error alone, and neither arm
// is special: exchanging bases or arms exchanges the results.
func TestEqualSharesAreSymmetric(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(4)
		p.KeyShare = 0.5
		r := l.Key(p)
		const rounding = 1e-12 // a product in another order
		swapped := l
		swapped.StateError[KeyBasis], swapped.StateError[CheckBasis] = l.StateError[CheckBasis], l.StateError[KeyBasis]
		s := swapped.Key(p)
		if !near(r.QBER[KeyBasis], s.QBER[CheckBasis], rounding) || !near(r.SiftedHz[KeyBasis], s.SiftedHz[CheckBasis], rounding) ||
			math.Abs(r.SecretBps-s.SecretBps) > rounding*r.SiftedBps() {
			t.Errorf("bases exchanged: %+v and %+v", r, s)
		}
		swapped = l
		swapped.Arms[Alice], swapped.Arms[Bob] = l.Arms[Bob], l.Arms[Alice]
		s = swapped.Key(p)
		if !near(r.QBER[KeyBasis], s.QBER[KeyBasis], rounding) || !near(r.SiftedHz[CheckBasis], s.SiftedHz[CheckBasis], rounding) ||
			r.Arms[Alice] != s.Arms[Bob] || math.Abs(r.SecretBps-s.SecretBps) > rounding*r.SiftedBps() {
			t.Errorf("arms exchanged: %+v and %+v", r, s)
		}
	})
}

// A planner may not promise more than a line can carry.
//
// Derived, for Poissonian pairs: the key of a basis is at most
// g = Q (1 - h(QBER)), which is convex and of first degree in the right and
// wrong coincidences, so g of all slots is at most the sum of g over any
// division of them. Slots in which no pair was detected at both sides hold
// unrelated clicks: QBER 1/2 and g = 0. The others have g of 1 at most and the
// probability 1 - exp(-μ η_A η_B w).
//
// Published: the repeaterless bound -log₂(1-t) of Pirandola et al., Nat.
// Commun. 8, 15043 (2017), per use of one mode of a line of transmittance t. A
// slot has two polarisations of many modes and the source stands in the middle,
// for both of which that is no theorem. It holds with one mode all the same:
// by the above the key is at most μ t, and -log₂(1-t) is at least t/ln 2, which
// is more while μ < 1.44; with more pairs than that no slot has a key.
func TestNoKeyAboveTheBoundsOfItsSlots(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapidly(t)
		l, p := u.link(u.between(0, 6))
		if u.often() { // little else than loss
			l = calm(l)
			for i := range l.Arms {
				l.Arms[i].BackgroundHz, l.Arms[i].UnpairedHz, l.Arms[i].Detector.DarkCountsHz = 0, 0, 0
			}
		}
		r := l.Key(p)
		v := l.view(p)
		v.atWindow(p.WindowS)
		var bound float64
		for b := range 2 {
			s := v.slot(b, b, 0)
			bound -= v.kept(b, b) * math.Expm1(-s.Pairs*s.Efficiency[Alice]*s.Efficiency[Bob]*s.Share)
		}
		const rounding = 1 + 1e-12
		if math.IsInf(l.Modes, 1) && r.SecretBps > bound*rounding {
			t.Errorf("%v bit/s of %v slots with a pair at both sides\n%+v\n%+v", r.SecretBps, bound, l, p)
		}
		line := -r.SlotsHz * math.Log1p(-l.Arms[Alice].Transmittance*l.Arms[Bob].Transmittance) / math.Ln2
		if r.SecretBps > line || r.FiniteBps > line {
			t.Errorf("%v bit/s above the repeaterless bound of %v\n%+v\n%+v", r.SecretBps, line, l, p)
		}
	})
}
