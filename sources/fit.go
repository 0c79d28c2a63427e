package sources

import (
	"math"
	"slices"
)

// Estimate is a fitted value and its standard deviation, both in the unit that
// the field's name ends in. NaN stands for what is not known.
type Estimate struct{ Value, SD float64 }

// unknownEstimate is what nothing is known of.
var unknownEstimate = Estimate{math.NaN(), math.NaN()}

// Known tells whether there is a value; its standard deviation may be missing
// all the same.
func (e Estimate) Known() bool { return !math.IsNaN(e.Value) }

// scaled returns the estimate in another unit.
func (e Estimate) scaled(by float64) Estimate {
	return Estimate{e.Value * by, e.SD * math.Abs(by)}
}

// countFit is a fit of a model to numbers of counts by maximum likelihood: the
// counts are independent and Poisson, so the parameters sought are those of the
// least deviance
//
//	D = 2 Σ [m − y + y ln(y/m)]
//
// where y is what was counted and m what the model expects ([1]). Least squares
// with variances taken from the model and taken again until nothing changes lead
// to the same parameters.
//
// [1] Baker et al. (1984). Nucl. Instrum. Methods 221, 437.
type countFit struct {
	counts       []float64 // counted, 0 or more
	lower, upper []float64 // range of each parameter; a parameter with no range is held

	// model writes what the parameters let expect into mean, and unless slopes
	// is nil the derivative of mean with respect to parameter p into slopes[p].
	model func(theta, mean []float64, slopes [][]float64)
}

// fitted is the result of a countFit.
type fitted struct {
	theta      []float64   // one value for each parameter
	mean       []float64   // expected counts
	deviance   float64     // D of countFit
	covariance [][]float64 // zero for parameters that are held, NaN for those that the counts do not tell
	told       []bool      // false for a parameter that the counts do not tell beside the others
	atBound    []bool      // held back by an end of its range
	converged  bool
}

// estimate returns a parameter with its standard deviation.
func (f fitted) estimate(p int) Estimate {
	return Estimate{f.theta[p], math.Sqrt(f.covariance[p][p])}
}

// derived returns a value that is a function of the parameters with the given
// gradient, with the standard deviation that follows to first order.
func (f fitted) derived(value float64, gradient []float64) Estimate {
	return Estimate{value, math.Sqrt(max(0, quadratic(f.covariance, gradient, gradient)))}
}

// quadratic returns aᵀ c b; entries of c for which a or b is zero do not count,
// even when they are NaN.
func quadratic(c [][]float64, a, b []float64) float64 {
	sum := 0.0
	for i, x := range a {
		for j, y := range b {
			if x != 0 && y != 0 {
				sum += x * c[i][j] * y
			}
		}
	}
	return sum
}

const (
	fitSteps     = 300
	fitAccuracy  = 1e-9 // distance to the best parameters at which to stop, in standard deviations
	fitSettled   = 1e-3 // distance within which the fit has settled when it gets no nearer
	fitNoise     = 1e-5 // distance below which rounding may hide that a step is better
	fitLeastDamp = 1e-12
	fitFirstDamp = 1e-3
	fitMostDamp  = 1e12
)

// run returns the parameters of least deviance near start, found by the method
// of Levenberg and Marquardt ([1]) on the expected information, with steps cut
// at the ends of the ranges.
//
// [1] Marquardt (1963). J. Soc. Ind. Appl. Math. 11, 431.
func (f countFit) run(start []float64) fitted {
	w := f.workspace()
	at := fitPlace{theta: slices.Clone(start), damp: fitFirstDamp}
	f.clip(at.theta)
	at.deviance = w.trialDeviance(at.theta)
	distance, better := math.Inf(1), true
	for step := 0; step < fitSteps && better && distance > fitAccuracy; step++ {
		w.derive(at.theta)
		distance, better = w.improve(&at)
	}
	return w.result(at.theta, distance < fitSettled)
}

// fitPlace is where a fit has come to.
type fitPlace struct {
	theta          []float64
	deviance, damp float64
}

// improve moves to a place of less deviance, damping the step until there is
// one, and returns how far off the least deviance was thought to be from the
// place left.
func (w *fitWorkspace) improve(at *fitPlace) (distance float64, better bool) {
	_, distance = w.step(at.theta, 0)
	for at.damp <= fitMostDamp {
		trial, _ := w.step(at.theta, at.damp)
		w.clip(trial)
		if next := w.trialDeviance(trial); next < at.deviance {
			*at = fitPlace{trial, next, max(at.damp/10, fitLeastDamp)}
			return distance, true
		}
		if distance < fitNoise {
			return distance, false
		}
		at.damp *= 10
	}
	return distance, false
}

// clip moves each parameter into its range.
func (f countFit) clip(theta []float64) {
	for p := range theta {
		theta[p] = min(max(theta[p], f.lower[p]), f.upper[p])
	}
}

// deviance returns D of countFit; infinite where counts are seen that are
// impossible.
func deviance(counts, mean []float64) float64 {
	sum := 0.0
	for i, y := range counts {
		sum += devianceTerm(y, mean[i])
	}
	return 2 * sum
}

// devianceTerm returns m − y + y ln(y/m), which is y (u − ln(1 + u)) with
// u = m/y − 1 and loses no digits where m is close to y.
func devianceTerm(y, m float64) float64 {
	if y == 0 {
		return m
	}
	u := (m - y) / y
	return y * (u - math.Log1p(u))
}
