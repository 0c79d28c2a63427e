package sources

import (
	"math"
	"slices"
	"testing"
)

// A straight line through counts, slope and height sought.
func lineFit(counts []float64) countFit {
	return countFit{
		counts: counts, lower: []float64{0, 0}, upper: []float64{math.Inf(1), math.Inf(1)},
		model: func(theta, mean []float64, slopes [][]float64) {
			for i := range mean {
				mean[i] = theta[0] + theta[1]*float64(i)
				if slopes != nil {
					slopes[0][i], slopes[1][i] = 1, float64(i)
				}
			}
		},
	}
}

// At the least deviance of a straight line the fitted counts add up to those
// counted, and so do their moments divided by the line: the two equations of
// likelihood, checked without the fit's own derivatives.
func TestScanAndDelayFitSolvesTheLikelihood(t *testing.T) {
	poisson := poissonFrom(80)
	for range 50 {
		counts := make([]float64, 20)
		for i := range counts {
			counts[i] = poisson(3 + 0.7*float64(i))
		}
		r := lineFit(counts).run([]float64{1, 1})
		var sum, moment float64
		for i, y := range counts {
			sum += 1 - y/(r.theta[0]+r.theta[1]*float64(i))
			moment += float64(i) * (1 - y/(r.theta[0]+r.theta[1]*float64(i)))
		}
		if r.atBound[0] || r.atBound[1] {
			continue
		}
		near(t, "first equation", sum, 0, 1e-6)
		near(t, "second equation", moment, 0, 1e-5)
		if !r.converged {
			t.Error("not settled")
		}
	}
}

// Counts that fall hold a slope of 0 or more at 0; then the height is the mean.
func TestScanAndDelayFitStaysInRange(t *testing.T) {
	counts := []float64{9, 8, 7, 6, 5, 4, 3, 2, 1, 0}
	r := lineFit(counts).run([]float64{1, 1})
	near(t, "slope", r.theta[1], 0, 0)
	near(t, "height", r.theta[0], 4.5, fitNoise*math.Sqrt(0.45)) // which has the deviation √(4.5/10)
	if !r.atBound[1] || r.atBound[0] || !r.converged {
		t.Errorf("%+v", r)
	}
	held := lineFit(counts)
	held.lower[1], held.upper[1] = 0.25, 0.25
	r = held.run([]float64{1, 1})
	if r.theta[1] != 0.25 || r.atBound[1] || r.covariance[1][1] != 0 || !(r.covariance[0][0] > 0) {
		t.Errorf("%+v", r)
	}
}

// Two parameters that do the same are not told apart, and a third beside them
// is.
func TestScanAndDelayFitNamesWhatIsNotTold(t *testing.T) {
	f := countFit{
		counts: []float64{10, 12, 9, 31, 28, 30}, lower: make([]float64, 3), upper: slices.Repeat([]float64{math.Inf(1)}, 3),
		model: func(theta, mean []float64, slopes [][]float64) {
			for i := range mean {
				step := math.Floor(float64(i) / 3)
				mean[i] = theta[0] + theta[1] + step*theta[2]
				if slopes != nil {
					slopes[0][i], slopes[1][i], slopes[2][i] = 1, 1, step
				}
			}
		},
	}
	r := f.run([]float64{1, 1, 1})
	near(t, "sum", r.theta[0]+r.theta[1], 31.0/3, 1e-6)
	near(t, "step", r.theta[2], 89.0/3-31.0/3, 1e-6)
	if r.told[0] == r.told[1] || !r.told[2] {
		t.Errorf("told %v", r.told)
	}
	near(t, "deviation of the step", math.Sqrt(r.covariance[2][2]), math.Sqrt(89.0/9+31.0/9), 1e-6)
}

// The inverse times the matrix is the identity, for matrices whose entries
// differ by twenty orders of magnitude.
func TestScanAndDelayFitInverts(t *testing.T) {
	d := normalDrawer(81)
	for range 300 {
		const n = 7
		a, units := matrixOf(n, n), make([]float64, n)
		for p := range units {
			units[p] = math.Pow(10, 10*d.share()-5)
		}
		for range 2 * n {
			v := make([]float64, n)
			for p := range v {
				v[p] = d() * units[p]
			}
			for p := range a {
				for q := range a {
					a[p][q] += v[p] * v[q]
				}
			}
		}
		inverse, told := invertInformation(a, []bool{true, true, true, true, true, true, true}, 0)
		if slices.Contains(told, false) {
			t.Fatal("a positive matrix is called singular")
		}
		for p := range a {
			for q := range a {
				sum := 0.0
				for k := range a {
					sum += a[p][k] * inverse[k][q]
				}
				if p == q {
					sum--
				}
				if math.Abs(sum)*units[q]/units[p] > 1e-8 {
					t.Fatalf("entry %d, %d off by %g", p, q, sum)
				}
			}
		}
	}
}

// m − y + y ln(y/m) by its series (m−y)²/(2y) − (m−y)³/(3y²) where m is close to
// y; and at the ends.
func TestScanAndDelayFitDeviance(t *testing.T) {
	y, d := 1e6, 1e-3
	near(t, "close", devianceTerm(y, y+d)/(d*d/(2*y)-d*d*d/(3*y*y)), 1, 1e-6)
	near(t, "by the formula", devianceTerm(7, 11), 11-7+7*math.Log(7.0/11), 1e-13)
	near(t, "nothing counted", devianceTerm(0, 3), 3, 0)
	if !math.IsInf(devianceTerm(2, 0), 1) {
		t.Error("counts where none are expected")
	}
	near(t, "nothing at all", devianceTerm(0, 0), 0, 0)
}

// The chance of a chi-squared of 2 degrees of freedom above x is exp(−x/2).
func TestScanAndDelayChance(t *testing.T) {
	for _, x := range []float64{0, 0.5, 3, 40, 900} {
		near(t, "chance", chanceOf(x, 2), math.Exp(-x/2), 1e-12)
	}
	if !math.IsNaN(chanceOf(1, 0)) || chanceOf(math.Inf(1), 3) != 0 {
		t.Error("chance at the ends")
	}
}
