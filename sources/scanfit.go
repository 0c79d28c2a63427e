package sources

import "math"

// ScanFit is what a power scan says of a source. An Estimate that the scan does
// not give is unknown (NaN); one that was given to the fit has no standard
// deviation (0). Index 0 is Alice's arm, 1 is Bob's.
type ScanFit struct {
	Order       int
	WindowShare float64 // share of the pairs inside the window that the fit took

	// PairsHzPerMWk is ξ: pairs per second inside the source, before any loss, at
	// 1 mW; at a power P there are ξ Pᵏ (see PairRateHz), k the order.
	PairsHzPerMWk Estimate

	// Efficiency is the chance, 0 to 1, that a photon of a pair is counted in its
	// arm: coupling, filters and detector together ([1]).
	Efficiency [2]Estimate

	// LinearNoisePerMW is r: photons without a partner per second and mW inside
	// the source, before any loss.
	LinearNoisePerMW [2]Estimate

	// ConstantHz is n: counts per second that do not depend on the power, dark
	// counts and stray light.
	ConstantHz [2]Estimate

	// Slopes are what order 1 gives whether linear noise is known or not; with
	// order 2 they are unknown.
	Slopes ScanSlopes

	Parameters  []ScanParameter // those that the scan tells, in the order of Correlation
	Correlation [][]float64     // of the errors of Parameters, −1 to 1

	Chi2             float64 // Σ of the squared residuals
	DegreesOfFreedom int     // counts less parameters that were free
	Chance           float64 // of a greater Chi2 if the model holds, 0 to 1; NaN without degrees of freedom

	Points []ScanResidual // in file order

	Told    []string // sentences: what the scan tells, and what that rests on
	NotTold []string // sentences: what it does not tell, and what would
	Doubts  []string // sentences: what is amiss or was assumed

	fit fitted
}

// ScanSlopes are the growth of the rates with the power at order 1, in counts
// per second and mW, and the bounds that they set whatever the linear noise:
//
//	ξ ≤ S_A' S_B' w/C' − r_A − r_B     η_A ≥ C'/(S_B' w)     η_B ≥ C'/(S_A' w)
//
// where an r that is not known counts as 0. Without linear noise they are
// equalities.
type ScanSlopes struct {
	SinglesHzPerMW      [2]Estimate // S_A', S_B'
	CoincidencesHzPerMW Estimate    // C', accidentals subtracted
	PairsAtMostHzPerMW  Estimate    // upper bound of ξ
	EfficiencyAtLeast   [2]Estimate // lower bounds of η_A, η_B
}

// ScanParameter is one parameter that the scan tells.
type ScanParameter struct {
	Name, Unit string
	Estimate
	AtBound bool // held back by 0, or by 1 for an efficiency; the standard deviation is that of a parameter free to cross
}

// ScanResidual is one point of the scan beside the fit.
type ScanResidual struct {
	PowerMW         float64
	SinglesHz       [2]float64 // as measured
	SinglesFitHz    [2]float64
	AccidentalsHz   float64 // those subtracted
	TrueHz          float64 // coincidences less accidentals, may be negative
	TrueFitHz       float64
	SinglesResidual [2]float64 // measured less fitted, in standard deviations
	TrueResidual    float64    // likewise
}

// Fit fits the model
//
//	S_A = η_A (ξ Pᵏ + r_A P) + n_A     S_B alike     C − accidentals = η_A η_B w ξ Pᵏ
//
// to all three series together, P the power, by the Poisson likelihood of the
// counts (rate times seconds). Accidentals are those counted, else S_A S_B τ,
// else 0; counted ones are taken to have been counted for as long as the
// coincidences, in one window, and their Poisson error is included. ξ, r and n
// are 0 or more, efficiencies 0 to 1. Standard deviations are those of the
// likelihood's information: they hold counting statistics only, neither drift
// of the pump nor the error of the power.
//
// With k = 2 pairs grow as P² and one-photon noise as P, so all seven
// parameters follow ([2]). With k = 1 both grow as P: ξ and the efficiencies
// follow only if the linear noise of both arms is given, else the slopes and the
// bounds that they set.
//
// It returns an error for figures and options out of range, when there are too
// few powers, when there are no coincidences above the accidentals, and when no
// pair rate goes with the linear noise given.
//
// [1] Klyshko (1980). Sov. J. Quantum Electron. 10, 1112.
// [2] Lin et al. (2007). Phys. Rev. A 75, 023803.
func (s PowerScan) Fit(o ScanOptions) (ScanFit, error) {
	if err := o.check(); err != nil {
		return ScanFit{}, err
	}
	if err := s.check(); err != nil {
		return ScanFit{}, err
	}
	if err := o.checkFor(s); err != nil {
		return ScanFit{}, err
	}
	m := newScanModel(s, o)
	f, err := m.run()
	if err != nil {
		return ScanFit{}, err
	}
	return m.report(f), nil
}

