package sources

import "math/cmplx"

// eigenRounding is the size up to which an eigenvalue of a matrix of trace 1 is
// rounding error and counts as 0. Concurrence feels its square root, so that it
// matters: 1e-16 too much would show as 1e-8.
const eigenRounding = 1e-15

// nearestPhysical returns the physical state nearest to the Hermitian matrix
// rho of trace 1, in the sum of all |difference|², and the lowest eigenvalue of
// rho. A matrix without negative eigenvalues is returned as it is.
//
// From the lowest up, eigenvalues that would stay negative become 0 and what
// they lack is taken evenly from those left ([1]).
//
// [1] Smolin et al. (2012). "Efficient method for computing the maximum-likelihood quantum state from measurements with additive Gaussian noise". Phys. Rev. Lett. 108, 070502.
func nearestPhysical(rho DensityMatrix) (DensityMatrix, float64) {
	values, vectors := eigenHermitian(rho)
	lowest := values[3]
	if lowest >= -eigenRounding {
		return rho, lowest
	}
	kept, debt := 4, 0.0
	for kept > 1 && values[kept-1]+debt/float64(kept) < 0 {
		debt += values[kept-1]
		values[kept-1] = 0
		kept--
	}
	for i := range kept {
		values[i] += debt / float64(kept)
	}
	return fromEigen(values, vectors), lowest
}

// fromEigen returns Σ_k values_k |v_k><v_k|, v_k the columns of vectors.
func fromEigen(values [4]float64, vectors [4][4]complex128) (rho DensityMatrix) {
	for k, value := range values {
		for i := range rho {
			for j := range rho[i] {
				rho[i][j] += complex(value, 0) * vectors[i][k] * cmplx.Conj(vectors[j][k])
			}
		}
	}
	for i := range rho {
		rho[i][i] = complex(real(rho[i][i]), 0)
	}
	return rho
}
