package sources

import (
	"math"
	"math/cmplx"
)

// Concurrence returns the concurrence, 0 (separable) to 1: max(0, λ1 − λ2 − λ3 − λ4)
// of the singular values λ of
//
//	τ_ij = <v_i|ṽ_j>,  ṽ = σ2⊗σ2 v*
//
// where v are the eigenvectors, each of length √eigenvalue ([1]). The λ are also
// the square roots of the eigenvalues of ρ ρ̃, but computed so they would keep
// half the digits only. Good to 1e-10, pure states included.
//
// [1] Wootters (1998). "Entanglement of formation of an arbitrary state of two qubits". Phys. Rev. Lett. 80, 2245.
func (rho DensityMatrix) Concurrence() float64 {
	v := rho.weightedEigenvectors()
	var tau [4][4]complex128
	for i := range tau {
		for j := range tau {
			// The conjugate of τ, which has the same singular values.
			tau[i][j] = v[1][i]*v[2][j] + v[2][i]*v[1][j] - v[0][i]*v[3][j] - v[3][i]*v[0][j]
		}
	}
	l := singularValues(tau)
	return min(1, max(0, l[0]-l[1]-l[2]-l[3]))
}

// weightedEigenvectors returns the eigenvectors as columns, each of length
// √eigenvalue.
func (rho DensityMatrix) weightedEigenvectors() [4][4]complex128 {
	values, v := eigenHermitian(rho)
	for j, value := range values {
		length := 0.0
		if !(value < eigenRounding) {
			length = math.Sqrt(value)
		}
		for i := range v {
			v[i][j] *= complex(length, 0)
		}
	}
	return v
}

// Tangle returns the concurrence squared, 0 to 1.
func (rho DensityMatrix) Tangle() float64 {
	c := rho.Concurrence()
	return c * c
}

// EntanglementOfFormation returns h((1 + √(1 − C²))/2), 0 to 1, C the
// concurrence and h the binary entropy ([1]).
//
// [1] Wootters (1998). "Entanglement of formation of an arbitrary state of two qubits". Phys. Rev. Lett. 80, 2245.
func (rho DensityMatrix) EntanglementOfFormation() float64 {
	c := rho.Concurrence()
	root := math.Sqrt((1 - c) * (1 + c))
	return entropyTerm(c*c/(2*(1+root))) + entropyTerm((1+root)/2)
}

// Fidelity returns the fidelity to the nearest maximally entangled state, 1/4
// to 1: the largest eigenvalue of the real part of ρ in the magic basis ([1]),
// whose real combinations are the maximally entangled states.
//
// [1] Bennett et al. (1996). "Mixed-state entanglement and quantum error correction". Phys. Rev. A 54, 3824.
func (rho DensityMatrix) Fidelity() float64 {
	const r = math.Sqrt2 / 2
	magic := [4][4]complex128{{r, 0, 0, r}, {1i * r, 0, 0, -1i * r}, {0, 1i * r, 1i * r, 0}, {0, r, -r, 0}}
	var m [4][4]complex128
	for a := range m {
		for b := range m {
			sum := complex128(0)
			for i := range rho {
				for j := range rho {
					sum += cmplx.Conj(magic[a][i]) * rho[i][j] * magic[b][j]
				}
			}
			m[a][b] = complex(real(sum), 0)
		}
	}
	values, _ := eigenHermitian(m)
	return min(1, values[0])
}

// FidelityWith returns the fidelity (Tr √(√ρ σ √ρ))² of the two states, 0 to 1
// ([1]), as the squared sum of the singular values of √ρ √σ.
//
// [1] Jozsa (1994). "Fidelity for mixed quantum states". J. Mod. Opt. 41, 2315.
func (rho DensityMatrix) FidelityWith(sigma DensityMatrix) float64 {
	v, w := rho.weightedEigenvectors(), sigma.weightedEigenvectors()
	var overlaps [4][4]complex128
	for i := range overlaps {
		for j := range overlaps {
			for k := range v {
				overlaps[i][j] += cmplx.Conj(v[k][i]) * w[k][j]
			}
		}
	}
	l := singularValues(overlaps)
	sum := l[0] + l[1] + l[2] + l[3]
	return min(1, sum*sum)
}

// Purity returns Tr ρ², 1/4 to 1.
func (rho DensityMatrix) Purity() float64 {
	norm := frobenius(rho)
	return norm * norm
}

// LinearEntropy returns (4/3)(1 − Tr ρ²), 0 (pure) to 1.
func (rho DensityMatrix) LinearEntropy() float64 {
	return max(0, 4.0/3*(1-rho.Purity()))
}

// Entropy returns von Neumann's entropy −Tr ρ log2 ρ in bits, 0 (pure) to 2.
func (rho DensityMatrix) Entropy() float64 {
	values, _ := eigenHermitian(rho)
	sum := 0.0
	for _, p := range values {
		sum += entropyTerm(p)
	}
	return sum
}

// entropyTerm returns −p log2 p; 0 where p is 0 or, by rounding, outside 0 to 1.
func entropyTerm(p float64) float64 {
	if p <= 0 || p >= 1 {
		return 0
	}
	return -p * math.Log2(p)
}
