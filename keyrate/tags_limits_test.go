package keyrate

import (
	"math"
	"testing"
)

// spotless takes all out of a link but its losses and an error of 2 %.
func spotless(l Link) Link {
	for i := range l.Arms {
		l.Arms[i].Misalignment, l.Arms[i].PMDError = 0, 0
	}
	l.StateError = [2]float64{0.02, 0.02}
	return l
}

// The model counts in slots of one window, each with one coincidence at most; a
// laboratory pairs all tags within the window (see counted, which time tags
// confirm). The two part where slots are full: 5.8 and 6.4 % QBER with a tenth
// of a pair in each at an efficiency of 0.3, both figures computed. Where an arm
// counts 0.001 in a window and basis, they agree to 1 % in the sifted rate and
// to 0.05 % QBER.
func TestSlotsPartFromTagsWhereTheyAreFull(t *testing.T) {
	arm := Arm{Transmittance: 0.3, Passive: true}
	arm.Detector.Efficiency = 1
	l := spotless(arms(arm, arm))
	p := OperatingPoint{PairRateHz: 1e8, WindowS: 1e-9, KeyShare: 0.5}
	slots, tags := modelled(&l, p), counted(&l, p)
	if math.Abs(slots.qber[KeyBasis]-0.058) > 5e-4 || math.Abs(tags.qber[KeyBasis]-0.064) > 5e-4 {
		t.Errorf("QBER %v in slots, %v in tags, want 0.058 and 0.064", slots.qber[KeyBasis], tags.qber[KeyBasis])
	}
	p.PairRateHz = 0.001 / (0.3 / 2 * p.WindowS)
	slots, tags = modelled(&l, p), counted(&l, p)
	for b := range slots.qber {
		if math.Abs(slots.qber[b]-tags.qber[b]) > 5e-4 || !near(slots.sifted[b], tags.sifted[b], 0.01) {
			t.Errorf("QBER %v of %v /s in slots, %v of %v in tags", slots.qber[b], slots.sifted[b], tags.qber[b], tags.sifted[b])
		}
	}
}

// Where both arms are heralded well and often blind, a pair that both have
// registered makes both blind at once, so that they are live together more
// often than the product of their live shares, which the model takes:
//
//	L_A L_B/(1 - c min(t_A, t_B) √(L_A L_B)),
//
// c being the rate of that pair of detectors' coincidences before dead time;
// this holds to 1 %. The model is on the safe side: equal bits gain.
func TestDeadTimesThatCoincide(t *testing.T) {
	for i, row := range []struct {
		eta, pairRateHz          float64
		aliceDeadNs, bobDeadNs   float64
		passive                  bool
		expectedGainAtLeast      float64
		equalBitsOfADetectorPair float64 // share of the detected pairs
	}{
		// Both active, either in the same basis or not: 1/2 · 0.98/2 + 1/2 · 1/4.
		{0.6, 4e6, 200, 200, false, 1.08, 0.5*0.49 + 0.125},
		{0.6, 4e6, 100, 400, false, 1.03, 0.5*0.49 + 0.125},
		// Both passive, in the same basis: 1/4 · 0.98/2.
		{0.9, 2e6, 300, 300, true, 1.03, 0.25 * 0.49},
	} {
		if testing.Short() && i > 0 {
			break
		}
		arm := Arm{Transmittance: row.eta, Passive: row.passive}
		arm.Detector.Efficiency = 1
		l := spotless(arms(arm, arm))
		l.Arms[Alice].Detector.DeadTimeNs, l.Arms[Bob].Detector.DeadTimeNs = row.aliceDeadNs, row.bobDeadNs
		p := OperatingPoint{PairRateHz: row.pairRateHz, WindowS: 100e-12, KeyShare: 0.5}
		const seconds = 0.3
		c := pairUp(newLab(&l, p, seconds, uint64(100+i)).run(), p.WindowS, 0)
		right := c.all[0][0] - c.wrong[0][0] + c.all[1][1] - c.wrong[1][1]

		r := l.Key(p)
		modelled := seconds * (r.SiftedHz[KeyBasis]*(1-r.QBER[KeyBasis]) + r.SiftedHz[CheckBasis]*(1-r.QBER[CheckBasis]))
		together := row.pairRateHz * row.eta * row.eta * row.equalBitsOfADetectorPair
		live := math.Sqrt(r.Arms[Alice].Live * r.Arms[Bob].Live)
		gain := 1 / (1 - together*min(row.aliceDeadNs, row.bobDeadNs)*1e-9*live)
		sigma := math.Sqrt(modelled)
		if gain < row.expectedGainAtLeast || right < modelled*row.expectedGainAtLeast-3*sigma {
			t.Errorf("%+v: %v right bits, the model %.0f: the gain should show", row, right, modelled)
		}
		if math.Abs(right-modelled*gain) > 0.01*modelled+3*sigma {
			t.Errorf("%+v: %v right bits, want %.0f ± %.0f", row, right, modelled*gain, sigma)
		}
	}
}
