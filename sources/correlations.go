package sources

import "math"

// Pauli's matrices σ1, σ2, σ3 each have one entry per row: row a holds
// pauliEntry[i][a] in column a, or in the other column where pauliFlips.
var (
	pauliFlips = [3]int{1, 1, 0}
	pauliEntry = [3][2]complex128{{1, 1}, {-1i, 1i}, {1, -1}}
)

// Correlations returns T_ij = Tr(ρ σ_i⊗σ_j), −1 to 1, i Alice's and j Bob's;
// index 0 is σ1 (D and A), 1 is σ2 (L and R), 2 is σ3 (H and V).
func (rho DensityMatrix) Correlations() (t [3][3]float64) {
	for i := range t {
		for j := range t[i] {
			sum := complex128(0)
			for a := range 2 {
				for b := range 2 {
					row, column := 2*(a^pauliFlips[i])+(b^pauliFlips[j]), 2*a+b
					sum += rho[row][column] * pauliEntry[i][a] * pauliEntry[j][b]
				}
			}
			t[i][j] = real(sum)
		}
	}
	return t
}

// LabErrors returns the bit error probabilities in the laboratory's own axes,
// 0 to 1/2: (1 − |T33|)/2, (1 − |T11|)/2, (1 − |T22|)/2. Which outcomes stand
// for the same bit is free, hence no error above 1/2.
func (rho DensityMatrix) LabErrors() (hv, da, rl float64) {
	t := rho.Correlations()
	return errorOf(t[2][2]), errorOf(t[0][0]), errorOf(t[1][1])
}

// AlignedErrors returns the bit error probabilities in the two best bases once
// both polarisation frames are aligned, 0 to 1/2, e1 ≤ e2: (1 − s1)/2 and
// (1 − s2)/2 of the largest singular values of the correlations.
func (rho DensityMatrix) AlignedErrors() (e1, e2 float64) {
	s := rho.correlationStrengths()
	return errorOf(s[0]), errorOf(s[1])
}

// CHSH returns the largest value of the Clauser-Horne-Shimony-Holt sum over all
// settings, 0 to 2√2: 2 √(s1² + s2²) of the largest singular values of the
// correlations ([1]). Above 2 no local model explains it.
//
// [1] Horodecki et al. (1995). "Violating Bell inequality by mixed spin-1/2 states: necessary and sufficient condition". Phys. Lett. A 200, 340.
func (rho DensityMatrix) CHSH() float64 {
	s := rho.correlationStrengths()
	return 2 * math.Hypot(s[0], s[1])
}

// correlationStrengths returns the singular values of the correlations, largest
// first; the fourth is 0.
func (rho DensityMatrix) correlationStrengths() [4]float64 {
	t := rho.Correlations()
	var m [4][4]complex128
	for i := range t {
		for j, x := range t[i] {
			m[i][j] = complex(x, 0)
		}
	}
	return singularValues(m)
}

// errorOf returns (1 − |correlation|)/2, not below 0.
func errorOf(correlation float64) float64 {
	return max(0, (1-math.Abs(correlation))/2)
}
