package sources

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

const boundSlack = 1e-12 // rounding

// Verstraete, Wolf, PRL 89, 170401 (2002); Verstraete, Verschelde, PRA 66,
// 022307 (2002); from memory.
func TestPublishedTangleBounds(t *testing.T) {
	forRandomStates(t, 3000, func(rho DensityMatrix) string {
		c, f, chsh := rho.Concurrence(), rho.Fidelity(), rho.CHSH()
		switch {
		case !(chsh >= 2*math.Sqrt2*c-boundSlack && chsh <= 2*math.Sqrt(1+c*c)+boundSlack):
			return fmt.Sprintf("CHSH %.15g with concurrence %.15g", chsh, c)
		case !(f >= max((1+c)/4, c)-boundSlack && f <= (1+c)/2+boundSlack):
			return fmt.Sprintf("fidelity %.15g with concurrence %.15g", f, c)
		}
		return ""
	})
}

// The two largest singular values lie in the triangle (C, C), (1, C),
// ((1+C)/2, (1+C)/2): s2 >= C, s1 <= 1, s1 + s2 <= 2F <= 1 + C. That its corners
// are reached, TestMembersAreStates shows.
func TestSingularValuesLieInTheTriangle(t *testing.T) {
	forRandomStates(t, 3000, func(rho DensityMatrix) string {
		c, f := rho.Concurrence(), rho.Fidelity()
		s, _ := referenceStrengths(rho)
		if !(s[1] >= c-boundSlack && s[0] <= 1+boundSlack && s[0]+s[1] <= 2*f+boundSlack && 2*f <= 1+c+boundSlack) {
			return fmt.Sprintf("s1 %.15g, s2 %.15g with concurrence %.15g, fidelity %.15g", s[0], s[1], c, f)
		}
		return ""
	})
}

// No state's errors exceed those at worst of its concurrence, nor fall below
// the best; they agree with gonum's singular values.
func TestErrorsStayWithinMembers(t *testing.T) {
	forRandomStates(t, 300, func(rho DensityMatrix) string {
		e1, e2 := rho.AlignedErrors()
		_, worst := FromConcurrence(rho.Concurrence()).Errors(AtWorst)
		if e2 > worst+boundSlack {
			return fmt.Sprintf("e2 %.15g above the worst, %.15g", e2, worst)
		}
		even, _ := FromConcurrence(rho.Concurrence()).Errors(BestEven)
		if e1+e2 < 2*even-boundSlack {
			return fmt.Sprintf("e1 + e2 %.15g below the best, %.15g", e1+e2, 2*even)
		}
		s, _ := referenceStrengths(rho)
		if math.Abs(1-2*e1-s[0]) > 1e-14 || math.Abs(1-2*e2-s[1]) > 1e-14 {
			return fmt.Sprintf("errors %.15g %.15g, singular values %v", e1, e2, s)
		}
		return ""
	})
}

// referenceStrengths returns gonum's singular values of the correlations and
// the sign of their determinant.
func referenceStrengths(rho DensityMatrix) (s []float64, sign float64) {
	c := rho.Correlations()
	dense := mat.NewDense(3, 3, nil)
	for i := range c {
		dense.SetRow(i, c[i][:])
	}
	var svd mat.SVD
	if !svd.Factorize(dense, mat.SVDNone) {
		panic("no reference")
	}
	return svd.Values(nil), math.Copysign(1, mat.Det(dense))
}
