package sources

import (
	"fmt"
	"math"
)

// PowerScan is what was counted at the source without analysers, one detector
// an arm, at several powers of the pump; index 0 is Alice's arm, 1 is Bob's.
type PowerScan struct {
	Points         []ScanPoint // in file order; a power may come several times
	HasAccidentals bool        // accidentals were counted
	HasSeconds     bool        // the counting time is given
	HasWindow      bool        // the coincidence window is given
}

// ScanPoint is one point of a power scan: rates as they were registered, dead
// time corrected, nothing subtracted. Without the figure a Has... field of the
// scan speaks of, that figure does not count.
type ScanPoint struct {
	PowerMW        float64    // 0 or more
	SinglesHz      [2]float64 // 0 or more
	CoincidencesHz float64    // accidentals included; 0 or more
	AccidentalsHz  float64    // counted for as long in a window of the same width; 0 or more
	Seconds        float64    // above 0
	WindowPs       float64    // full width, above 0
}

// ScanOptions is what a power scan does not tell about itself.
type ScanOptions struct {
	// Order is the power of the pump with which pairs grow: 1 for
	// down-conversion, 2 for four-wave mixing.
	Order int

	// WindowShare is the share of the pairs inside the coincidence window,
	// above 0 to 1; 0 if it is not known, which counts as 1.
	WindowShare float64

	// LinearNoisePerMW is the light without a partner that grows with the power,
	// such as Raman light: photons per second and mW inside the source, before
	// any loss, in Alice's arm and in Bob's; 0 or more, nil if not known.
	LinearNoisePerMW [2]*float64
}

const (
	psPerSecond = 1e12
	scanMost    = 1e15 // greatest number that a power scan may hold
)

// accidentalsHz returns the accidentals of a point: those counted, else
// S_A S_B τ, else 0. The product is that of a continuous pump; a pulsed one
// makes more, which have to be counted.
func (s PowerScan) accidentalsHz(p ScanPoint) float64 {
	switch {
	case s.HasAccidentals:
		return p.AccidentalsHz
	case s.HasWindow:
		return p.SinglesHz[0] * p.SinglesHz[1] * p.WindowPs / psPerSecond
	}
	return 0
}

// Range returns the least and the greatest power of a scan, in mW.
func (s PowerScan) Range() (leastMW, mostMW float64) {
	leastMW = math.Inf(1)
	for _, p := range s.Points {
		leastMW, mostMW = min(leastMW, p.PowerMW), max(mostMW, p.PowerMW)
	}
	return leastMW, mostMW
}

// seconds returns the counting time of a point, 1 if it is not given.
func (s PowerScan) seconds(p ScanPoint) float64 {
	if s.HasSeconds {
		return p.Seconds
	}
	return 1
}

// check returns an error for the first figure that cannot be used.
func (s PowerScan) check() error {
	for i, p := range s.Points {
		for _, x := range []struct {
			name  string
			value float64
			used  bool
			above bool // above 0
		}{
			{"power", p.PowerMW, true, false},
			{"rate of Alice's singles", p.SinglesHz[0], true, false},
			{"rate of Bob's singles", p.SinglesHz[1], true, false},
			{"rate of coincidences", p.CoincidencesHz, true, false},
			{"rate of accidentals", p.AccidentalsHz, s.HasAccidentals, false},
			{"counting time", p.Seconds, s.HasSeconds, true},
			{"window", p.WindowPs, s.HasWindow, true},
		} {
			bad := !(x.value >= 0 && x.value <= scanMost) || x.above && x.value == 0
			if x.used && bad {
				return fmt.Errorf("point %d of the power scan: the %s is %g, which no measurement gives; check the table", i+1, x.name, x.value)
			}
		}
	}
	return nil
}

// check returns an error for the first option that cannot be used.
func (o ScanOptions) check() error {
	if o.Order != 1 && o.Order != 2 {
		return fmt.Errorf("the order is %d; it is 1 for down-conversion and 2 for four-wave mixing", o.Order)
	}
	if w := o.WindowShare; !(w >= 0 && w <= 1) {
		return fmt.Errorf("the window holds a share of %.4g of the pairs; it must be above 0 and at most 1", w)
	}
	for arm, r := range o.LinearNoisePerMW {
		if r != nil && !(*r >= 0 && *r <= scanMost) {
			return fmt.Errorf("the linear noise in %s's arm is %.4g photons per second and mW; it must be 0 or more", armNames[arm], *r)
		}
	}
	return nil
}

// windowShare returns the share of the pairs inside the window, 1 if it is not
// known.
func (o ScanOptions) windowShare() float64 {
	if o.WindowShare == 0 {
		return 1
	}
	return o.WindowShare
}

// unknownNoise tells whether the linear noise of an arm is to be found.
func (o ScanOptions) unknownNoise() bool {
	return o.LinearNoisePerMW[0] == nil || o.LinearNoisePerMW[1] == nil
}

// powersNeeded returns how many different powers the parameters need. Each
// arm's singles have a constant and a linear part; pairs of order 2 have a
// curvature of their own, which the coincidences tell only if the linear part
// is known.
func (o ScanOptions) powersNeeded() int {
	if o.Order == 2 && o.unknownNoise() {
		return 3
	}
	return 2
}

// checkFor returns an error when the scan has too few powers.
func (o ScanOptions) checkFor(s PowerScan) error {
	powers := map[float64]bool{}
	for _, p := range s.Points {
		powers[p.PowerMW] = true
	}
	have, need := len(powers), o.powersNeeded()
	if have >= need {
		return nil
	}
	hint := fmt.Sprintf("measure at %d more", need-have)
	if have == 2 {
		hint += ", or give the linear noise of both arms"
	}
	return fmt.Errorf("the power scan has %s, and at order %d the fit needs at least %d: %s", differentPowers(have), o.Order, need, hint)
}

// differentPowers says how many different powers there are.
func differentPowers(n int) string {
	switch n {
	case 0:
		return "no point"
	case 1:
		return "one power only"
	}
	return fmt.Sprintf("%d different powers", n)
}