// report writes the result of the fit down.
func (m *scanModel) report(f fitted) ScanFit {
	r := ScanFit{Order: m.options.Order, WindowShare: m.share, fit: f}
	both := [2]Estimate{unknownEstimate, unknownEstimate}
	r.PairsHzPerMWk, r.Efficiency, r.LinearNoisePerMW = unknownEstimate, both, both
	r.Slopes = ScanSlopes{both, unknownEstimate, unknownEstimate, both}
	for arm := range 2 {
		r.ConstantHz[arm] = f.estimate(scanDarkA + arm)
	}
	for arm, noise := range m.options.LinearNoisePerMW {
		if noise != nil || m.options.Order == 2 {
			r.LinearNoisePerMW[arm] = f.estimate(scanRamanA + arm)
		}
	}
	if m.options.Order == 1 {
		r.Slopes = m.slopesOf(f)
	}
	if m.tellsPairs() {
		r.PairsHzPerMWk = f.estimate(scanPairs)
		r.Efficiency = [2]Estimate{f.estimate(scanEtaA), f.estimate(scanEtaB)}
	}
	m.list(&r)
	m.residuals(&r)
	m.say(&r)
	return r
}

// tellsPairs tells whether the pair rate and the efficiencies follow.
func (m *scanModel) tellsPairs() bool { return m.options.Order == 2 || !m.options.unknownNoise() }

// slopesOf returns the slopes of order 1 and their bounds.
func (m *scanModel) slopesOf(f fitted) (s ScanSlopes) {
	g := m.slopeGradients(f.theta)
	for arm := range 2 {
		s.SinglesHzPerMW[arm] = f.derived(f.theta[scanEtaA+arm]*(f.theta[scanPairs]+f.theta[scanRamanA+arm]), g[arm])
	}
	s.CoincidencesHzPerMW = f.derived(f.theta[scanEtaA]*f.theta[scanEtaB]*m.share*f.theta[scanPairs], g[2])
	sa, sb, c := s.SinglesHzPerMW[0].Value, s.SinglesHzPerMW[1].Value, s.CoincidencesHzPerMW.Value
	// The bounds are products of powers of the slopes: relative gradients add up.
	product := sa * sb * m.share / c
	s.PairsAtMostHzPerMW = f.derived(product-m.fit.lower[scanRamanA]-m.fit.lower[scanRamanB],
		combined(g, product/sa, product/sb, -product/c))
	for arm := range 2 {
		other := s.SinglesHzPerMW[1-arm].Value
		eta := c / (other * m.share)
		weights := [3]float64{2: eta / c}
		weights[1-arm] = -eta / other
		s.EfficiencyAtLeast[arm] = f.derived(eta, combined(g, weights[0], weights[1], weights[2]))
	}
	return s
}

// slopeGradients returns the derivatives of the slopes of Alice's singles,
// Bob's and the coincidences with respect to the parameters.
func (m *scanModel) slopeGradients(theta []float64) (g [3][]float64) {
	xi, a, b := theta[scanPairs], theta[scanEtaA], theta[scanEtaB]
	for i := range g {
		g[i] = make([]float64, scanParameters)
	}
	for arm, eta := range []float64{a, b} {
		g[arm][scanPairs] = eta
		g[arm][scanEtaA+arm] = xi + theta[scanRamanA+arm]
	}
	g[2][scanPairs], g[2][scanEtaA], g[2][scanEtaB] = a*b*m.share, b*m.share*xi, a*m.share*xi
	return g
}

// combined returns the weighted sum of gradients.
func combined(g [3][]float64, weights ...float64) []float64 {
	sum := make([]float64, len(g[0]))
	for i, w := range weights {
		for p, x := range g[i] {
			sum[p] += w * x
		}
	}
	return sum
}

// PairRateHz returns the pairs per second inside the source, before any loss,
// at a power in mW, ξ Pᵏ, with the standard deviation of ξ alone, the power
// taken as exact; unknown where the scan does not tell ξ.
func (r ScanFit) PairRateHz(powerMW float64) Estimate {
	return r.PairsHzPerMWk.scaled(math.Pow(powerMW, float64(r.Order)))
}

// UnpairedHz returns the photons without a partner per second inside the source,
// before any loss, in Alice's arm (0) or Bob's (1) at a power in mW, r P, the
// power taken as exact; unknown where the scan does not tell r.
func (r ScanFit) UnpairedHz(arm int, powerMW float64) Estimate {
	return r.LinearNoisePerMW[arm].scaled(powerMW)
}

// Expected returns what the fit expects to be counted per second at a power in
// mW: singles of both arms, and coincidences less accidentals. It needs no more
// than the fit itself, also where that does not tell pairs from linear noise.
func (r ScanFit) Expected(powerMW float64) (singlesHz [2]float64, trueHz float64) {
	theta := r.fit.theta
	pairs := theta[scanPairs] * math.Pow(powerMW, float64(r.Order))
	for arm := range singlesHz {
		singlesHz[arm] = theta[scanEtaA+arm]*(pairs+theta[scanRamanA+arm]*powerMW) + theta[scanDarkA+arm]
	}
	return singlesHz, theta[scanEtaA] * theta[scanEtaB] * r.WindowShare * pairs
}
