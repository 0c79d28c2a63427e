package sources

import "math"

// Parameters of a power scan, in the order in which the fit holds them.
const (
	scanPairs  = iota // ξ, pairs per second inside the source at 1 mW
	scanEtaA          // efficiency of Alice's arm, detector included
	scanEtaB          // of Bob's
	scanRamanA        // r, photons without a partner per second and mW in Alice's arm, before any loss
	scanRamanB        // in Bob's
	scanDarkA         // n, counts per second of Alice's detector at no power
	scanDarkB         // of Bob's
	scanParameters
)

// scanModel is a power scan ready to be fitted: at each power P, in mW, three
// numbers of counts, Alice's singles, Bob's and coincidences,
//
//	S_A = η_A (ξ Pᵏ + r_A P) + n_A      S_B alike      C − accidentals = η_A η_B w ξ Pᵏ
//
// times the counting time. The accidentals of a point, taken as known in the
// mean, were counted for as long as the coincidences, so that C − accidentals
// has the variance of C + accidentals. Both sides of the third equation are
// therefore raised by twice the accidentals: then value and variance agree, as
// the fit of counts wants it.
type scanModel struct {
	scan    PowerScan
	options ScanOptions
	share   float64   // w
	power   []float64 // P
	pumped  []float64 // Pᵏ
	seconds []float64 // counting time
	chance  []float64 // accidentals, counts
	useless int       // points without power and accidentals at which coincidences were counted all the same
	fit     countFit  // counts in the order of scanAt
}

// scanAt returns where the count of a kind at a point stands among the counts:
// 0 for Alice's singles, 1 for Bob's, 2 for coincidences.
func scanAt(point, kind int) int { return 3*point + kind }

// newScanModel prepares the fit. With order 1 linear noise that is not known is
// held at zero, since pairs take its place.
func newScanModel(s PowerScan, o ScanOptions) *scanModel {
	m := &scanModel{scan: s, options: o, share: o.windowShare()}
	for _, p := range s.Points {
		m.add(p)
	}
	m.fit.lower = make([]float64, scanParameters)
	m.fit.upper = []float64{math.Inf(1), 1, 1, math.Inf(1), math.Inf(1), math.Inf(1), math.Inf(1)}
	for arm, r := range o.LinearNoisePerMW {
		at := scanRamanA + arm
		switch {
		case r != nil:
			m.fit.lower[at], m.fit.upper[at] = *r, *r
		case o.Order == 1:
			m.fit.upper[at] = 0
		}
	}
	m.fit.model = m.expect
	return m
}

// add appends a point. Coincidences without power and accidentals cannot come
// from the model; they are counted as useless and left out.
func (m *scanModel) add(p ScanPoint) {
	t := m.scan.seconds(p)
	chance := t * m.scan.accidentalsHz(p)
	coincidences := t*p.CoincidencesHz + chance
	if p.PowerMW == 0 && chance == 0 && coincidences > 0 {
		m.useless++
		coincidences = 0
	}
	m.power = append(m.power, p.PowerMW)
	m.pumped = append(m.pumped, math.Pow(p.PowerMW, float64(m.options.Order)))
	m.seconds = append(m.seconds, t)
	m.chance = append(m.chance, chance)
	m.fit.counts = append(m.fit.counts, t*p.SinglesHz[0], t*p.SinglesHz[1], coincidences)
}

// expect is the model of the fit.
func (m *scanModel) expect(theta, mean []float64, slopes [][]float64) {
	xi, share := theta[scanPairs], m.share
	both := theta[scanEtaA] * theta[scanEtaB] * share
	for i, t := range m.seconds {
		q := m.pumped[i]
		for arm := range 2 {
			m.expectSingles(theta, mean, slopes, i, arm)
		}
		at := scanAt(i, 2)
		mean[at] = t*both*xi*q + 2*m.chance[i]
		if slopes != nil {
			slopes[scanPairs][at] = t * both * q
			slopes[scanEtaA][at] = t * theta[scanEtaB] * share * xi * q
			slopes[scanEtaB][at] = t * theta[scanEtaA] * share * xi * q
		}
	}
}

// expectSingles does the part of expect that is about one arm's singles.
func (m *scanModel) expectSingles(theta, mean []float64, slopes [][]float64, point, arm int) {
	at, t, p, q := scanAt(point, arm), m.seconds[point], m.power[point], m.pumped[point]
	eta, light := theta[scanEtaA+arm], theta[scanPairs]*q+theta[scanRamanA+arm]*p
	mean[at] = t * (eta*light + theta[scanDarkA+arm])
	if slopes != nil {
		slopes[scanPairs][at] = t * eta * q
		slopes[scanEtaA+arm][at] = t * light
		slopes[scanRamanA+arm][at] = t * eta * p
		slopes[scanDarkA+arm][at] = t
	}
}
