package sources

import (
	"math"
	"slices"
	"testing"
)

// 1000 and 1000 counts per second in a window of 2 µs: 2 accidentals per
// second. Textbook figure.
func TestPublishedScanAccidentals(t *testing.T) {
	p := ScanPoint{PowerMW: 1, SinglesHz: [2]float64{1000, 1000}, WindowPs: 2e6}
	near(t, "accidentals", PowerScan{HasWindow: true}.accidentalsHz(p), 2, 1e-12)
}

// The slopes that the models hand to the fit are those of their means, by
// differences to both sides, good to the third order of the step.
func TestScanAndDelayModelSlopes(t *testing.T) {
	scan := newScanModel(fourWave().scan(nil), fourWave().options())
	counts := make([]float64, 60)
	for name, x := range map[string]struct {
		n     int
		model func(theta, mean []float64, slopes [][]float64)
		theta []float64
	}{
		"scan":   {len(scan.fit.counts), scan.expect, []float64{2e5, 0.05, 0.08, 1e5, 2e5, 300, 500}},
		"linear": {len(scan.fit.counts), scan.expectLinear, []float64{2e4, 1e4, 300, 5e3, 7e3, 20, 800}},
		"peak":   {60, newDelayModel(counts, false, 0).expect, []float64{1e4, 0, 12, 31.3, 0, 4.7}},
		"peaks":  {60, newDelayModel(counts, true, 11.3).expect, []float64{1e4, 3e3, 12, 31.3, 11.3, 4.7}},
		"narrow": {60, newDelayModel(counts, true, 11.3).expect, []float64{1e4, 3e3, 12, 31.3, 11.3, 0.8}},
	} {
		up, down, slopes := make([]float64, x.n), make([]float64, x.n), matrixOf(len(x.theta), x.n)
		x.model(x.theta, up, slopes)
		for p, v := range x.theta {
			if v == 0 {
				continue
			}
			step, theta := 1e-4*v, slices.Clone(x.theta)
			theta[p] = v + step
			x.model(theta, up, nil)
			theta[p] = v - step
			x.model(theta, down, nil)
			scale := math.Abs(slices.Max(slopes[p])) + math.Abs(slices.Min(slopes[p]))
			for i := range up {
				if got := (up[i] - down[i]) / (2 * step); math.Abs(got-slopes[p][i]) > 1e-5*scale {
					t.Fatalf("%s: slope of count %d with parameter %d is %g, by differences %g", name, i, p, slopes[p][i], got)
				}
			}
		}
	}
}

// A power meter that shows c times the power changes ξ by c^-k and r by 1/c, and
// nothing else; a point counted in two halves is the same point; and exchanging
// the arms exchanges the figures.
func TestScanDoesNotDependOnHowItIsWritten(t *testing.T) {
	for _, s := range []scanTruth{fourWave(), downConversion()} {
		scan, o := s.scan(poissonFrom(46)), s.options()
		r := mustScan(t, scan, o)
		same := func(what string, a, b Estimate, factor float64) {
			t.Helper()
			near(t, what, a.Value/b.Value, factor, 1e-6)
			near(t, "deviation of "+what, a.SD/b.SD, factor, 1e-6)
		}

		shown := PowerScan{HasSeconds: true, HasWindow: true}
		halves, turned := shown, shown
		for _, p := range scan.Points {
			q := p
			q.PowerMW *= 3
			shown.Points = append(shown.Points, q)
			q = p
			q.Seconds /= 2
			halves.Points = append(halves.Points, q, q)
			q = p
			q.SinglesHz = [2]float64{p.SinglesHz[1], p.SinglesHz[0]}
			turned.Points = append(turned.Points, q)
		}
		third := o
		if s.order == 1 {
			a, b := s.raman[0]/3, s.raman[1]/3
			third.LinearNoisePerMW = [2]*float64{&a, &b}
		}
		x := mustScan(t, shown, third)
		same("pairs", x.PairsHzPerMWk, r.PairsHzPerMWk, math.Pow(3, -float64(s.order)))
		same("efficiency", x.Efficiency[0], r.Efficiency[0], 1)
		same("pair rate at the same power", x.PairRateHz(3), r.PairRateHz(1), 1)
		near(t, "unpaired light at the same power", x.UnpairedHz(1, 3).Value/r.UnpairedHz(1, 1).Value, 1, 1e-6)

		x = mustScan(t, halves, o)
		same("pairs of halves", x.PairsHzPerMWk, r.PairsHzPerMWk, 1)
		same("constant counts of halves", x.ConstantHz[0], r.ConstantHz[0], 1)

		o.LinearNoisePerMW[0], o.LinearNoisePerMW[1] = o.LinearNoisePerMW[1], o.LinearNoisePerMW[0]
		x = mustScan(t, turned, o)
		same("pairs of exchanged arms", x.PairsHzPerMWk, r.PairsHzPerMWk, 1)
		same("efficiency of exchanged arms", x.Efficiency[1], r.Efficiency[0], 1)
	}
}

