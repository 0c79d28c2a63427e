package sources

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"
)

func fitOf(t testing.TB, counts Counts) Fit {
	t.Helper()
	fit, err := counts.MaximumLikelihood()
	if err != nil {
		t.Fatal(err)
	}
	return fit
}

// logLikelihood returns the counts' Poisson probability given a state and a
// total, term by term.
func (c Counts) logLikelihood(rho DensityMatrix, total float64) (sum float64) {
	for _, s := range c.Settings {
		sum += distuv.Poisson{Lambda: total*s.Exposure*s.chance(rho) + s.Accidentals}.LogProb(s.Counts)
	}
	return sum
}

// optimality returns, from the definition alone, by how much any state and total
// could be more likely than these: for any X' ≥ 0 that is as likely as X = N ρ,
// ln L(X') − ln L(X) ≤ Tr G X' − Tr G X, and Tr G X' ≤ λ Tr M X' where λ is the
// largest eigenvalue of M^-1/2 G M^-1/2, M = Σ exposure P; at the maximum
// Tr M X' is at most the number of counts.
func (c Counts) optimality(rho DensityMatrix, total float64) float64 {
	var m, g [4][4]complex128
	counts := 0.0
	for _, s := range c.Settings {
		p, weight := s.pair(), s.Exposure*(s.Counts/(total*s.Exposure*s.chance(rho)+s.Accidentals)-1)
		for i := range p {
			for j := range p {
				m[i][j] += complex(s.Exposure, 0) * p[i] * cmplx.Conj(p[j])
				g[i][j] += complex(weight, 0) * p[i] * cmplx.Conj(p[j])
			}
		}
		counts += s.Counts
	}
	values, vectors := eigenHermitian(m)
	for k := range values {
		values[k] = 1 / math.Sqrt(values[k])
	}
	root := fromEigen(values, vectors)
	largest, _ := eigenHermitian(times(root, times(g, root)))
	return counts*max(0, largest[0]) - total*real(traceOf(times(g, rho)))
}

// The most likely state of the published counts of James et al. (2001): figures of
// an independent calculation, which checkFit holds to the conditions of a
// maximum. Two eigenvalues vanish.
func TestMaximumLikelihoodOf2001(t *testing.T) {
	counts := read2001(t)
	fit := fitOf(t, counts)
	values, _ := eigenHermitian(fit.Rho)
	for k, want := range []float64{0.96479, 0.03521, 0, 0} {
		near(t, fmt.Sprintf("eigenvalue %d", k), values[k], want, 5e-6)
	}
	f := Describe(fit.Rho)
	near(t, "concurrence", f.Concurrence, 0.92087, 5e-6)
	near(t, "tangle", f.Tangle, 0.84800, 5e-6)
	near(t, "CHSH", f.CHSH, 2.71761, 5e-6)
	near(t, "fidelity with Phi+", f.BellFidelity, 0.95974, 5e-6)
	expect(t, f.BellState, "Phi+")
	checkFit(t, counts, fit)
	if !math.IsNaN(fit.Chi2PerDof) {
		t.Errorf("a chi-square per degree of freedom of %g with 16 settings", fit.Chi2PerDof)
	}
}

// differs: the matrix printed in James et al. (2001) is not the maximum of its
// own likelihood. Whatever the total, it is less likely than the fit, and its
// gradient says so.
func TestPublishedMatrixIsNotTheMaximum(t *testing.T) {
	counts := read2001(t)
	fit := fitOf(t, counts)
	raw, err := ReadDensityMatrix(strings.NewReader(printed2001))
	if err != nil {
		t.Fatal(err)
	}
	printed, _, err := NewDensityMatrix(raw)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "fidelity with the printed matrix", fit.Rho.FidelityWith(printed), 0.992, 0.0005)
	chances := 0.0
	for _, s := range counts.Settings {
		chances += s.chance(printed)
	}
	best := counts.Total() / chances // the most likely total of the printed state
	if less := fit.LogLikelihood - counts.logLikelihood(printed, best); less < 100 {
		t.Errorf("the printed matrix is less likely by %g only", less)
	}
	if o := counts.optimality(printed, best); o < 100 {
		t.Errorf("the printed matrix could be surpassed by %g only", o)
	}
}

