package sources

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// run fits the parameters, from where the linear fit puts them.
func (m *scanModel) run() (fitted, error) {
	start, err := m.begin(m.linear())
	if err != nil {
		return fitted{}, err
	}
	f := m.fit.run(start)
	if slices.Contains(f.told, false) || math.IsNaN(f.deviance) {
		return f, fmt.Errorf("the power scan does not tell the parameters of order %d apart: measure over a wider range of powers, or give the linear noise of both arms", m.options.Order)
	}
	return f, nil
}

// begin returns the parameters that the linear fit leads to:
//
//	η_A = c/(w a_B)     η_B = c/(w a_A)     ξ = a_A a_B w/c     r = b/η
//
// With order 1 and linear noise given, a is η (ξ + r), and pairs and
// efficiencies follow as from counts at one power (see Counted.PairRateHz).
func (m *scanModel) begin(linear []float64) ([]float64, error) {
	both := linear[linearBoth] / m.share
	if !(both > 0) {
		return nil, errors.New("the power scan has no coincidences above the accidentals, so it says nothing of pairs; check the window and the delay between the arms, or count for longer")
	}
	theta := make([]float64, scanParameters)
	for arm := range 2 {
		theta[scanEtaA+arm] = startEfficiency(both / linear[linearPumped+1-arm])
		theta[scanDarkA+arm] = linear[linearConstant+arm]
	}
	theta[scanPairs] = both / (theta[scanEtaA] * theta[scanEtaB])
	for arm := range 2 {
		theta[scanRamanA+arm] = linear[linearPower+arm] / theta[scanEtaA+arm]
	}
	if a, b := m.fit.lower[scanRamanA], m.fit.lower[scanRamanB]; m.options.Order == 1 && a+b > 0 {
		return theta, m.besideNoise(theta, a, b)
	}
	return theta, nil
}

// besideNoise turns the pairs and efficiencies that there would be without linear
// noise into those with r_A = a and r_B = b.
func (m *scanModel) besideNoise(theta []float64, a, b float64) error {
	bare := theta[scanPairs]
	slopes := Counted{
		SinglesHz:      [2]float64{theta[scanEtaA] * bare, theta[scanEtaB] * bare},
		UnpairedHz:     [2]float64{a, b},
		CoincidencesHz: theta[scanEtaA] * theta[scanEtaB] * m.share * bare,
		WindowShare:    m.share,
	}
	xi, err := slopes.PairRateHz()
	if err != nil {
		return fmt.Errorf("no pair rate fits the power scan with a linear noise of %.4g and %.4g photons per second and mW (Alice, Bob): "+
			"singles and coincidences allow up to %.4g in one arm alone; give less linear noise, or check the coincidences", a, b, bare)
	}
	theta[scanPairs] = xi
	theta[scanEtaA] *= (xi + b) / xi
	theta[scanEtaB] *= (xi + a) / xi
	return nil
}

// startEfficiency returns coincidences over singles, or a value below 1 where
// the counts do not allow an efficiency.
func startEfficiency(ratio float64) float64 {
	if ratio > 0 && ratio < 1 {
		return ratio
	}
	return 0.9
}
