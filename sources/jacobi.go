package sources

import (
	"math"
	"math/cmplx"
	"slices"
)

// maxSweeps bounds the sweeps of Jacobi's method. Four by four matrices need
// four to six.
const maxSweeps = 40

// eigenHermitian returns the eigenvalues of the Hermitian matrix a, largest
// first, and the eigenvectors as columns in the same order, by Jacobi's method.
// It makes no allocation.
func eigenHermitian(a [4][4]complex128) (values [4]float64, vectors [4][4]complex128) {
	for i := range vectors {
		vectors[i][i] = 1
	}
	negligible := 1e-20 * frobenius(a)
	for sweep, turned := 0, true; turned && sweep < maxSweeps; sweep++ {
		turned = false
		for p := range 3 {
			for q := p + 1; q < 4; q++ {
				if cmplx.Abs(a[p][q]) <= negligible {
					continue
				}
				turned = true
				r := rotationFor(real(a[p][p]), real(a[q][q]), a[p][q])
				// J†AJ is Hermitian, hence ((AJ)†J)† = (AJ)†J.
				r.turnColumns(&a, p, q)
				a = dagger(a)
				r.turnColumns(&a, p, q)
				a[p][q], a[q][p] = 0, 0
				r.turnColumns(&vectors, p, q)
			}
		}
	}
	for i := range values {
		values[i] = real(a[i][i])
	}
	return sortedEigen(values, vectors)
}

// sortedEigen puts eigenvalues, and with them the columns, in falling order.
func sortedEigen(values [4]float64, vectors [4][4]complex128) ([4]float64, [4][4]complex128) {
	for i := 1; i < 4; i++ {
		for j := i; j > 0 && values[j] > values[j-1]; j-- {
			values[j], values[j-1] = values[j-1], values[j]
			for k := range vectors {
				vectors[k][j], vectors[k][j-1] = vectors[k][j-1], vectors[k][j]
			}
		}
	}
	return values, vectors
}

// singularValues returns the singular values of m, largest first: the lengths of
// its columns once they are orthogonal. Small ones keep their digits, which they
// would lose as square roots of the eigenvalues of m†m. It makes no allocation.
func singularValues(m [4][4]complex128) (values [4]float64) {
	orthogonalColumns(&m, nil, 1e-15)
	for j := range values {
		square, _, _ := columnProducts(&m, j, j)
		values[j] = math.Sqrt(square)
	}
	slices.Sort(values[:])
	slices.Reverse(values[:])
	return values
}

// orthogonalColumns turns the columns of m until their products are within the
// tolerance of 0, relative to their lengths, and those of v, if any, alike:
// one-sided Jacobi. Columns that are orthogonal already stay as they are.
func orthogonalColumns(m, v *[4][4]complex128, tolerance float64) {
	for sweep, turned := 0, true; turned && sweep < maxSweeps; sweep++ {
		turned = false
		for p := range 3 {
			for q := p + 1; q < 4; q++ {
				pp, qq, pq := columnProducts(m, p, q)
				if cmplx.Abs(pq) <= tolerance*math.Sqrt(pp*qq) {
					continue
				}
				turned = true
				r := rotationFor(pp, qq, pq)
				r.turnColumns(m, p, q)
				if v != nil {
					r.turnColumns(v, p, q)
				}
			}
		}
	}
}

// columnProducts returns the squared lengths of columns p and q of m and their
// inner product.
func columnProducts(m *[4][4]complex128, p, q int) (pp, qq float64, pq complex128) {
	for k := range m {
		x, y := m[k][p], m[k][q]
		pp += real(x)*real(x) + imag(x)*imag(x)
		qq += real(y)*real(y) + imag(y)*imag(y)
		pq += cmplx.Conj(x) * y
	}
	return pp, qq, pq
}

// rotation is the unitary turn of two columns, p → c p − s φ q, q → s p + c φ q.
type rotation struct{ cos, sin, phase complex128 }

// rotationFor returns the smaller rotation that makes the Hermitian matrix with
// the entries pp, pq, qq diagonal; pq is not 0.
func rotationFor(pp, qq float64, pq complex128) rotation {
	size := cmplx.Abs(pq)
	tau := (qq - pp) / (2 * size)
	t := math.Copysign(1/(math.Abs(tau)+math.Hypot(1, tau)), tau)
	c := 1 / math.Hypot(1, t)
	return rotation{complex(c, 0), complex(t*c, 0), cmplx.Conj(pq) / complex(size, 0)}
}

func (r rotation) turnColumns(m *[4][4]complex128, p, q int) {
	for k := range m {
		x, y := m[k][p], r.phase*m[k][q]
		m[k][p] = r.cos*x - r.sin*y
		m[k][q] = r.sin*x + r.cos*y
	}
}

// dagger returns the conjugate transpose of m.
func dagger(m [4][4]complex128) (t [4][4]complex128) {
	for i := range m {
		for j := range m[i] {
			t[j][i] = cmplx.Conj(m[i][j])
		}
	}
	return t
}

// frobenius returns the root of the sum of all |m_ij|².
func frobenius(m [4][4]complex128) float64 {
	sum := 0.0
	for i := range m {
		for _, x := range m[i] {
			sum += real(x)*real(x) + imag(x)*imag(x)
		}
	}
	return math.Sqrt(sum)
}
