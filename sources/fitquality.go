package sources

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// chanceOf returns the chance of a chi-squared above the given one, 0 to 1; NaN
// without degrees of freedom.
func chanceOf(chi2 float64, degrees int) float64 {
	if degrees < 1 || math.IsNaN(chi2) {
		return math.NaN()
	}
	if math.IsInf(chi2, 1) {
		return 0
	}
	return mathext.GammaIncRegComp(float64(degrees)/2, chi2/2)
}

// unlikely is the chance below which a model is doubted: at 0.1 % one good
// measurement in a thousand is.
const unlikely = 1e-3

// freeParameters returns how many parameters the counts could move.
func (f countFit) freeParameters(r fitted) int {
	free := 0
	for p := range f.lower {
		if !f.held(p) && !r.atBound[p] {
			free++
		}
	}
	return free
}

// leastExpected is the number of counts that a group of bins should hold for
// its part of a chi-squared to be distributed as one.
const leastExpected = 10

// groupedChi2 returns Pearson's chi-squared of neighbouring counts, put together
// until at least leastExpected are expected, and the number of groups.
func groupedChi2(counts, mean []float64) (chi2 float64, groups int) {
	var y, m float64
	left := 0.0
	for _, x := range mean {
		left += x
	}
	for i, x := range mean {
		y, m, left = y+counts[i], m+x, left-x
		if m >= leastExpected && left >= leastExpected || i == len(mean)-1 && m > 0 {
			chi2 += (y - m) * (y - m) / m
			groups++
			y, m = 0, 0
		}
	}
	return chi2, groups
}
