package sources

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Fit is the state that makes the counts of a tomography most likely, and how
// well it does.
type Fit struct {
	Rho           DensityMatrix
	Total         float64   // N, the pairs per unit of exposure that would be counted without analysers
	Expected      []float64 // counts expected in each setting, accidentals included, in the order of the settings
	LogLikelihood float64   // natural logarithm of the counts' Poisson probability

	// Chi2 is 2 Σ n_i ln(n_i/μ_i) − n_i + μ_i, n_i counted and μ_i expected: of
	// Poisson counts about chi-square distributed ([1]), and least at the fit.
	//
	// [1] Baker, Cousins (1984). Nucl. Instrum. Methods 221, 437.
	Chi2             float64
	DegreesOfFreedom int     // settings − 16: of a state and the total
	Chi2PerDof       float64 // NaN with 16 settings, which leave no degree of freedom
	// PValue is the probability of a larger Chi2 by chance, or an upper bound of
	// it. A fit with an eigenvalue of 0 lies on the edge of what is physical; its
	// Chi2 is distributed between those of settings − 16 and settings − 7 degrees of
	// freedom (a pure state and the total have 7 parameters), and the larger
	// probability is given. NaN where no degree of freedom is left.
	PValue float64

	// Optimality is an upper bound of what any other state and total could add to
	// LogLikelihood; see MaximumLikelihood.
	Optimality float64
	Iterations int
}

// The log-likelihood is maximised to optimalityGoal, or to what rounding allows
// with very many counts.
const (
	optimalityGoal     = 1e-8
	optimalityRounding = 3e-14 // per count
)

// MaximumLikelihood returns the physical state ρ and the total N for which the
// counts are most likely ([1]), if counts of setting i are Poisson distributed
// with the mean
//
//	μ_i = N exposure_i Tr(ρ P_i) + accidentals_i
//
// P_i the projector on the pair of polarisations that passes the analysers.
//
// With X = N ρ the log-likelihood is concave, G its gradient there, and X is
// the maximum where G has no positive eigenvalue and Tr(G X) = 0. The fit ends
// at an X for which −G is positive definite, so that no X' whatever has
//
//	ln L(X') − ln L(X) ≤ Tr G (X' − X) ≤ −Tr(G X)
//
// and −Tr(G X) is the Optimality returned: at most 1e-8, or 3e-14 per count where
// that is more; a likelihood ratio, it needs no scale. Divided by the counts it
// is the relative gradient, far below 1e-6. A state with eigenvalues of 0, as
// the maximum often has, is no exception; they come out a little above 0.
//
// The way there is Newton's method along the central path of a barrier
// proportional to ln det X ([2]), some twenty steps whatever the state.
//
// Settings that leave parameters of the state open are a *CSVError that names
// those, and so are accidentals that leave no pairs.
//
// [1] James et al. (2001). "Measurement of qubits". Phys. Rev. A 64, 052312.
// [2] Boyd, Vandenberghe (2004). "Convex Optimization". Cambridge University Press, chapter 11.
func (c Counts) MaximumLikelihood() (Fit, error) {
	if _, err := c.design(); err != nil {
		return Fit{}, err
	}
	return c.likelihood().fit()
}

// fit returns the maximum for settings that are known to suffice.
func (l likelihood) fit() (Fit, error) {
	if !l.hasPairs() {
		return Fit{}, noPairs
	}
	w := l.start()
	gap, steps, ok := w.climb()
	if !ok {
		return Fit{}, fmt.Errorf("the most likely state was not found to within %.2g in %d steps; check the times and efficiencies for values far from all others", w.goal(), steps)
	}
	up := dagger(w.c)
	x := product(&w.c, &up)
	f := Fit{Expected: w.mu, Optimality: gap, Iterations: steps}
	for i := range x {
		f.Total += real(x[i][i])
	}
	f.Rho = hermitianPart(x, f.Total)
	for i, n := range l.n {
		logFactorial, _ := math.Lgamma(n + 1)
		f.LogLikelihood -= w.mu[i] + logFactorial
		if n > 0 {
			f.LogLikelihood += n * math.Log(w.mu[i])
		}
	}
	f.judge(l)
	return f, nil
}

// judge sets what tells how well the fit agrees with the counts.
func (f *Fit) judge(l likelihood) {
	f.Chi2 = deviance(l.n, f.Expected)
	f.DegreesOfFreedom = len(l.n) - parameters
	f.Chi2PerDof, f.PValue = math.NaN(), math.NaN()
	if f.DegreesOfFreedom > 0 {
		f.Chi2PerDof = f.Chi2 / float64(f.DegreesOfFreedom)
	}
	free := f.DegreesOfFreedom
	if f.onEdge(l) {
		free = len(l.n) - pureParameters
	}
	if free > 0 {
		f.PValue = distuv.ChiSquared{K: float64(free)}.Survival(f.Chi2)
	}
}

// pureParameters is how many real numbers make an unnormalised pure state of two
// photons, but for its phase.
const pureParameters = 7

// onEdge tells whether the fitted state has an eigenvalue of 0: one that stands
// for less than a hundredth of a count.
func (f *Fit) onEdge(l likelihood) bool {
	pairs := 0.0
	for i, mu := range f.Expected {
		pairs += mu - l.a[i]
	}
	values, _ := eigenHermitian(f.Rho)
	return values[3]*pairs < 0.01
}

// badFit is the probability below which a fit counts as bad.
const badFit = 1e-3

// Warning says in plain words that the counts agree with no state, or nothing:
// it is empty unless PValue is below 1e-3.
func (f Fit) Warning() string {
	if !(f.PValue < badFit) {
		return ""
	}
	chance := fmt.Sprintf("of %.1g", f.PValue)
	if f.PValue < 1e-12 {
		chance = "below 1e-12"
	}
	return fmt.Sprintf("the counts agree with no physical state: their chi-square is %.4g, which chance alone reaches with a probability %s. "+
		"Did the source or an analyser drift, is an angle or a time wrong, were accidentals left out? The error bars know of counting noise only and are too small", f.Chi2, chance)
}