// checkFit holds a fit to its definition.
func checkFit(t *testing.T, counts Counts, fit Fit) {
	t.Helper()
	checkPhysical(t, fit.Rho)
	n := counts.Total()
	goal := max(optimalityGoal, optimalityRounding*n)
	if !(fit.Optimality >= 0 && fit.Optimality <= goal) {
		t.Errorf("optimality %g of %g counts", fit.Optimality, n)
	}
	near(t, "optimality from its definition", counts.optimality(fit.Rho, fit.Total), 0, 2*goal+1e-13*n)
	near(t, "log-likelihood", fit.LogLikelihood, counts.logLikelihood(fit.Rho, fit.Total), 1e-10*max(1, n))
	for i, s := range counts.Settings {
		near(t, "expected counts", fit.Expected[i], fit.Total*s.Exposure*s.chance(fit.Rho)+s.Accidentals, 1e-9*n)
	}
}

// tomographies are kinds of measurements to be fitted.
func tomographies(d drawer, check func(name string, counts Counts, truth DensityMatrix, total float64)) {
	for _, letters := range []string{"HVDR", "HVDARL"} {
		for rank := 1; rank <= 4; rank++ {
			for _, total := range []float64{20, 3000, 1e6} {
				for _, accidentals := range []float64{0, 0.3 * total} {
					truth, counts := d.state(rank), combinations(letters)
					if accidentals > 0 {
						counts = d.varied(counts, accidentals)
					}
					name := fmt.Sprintf("%s, rank %d, %g pairs, %g accidentals", letters, rank, total, accidentals)
					check(name, counts, truth, total)
				}
			}
		}
	}
}

// Simulated counts: the fit is optimal, and as much more likely than the truth
// as sixteen parameters can make it, 2 Δ ln L being chi-square distributed with
// at most 16 degrees of freedom.
func TestStatesAreRecovered(t *testing.T) {
	limit := distuv.ChiSquared{K: parameters}.Quantile(1 - 1e-6)
	tomographies(normalDrawer(86), func(name string, settings Counts, truth DensityMatrix, total float64) {
		for seed := range uint64(10) {
			counts := settings.simulated(truth, total, seed)
			fit := fitOf(t, counts)
			checkFit(t, counts, fit)
			gain := 2 * (fit.LogLikelihood - counts.logLikelihood(truth, total))
			if !(gain > -1e-6 && gain < limit) {
				t.Errorf("%s: 2 ln of the likelihood ratio with the truth is %g", name, gain)
			}
			if t.Failed() {
				t.Fatalf("%s, seed %d", name, seed)
			}
		}
	})
}

// Counts without noise give back the state and the total. The truth has the
// chi-square 0, hence that of the fit is at most twice what it is off the maximum
// in ln L. Where eigenvalues of the truth vanish ln L is flat there: δ off, a
// share of all pairs, costs counts × δ² or so, and so 1e-8 off in ln L leaves
// 1e-6 or so with the 1e5 counts and more of this test.
func TestExactCountsAreFitted(t *testing.T) {
	tomographies(normalDrawer(87), func(name string, settings Counts, truth DensityMatrix, total float64) {
		counts := settings.exact(truth, 1e4*total)
		fit := fitOf(t, counts)
		near(t, name+": infidelity", 1-fit.Rho.FidelityWith(truth), 0, 1e-6)
		near(t, name+": distance", distance(fit.Rho, truth), 0, 1e-5)
		near(t, name+": total", fit.Total/(1e4*total), 1, 1e-6)
		near(t, name+": chi-square", fit.Chi2, 0, 2*fit.Optimality)
	})
}

