package sources

import (
	"fmt"
	"math/cmplx"
)

// DensityMatrix is the state of two photons' polarisations in the order HH, HV,
// VH, VV, Alice's photon first. NewDensityMatrix makes one that is physical:
// Hermitian, of trace 1, without negative eigenvalues.
type DensityMatrix [4][4]complex128

// How far a matrix may be off and still be put right. The lowest eigenvalue of
// a measured matrix printed with three digits can be a few hundredths below 0.
const (
	maxTraceOff      = 0.01
	maxHermitianOff  = 0.01
	lowestEigenvalue = -0.05
	toleranceSlack   = 1e-12 // 1.01 − 1 is more than 0.01 in binary
)

// NewDensityMatrix returns the physical state nearest to raw, whose entries may
// be off a little as printed or measured ones are, and how far raw was off. It
// takes the Hermitian part, divides by the trace and, if an eigenvalue is
// negative, takes the nearest physical state.
//
// A trace off 1 by more than 0.01, entries off Hermitian by more than 0.01, or
// an eigenvalue below −0.05 are errors that say by how much raw fails.
func NewDensityMatrix(raw [4][4]complex128) (DensityMatrix, Mending, error) {
	var mending Mending
	trace := complex128(0)
	for i := range raw {
		for j, x := range raw[i] {
			if cmplx.IsNaN(x) || cmplx.IsInf(x) {
				return DensityMatrix{}, mending, fmt.Errorf("row %d, column %d of the density matrix is not a finite number", i, j)
			}
		}
		trace += raw[i][i]
	}
	mending.TraceOff = cmplx.Abs(trace - 1)
	if mending.TraceOff > maxTraceOff+toleranceSlack {
		return DensityMatrix{}, mending, fmt.Errorf("the trace of the density matrix is %s, off 1 by %.2g, and up to %g is put right: "+
			"check its diagonal, or divide all entries by the trace", complexText(trace), mending.TraceOff, maxTraceOff)
	}
	i, j, off := worstHermitian(raw)
	mending.HermitianOff = off
	if off > maxHermitianOff+toleranceSlack {
		return DensityMatrix{}, mending, hermitianError(raw, i, j, off)
	}
	state, lowest := nearestPhysical(hermitianPart(raw, real(trace)))
	mending.LowestEigenvalue = lowest
	if lowest < lowestEigenvalue-toleranceSlack {
		return DensityMatrix{}, mending, fmt.Errorf("the density matrix has an eigenvalue of %.3g, which no state has, and down to %g is put right: "+
			"check the signs and the order HH, HV, VH, VV of its entries", lowest, lowestEigenvalue)
	}
	return state, mending, nil
}

// worstHermitian returns the place and size of the largest |ρ_ij − ρ_ji*|.
func worstHermitian(raw [4][4]complex128) (row, column int, off float64) {
	for i := range raw {
		for j := i; j < 4; j++ {
			if d := cmplx.Abs(raw[i][j] - cmplx.Conj(raw[j][i])); d > off {
				row, column, off = i, j, d
			}
		}
	}
	return row, column, off
}

func hermitianError(raw [4][4]complex128, i, j int, off float64) error {
	if i == j {
		return fmt.Errorf("row %d, column %d of the density matrix is %s; an entry on the diagonal has no imaginary part", i, j, complexText(raw[i][j]))
	}
	return fmt.Errorf("row %d, column %d of the density matrix is %s and row %d, column %d is %s, off complex conjugates by %.2g, and up to %g is put right: "+
		"check both, and the sign of their imaginary parts", i, j, complexText(raw[i][j]), j, i, complexText(raw[j][i]), off, maxHermitianOff)
}

// hermitianPart returns (raw + raw†)/2 divided by its trace.
func hermitianPart(raw [4][4]complex128, trace float64) (rho DensityMatrix) {
	for i := range raw {
		for j := range raw[i] {
			rho[i][j] = (raw[i][j] + cmplx.Conj(raw[j][i])) / complex(2*trace, 0)
		}
	}
	return rho
}

// complexText writes x as a person would: without an imaginary part of 0.
func complexText(x complex128) string {
	if imag(x) == 0 {
		return fmt.Sprintf("%.4g", real(x))
	}
	return fmt.Sprintf("%.4g%+.4gi", real(x), imag(x))
}
