package keyrate

import (
	"math"
	"testing"

	"pairspan/link"
)

// clamp brings any number into lo to hi; NaN becomes lo, and so does what is
// next to nothing: products of such numbers run out of digits.
func clamp(x, lo, hi float64) float64 {
	const nothing = 1e-20 // 200 dB
	if math.IsNaN(x) || x < nothing {
		return lo
	}
	return max(lo, min(hi, x))
}

const almostOne = 1 - 1e-9

// FuzzKey asks links within the documented domain, to its corners, whatever
// the numbers: no panic, all rates finite and not negative, QBER within 0 to
// 1/2. One set of figures serves each arm; losses and noise differ.
func FuzzKey(f *testing.F) {
	add := func( // all floats, whatever the constants look like
		pulseRate, modes, e1, e2, spread, ec, block, epsilon, rate, window, share,
		ta, tb, eff, dark, dead, after, mis, pmd, background, unpaired float64, passiveA, passiveB bool,
	) {
		f.Add(pulseRate, modes, e1, e2, spread, ec, block, epsilon, rate, window, share,
			ta, tb, eff, dark, dead, after, mis, pmd, background, unpaired, passiveA, passiveB)
	}
	inf := math.Inf(1)
	add(0, inf, 0.02, 0.03, 260, 1.16, 1e6, 1e-10, 2e6, 5e-10, 0.5, 0.3, 0.1, 0.2, 1200, 1e4, 0.02, 0.005, 1e-4, 10, 1e4, true, false)
	add(1e8, 1, 0.02, 0.03, 100, 1.16, 0, 1e-10, 2e6, 1e-9, 0.9, 0.3, 0.1, 0.2, 1200, 8, 0.02, 0.005, 1e-4, 10, 1e4, false, false)
	add(1e8, 1e9, 0, 0, 0, 1, 1e13, 1e-300, 1e12, 1e-9, 0.99, 1, 1, 1, 0, 0, 0, 0, 0, 0, 0, true, true)
	add(0, inf, 0, 0, 0, 1, 1e3, 0.9, 0, 1e-15, 0.5, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, true, true)                         // nothing at all
	add(0, inf, 0.5, 0.5, 1e9, 5, 1e3, 1e-15, 1e12, 1, 0.5, 1, 1, 1, 1e12, 1e12, 1, 0.5, 0.4, 1e12, 1e12, false, true) // too much of all
	add(1e12, 1.5, 0, 0.5, 1e-300, 1, 1e13, 1, 1e12, 1, 0.99, 1e-300, 1e-20, 1, 1e-300, 1e-300, 1e-300, 0, 0, 0, 0, true, false)
	add(0, 1, 0, 0, 100, 1, 1e5, 1e-10, 1e12, 1e-300, 0.5, 1e-20, 1, 1, 0, 1e3, 0.9, 0, 0, 0, 0, true, true)

	f.Fuzz(func(t *testing.T, pulseRate, modes, e1, e2, spread, ec, block, epsilon, rate, window, share,
		ta, tb, eff, dark, dead, after, mis, pmd, background, unpaired float64, passiveA, passiveB bool,
	) {
		const muchHz = 1e12
		l := Link{
			PulseRateHz: clamp(pulseRate, 0, muchHz), Modes: clamp(modes, 1, inf),
			StateError:   [2]float64{clamp(e1, 0, 0.5), clamp(e2, 0, 0.5)},
			SpreadFWHMPs: clamp(spread, 0, 1e9), ErrorCorrectionF: clamp(ec, 1, 5), DutyCycle: clamp(eff, 0, 1),
			EpsilonTotal: clamp(epsilon, 1e-20, almostOne),
		}
		if l.PulseRateHz > 0 {
			l.PulseRateHz = max(1, l.PulseRateHz)
		}
		if block > 0 {
			l.BlockBits = math.Round(clamp(block, 1e3, 1e13))
		}
		for i, transmittance := range [2]float64{ta, tb} {
			noisier := 1 + 9*float64(i)
			l.Arms[i] = Arm{
				Transmittance: clamp(transmittance, 0, 1), Passive: [2]bool{passiveA, passiveB}[i],
				Detector: link.Detector{
					Efficiency: clamp(eff, 0, 1), DarkCountsHz: clamp(dark*noisier, 0, muchHz),
					DeadTimeNs: clamp(dead*noisier, 0, muchHz), Afterpulsing: clamp(after, 0, almostOne),
				},
				Misalignment: clamp(mis, 0, 0.5), PMDError: clamp(pmd, 0, 1.0/3),
				BackgroundHz: clamp(background, 0, muchHz), UnpairedHz: clamp(unpaired*noisier, 0, muchHz), SpreadFWHMPs: l.SpreadFWHMPs,
			}
		}
		widest := 1.0
		if l.PulseRateHz > 0 {
			widest = 1 / l.PulseRateHz
		}
		p := OperatingPoint{clamp(rate, 0, muchHz), clamp(window, 1e-15, widest), clamp(share, 0.5, 0.99)}
		r := l.Key(p)
		sane(t, r)
		coincidences, accidentals := l.Coincidences(p)
		if !(coincidences >= 0 && accidentals >= 0) || math.IsInf(coincidences, 1) {
			t.Errorf("%v coincidences, %v accidental", coincidences, accidentals)
		}
		parts := l.ErrorParts(p)
		sum := parts.State + parts.Alignment + parts.MultiPair + parts.DetectorNoise + parts.OutsideLight
		if math.Abs(sum-r.QBER[KeyBasis]) > 1e-12 {
			t.Errorf("%+v add up to %v, QBER %v", parts, sum, r.QBER[KeyBasis])
		}
		if t.Failed() {
			t.Logf("%+v at %+v", l, p)
		}
	})
}