// The same maximum by another way: for letters with all 36 settings, equal times
// and no accidentals, X -> R X R/9 with R = Σ n_i/μ_i P_i/9 climbs slowly to it.
//
// Hradil (1997). Phys. Rev. A 55, R1561; from memory.
func TestAgainstFixedPointIteration(t *testing.T) {
	d := normalDrawer(88)
	for rank := 1; rank <= 4; rank++ {
		counts := combinations("HVDARL").simulated(d.state(rank), 30, uint64(rank))
		fit := fitOf(t, counts)
		x, total := Werner(0), counts.Total()/9
		for range 3000 {
			var r [4][4]complex128
			for _, s := range counts.Settings {
				p, weight := s.pair(), complex(s.Counts/(total*s.chance(x))/9, 0)
				for i := range p {
					for j := range p {
						r[i][j] += weight * p[i] * cmplx.Conj(p[j])
					}
				}
			}
			x = times(r, times(x, r))
			x = hermitianPart(x, real(traceOf(x)))
		}
		slow := counts.logLikelihood(x, total)
		if !(slow <= fit.LogLikelihood+1e-8 && slow > fit.LogLikelihood-0.01) {
			t.Errorf("rank %d: log-likelihood %.10g, by the other way %.10g", rank, fit.LogLikelihood, slow)
		}
	}
}

// Times and efficiencies count as their product, and in what unit only scales
// the total.
func TestExposureUnits(t *testing.T) {
	counts := normalDrawer(89).varied(combinations("HVDR"), 5).simulated(Dephased(0.8), 1000, 4)
	a := fitOf(t, counts)
	for i := range counts.Settings {
		counts.Settings[i].Exposure *= 3600
	}
	b := fitOf(t, counts)
	near(t, "distance of the states", distance(a.Rho, b.Rho), 0, 1e-7)
	near(t, "ratio of the totals", a.Total/b.Total, 3600, 1e-5)
}

// For a state of full rank with many counts chi-square has settings − 16 degrees
// of freedom: PValue is evenly distributed. On the edge it is too large, so that
// no good measurement is called bad.
func TestPValues(t *testing.T) {
	inside, edge := mixed(0.4, bell(1, 1), Werner(0)), DensityMatrix(bell(1, 1))
	var values []float64
	for seed := range uint64(300) {
		fit := fitOf(t, combinations("HVDARL").simulated(inside, 1000, seed))
		values = append(values, fit.PValue)
		near(t, "chi-square per degree of freedom", fit.Chi2PerDof, fit.Chi2/20, 1e-12)
	}
	near(t, "mean p", stat.Mean(values, nil), 0.5, 4/math.Sqrt(12*300))
	near(t, "deviation of p", stat.StdDev(values, nil), 1/math.Sqrt(12), 0.05)
	for _, settings := range []Counts{combinations("HVDR"), combinations("HVDARL")} {
		low := 0
		for seed := range uint64(300) {
			if fitOf(t, settings.simulated(edge, 1000, seed)).PValue < 0.05 {
				low++
			}
		}
		if low > 15+15 { // 5 % of 300, and four deviations
			t.Errorf("%d settings: p < 0.05 in %d of 300 on the edge", len(settings.Settings), low)
		}
	}
}

func TestBadFitIsSaid(t *testing.T) {
	counts := combinations("HVDARL").simulated(Werner(0.9), 1000, 5)
	expect(t, fitOf(t, counts).Warning(), "")
	counts.Settings[7].Counts *= 1.5
	warning := fitOf(t, counts).Warning()
	if !strings.HasPrefix(warning, "the counts agree with no physical state: their chi-square is ") {
		t.Errorf("got %q", warning)
	}
	// With 16 settings a state of full rank fits any counts.
	fit := fitOf(t, combinations("HVDR").simulated(Werner(0.5), 1000, 5))
	if !math.IsNaN(fit.PValue) || fit.Warning() != "" {
		t.Errorf("p = %g, %q", fit.PValue, fit.Warning())
	}
	// Of those of James et al. none does, by far.
	expect(t, fitOf(t, read2001(t)).Warning(), "the counts agree with no physical state: their chi-square is 700.7, which chance alone reaches with a probability below 1e-12. "+
		"Did the source or an analyser drift, is an angle or a time wrong, were accidentals left out? The error bars know of counting noise only and are too small")
}