// The error of a pair rate is that of ξ times Pᵏ; correlations are 1 with
// themselves, at most 1, alike both ways, and the pairs' with an efficiency is
// negative: what singles and coincidences fix is nearly their product.
func TestScanCorrelation(t *testing.T) {
	r := mustScan(t, fourWave().scan(poissonFrom(47)), fourWave().options())
	near(t, "pair rate at 3 mW", r.PairRateHz(3).Value, 9*r.PairsHzPerMWk.Value, 1e-6)
	near(t, "its deviation", r.PairRateHz(3).SD, 9*r.PairsHzPerMWk.SD, 1e-6)
	for i, row := range r.Correlation {
		for j, c := range row {
			if !(math.Abs(c) <= 1+1e-12) || math.Abs(c-r.Correlation[j][i]) > 1e-9 || i == j && c != 1 {
				t.Errorf("correlation %d, %d is %g", i, j, c)
			}
		}
	}
	if !(r.Correlation[0][1] < -0.5) || !(r.Correlation[1][0] < -0.5) {
		t.Errorf("correlation of pairs and efficiency %g", r.Correlation[0][1])
	}
}

// Residuals are what was counted less what is fitted, in standard deviations of
// the fitted counts; of the coincidences accidentals count twice, once as part
// of what was counted and once as what is subtracted. Their squares add up to
// chi-squared.
func TestScanResiduals(t *testing.T) {
	s := fourWave()
	s.giveAccidental = true
	scan := s.scan(poissonFrom(48))
	r := mustScan(t, scan, s.options())
	sum := 0.0
	for i, p := range r.Points {
		truth := scan.Points[i]
		near(t, "true coincidences", p.TrueHz, truth.CoincidencesHz-truth.AccidentalsHz, 1e-9)
		for arm := range 2 {
			z := (p.SinglesHz[arm] - p.SinglesFitHz[arm]) / math.Sqrt(p.SinglesFitHz[arm]/truth.Seconds)
			near(t, "singles", p.SinglesResidual[arm], z, 1e-6)
			sum += z * z
		}
		if v := (p.TrueFitHz + 2*p.AccidentalsHz) / truth.Seconds; v > 0 {
			z := (p.TrueHz - p.TrueFitHz) / math.Sqrt(v)
			near(t, "coincidences", p.TrueResidual, z, 1e-6)
			sum += z * z
		} else if !math.IsNaN(p.TrueResidual) {
			t.Errorf("residual %g where nothing is expected", p.TrueResidual)
		}
	}
	near(t, "chi-squared", r.Chi2, sum, 1e-6)
	if r.DegreesOfFreedom < 3*len(scan.Points)-8 || r.DegreesOfFreedom > 3*len(scan.Points)-7 {
		t.Errorf("%d degrees of freedom of %d counts and 7 parameters", r.DegreesOfFreedom, 3*len(scan.Points))
	}
}
