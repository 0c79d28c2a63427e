package sources

import "math"

// list fills in the parameters that the scan tells, and the correlation of
// their errors.
func (m *scanModel) list(r *ScanFit) {
	var gradients [][]float64
	if m.tellsPairs() {
		gradients = m.listInside(r)
	} else {
		g := m.slopeGradients(r.fit.theta)
		gradients = g[:]
		for arm, name := range armNames {
			r.add(ScanParameter{Name: "growth of " + name + "'s singles", Unit: "/s per mW", Estimate: r.Slopes.SinglesHzPerMW[arm]})
		}
		r.add(ScanParameter{Name: "growth of the coincidences", Unit: "/s per mW", Estimate: r.Slopes.CoincidencesHzPerMW})
	}
	for arm, name := range armNames {
		r.add(ScanParameter{Name: "constant counts of " + name, Unit: "/s", Estimate: r.ConstantHz[arm], AtBound: r.fit.atBound[scanDarkA+arm]})
		gradients = append(gradients, unitVector(scanDarkA+arm))
	}
	r.Correlation = r.fit.correlation(gradients)
}

// listInside lists the parameters of the source and the arms and returns their
// gradients.
func (m *scanModel) listInside(r *ScanFit) (gradients [][]float64) {
	pairsUnit, f := "/s per mW", r.fit
	if m.options.Order == 2 {
		pairsUnit = "/s per mW²"
	}
	put := func(at int, name, unit string) {
		r.add(ScanParameter{Name: name, Unit: unit, Estimate: f.estimate(at), AtBound: f.atBound[at]})
		gradients = append(gradients, unitVector(at))
	}
	put(scanPairs, "pairs", pairsUnit)
	for arm, name := range armNames {
		put(scanEtaA+arm, "efficiency of "+name+"'s arm", "")
	}
	for arm, name := range armNames {
		if at := scanRamanA + arm; !m.fit.held(at) {
			put(at, "linear noise in "+name+"'s arm", "/s per mW")
		}
	}
	return gradients
}

func (r *ScanFit) add(p ScanParameter) { r.Parameters = append(r.Parameters, p) }

// unitVector returns the gradient of a parameter with respect to all.
func unitVector(at int) []float64 {
	v := make([]float64, scanParameters)
	v[at] = 1
	return v
}

// correlation returns the correlation of the errors of values with the given
// gradients.
func (f fitted) correlation(gradients [][]float64) [][]float64 {
	c := matrixOf(len(gradients), len(gradients))
	for i, a := range gradients {
		for j, b := range gradients {
			c[i][j] = quadratic(f.covariance, a, b) / math.Sqrt(quadratic(f.covariance, a, a)*quadratic(f.covariance, b, b))
		}
		c[i][i] = 1
	}
	return c
}

// residuals fills in the points and how well they are fitted. Counts of which
// the model expects none have no residual.
func (m *scanModel) residuals(r *ScanFit) {
	used := 0
	for i, p := range m.scan.Points {
		t := m.seconds[i]
		x := ScanResidual{PowerMW: p.PowerMW, SinglesHz: p.SinglesHz, AccidentalsHz: m.chance[i] / t}
		x.TrueHz = p.CoincidencesHz - x.AccidentalsHz
		x.TrueFitHz = max(0, (r.fit.mean[scanAt(i, 2)]-2*m.chance[i])/t)
		x.TrueResidual = m.residual(r.fit, scanAt(i, 2))
		for arm := range 2 {
			x.SinglesFitHz[arm] = r.fit.mean[scanAt(i, arm)] / t
			x.SinglesResidual[arm] = m.residual(r.fit, scanAt(i, arm))
		}
		for _, z := range []float64{x.SinglesResidual[0], x.SinglesResidual[1], x.TrueResidual} {
			if !math.IsNaN(z) {
				r.Chi2 += z * z
				used++
			}
		}
		r.Points = append(r.Points, x)
	}
	r.DegreesOfFreedom = max(0, used-m.fit.freeParameters(r.fit))
	r.Chance = chanceOf(r.Chi2, r.DegreesOfFreedom)
}

// residual returns counted less expected in standard deviations, NaN where
// nothing is expected.
func (m *scanModel) residual(f fitted, at int) float64 {
	mean := f.mean[at]
	if mean < leastMean {
		return math.NaN()
	}
	return (m.fit.counts[at] - mean) / math.Sqrt(mean)
}
