package sources

import (
	"fmt"
	"math"
)

// Counted is what was counted at the source without analysers, one detector an
// arm; index 0 is Alice's arm, 1 is Bob's.
type Counted struct {
	SinglesHz      [2]float64 // corrected for dead time, dark counts and background subtracted; above 0
	UnpairedHz     [2]float64 // light without a partner inside the source, before any loss; 0 or more
	CoincidencesHz float64    // corrected for dead time, accidentals subtracted; above 0
	WindowShare    float64    // share of the pairs inside the coincidence window, above 0 to 1
}

var armNames = [2]string{"Alice", "Bob"}

// PairRateHz returns the pairs made per second inside the source, before any
// loss: the larger solution B of
//
//	C = S_A S_B w B / ((B + U_A)(B + U_B))
//
// where S are the singles, C the coincidences, w the window share and U the
// unpaired light; without unpaired light B = S_A S_B w/C ([1]). The larger
// solution is the one in which pairs outnumber the unpaired light, B ≥ √(U_A U_B).
// It returns an error when a count is not usable or no pair rate fits.
//
// [1] Klyshko (1980). Sov. J. Quantum Electron. 10, 1112.
func (c Counted) PairRateHz() (float64, error) {
	if err := c.check(); err != nil {
		return 0, err
	}
	product := c.SinglesHz[0] * c.SinglesHz[1] * c.WindowShare / c.CoincidencesHz
	b := product - c.UnpairedHz[0] - c.UnpairedHz[1]
	g := 2 * math.Sqrt(c.UnpairedHz[0]*c.UnpairedHz[1])
	if b < g || b <= 0 {
		return 0, fmt.Errorf("no pair rate fits the counts with %.4g and %.4g unpaired photons per second (Alice, Bob): "+
			"singles, coincidences and window share allow up to %.4g per second in one arm alone; give less unpaired light or check the counts",
			c.UnpairedHz[0], c.UnpairedHz[1], product)
	}
	return (b + math.Sqrt((b-g)*(b+g))) / 2, nil
}

// ArmEfficiencies returns the chance that a photon of a pair is counted in its
// arm, above 0 to 1: coupling, filters and detector together ([1]),
//
//	η_A = C/(S_B w) × (B + U_B)/B
//
// and alike for Bob. It returns an error when there is no pair rate or an
// efficiency comes out above 1.
//
// [1] Klyshko (1980). Sov. J. Quantum Electron. 10, 1112.
func (c Counted) ArmEfficiencies() (alice, bob float64, err error) {
	b, err := c.PairRateHz()
	if err != nil {
		return 0, 0, err
	}
	var eta [2]float64
	for arm := range eta {
		other := 1 - arm
		eta[arm] = c.CoincidencesHz / (c.SinglesHz[other] * c.WindowShare) * (1 + c.UnpairedHz[other]/b)
		if eta[arm] > 1 {
			return 0, 0, fmt.Errorf("the efficiency of %s's arm comes to %.4g, above 1 by %.2g: the coincidences are too many for %s's singles; "+
				"check the singles, the noise taken from them and the window",
				armNames[arm], eta[arm], eta[arm]-1, armNames[other])
		}
	}
	return eta[0], eta[1], nil
}

// check returns an error for the first count that cannot be used.
func (c Counted) check() error {
	for arm, name := range armNames {
		if s := c.SinglesHz[arm]; !(s > 0) || math.IsInf(s, 1) {
			return fmt.Errorf("%s's singles come to %.4g per second once dead time and noise are taken out; they must be above 0: check the singles and the background", name, s)
		}
		if u := c.UnpairedHz[arm]; !(u >= 0) || math.IsInf(u, 1) {
			return fmt.Errorf("%s's unpaired light is %.4g per second; it must be 0 or more", name, u)
		}
	}
	if x := c.CoincidencesHz; !(x > 0) || math.IsInf(x, 1) {
		return fmt.Errorf("the coincidences come to %.4g per second once accidentals are taken out; they must be above 0: check the coincidences and the window", x)
	}
	if w := c.WindowShare; !(w > 0 && w <= 1) {
		return fmt.Errorf("the window holds a share of %.4g of the pairs; it must be above 0 and at most 1", w)
	}
	return nil
}
