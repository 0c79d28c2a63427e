package sources

import (
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// embed returns the real matrix (Re, -Im; Im, Re) that acts as m does: a
// Hermitian m gives a symmetric one, and all eigenvalues and singular values
// come twice.
func embed(m [4][4]complex128) *mat.Dense {
	e := mat.NewDense(8, 8, nil)
	for i := range m {
		for j, x := range m[i] {
			e.Set(i, j, real(x))
			e.Set(i+4, j+4, real(x))
			e.Set(i, j+4, -imag(x))
			e.Set(i+4, j, imag(x))
		}
	}
	return e
}

func symmetric(e *mat.Dense) *mat.SymDense {
	n, _ := e.Dims()
	s := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			s.SetSym(i, j, e.At(i, j))
		}
	}
	return s
}

func (d drawer) matrix() (m [4][4]complex128) {
	for i := range m {
		for j := range m {
			m[i][j] = d.complex()
		}
	}
	return m
}

// The eigenvalues against gonum's of the real embedding; the vectors by
// A V = V diag and V†V = 1.
func TestEigenHermitian(t *testing.T) {
	d := normalDrawer(1)
	for n := range 2000 {
		a := d.matrix()
		a = hermitianPart(a, 1)
		if n%3 == 0 { // repeated eigenvalues
			a = d.turned(bellDiagonal([4]float64{0.4, 0.4, 0.1, 0.1}))
		}
		values, v := eigenHermitian(a)
		var reference mat.EigenSym
		if !reference.Factorize(symmetric(embed(a)), false) {
			t.Fatal("no reference")
		}
		for k, want := range reference.Values(nil) { // rising, each twice
			near(t, "eigenvalue", values[3-k/2], want, 1e-13)
		}
		if off := distance(times(dagger(v), v), identity()); off > 1e-13 {
			t.Fatalf("eigenvectors off orthonormal by %g", off)
		}
		if off := distance(fromEigen(values, v), a); off > 1e-13 {
			t.Fatalf("eigenvectors restore the matrix but for %g", off)
		}
	}
}

func identity() [4][4]complex128 {
	return [4][4]complex128{{0: 1}, {1: 1}, {2: 1}, {3: 1}}
}

func TestSingularValues(t *testing.T) {
	d := normalDrawer(2)
	for range 2000 {
		m := d.matrix()
		got := singularValues(m)
		var reference mat.SVD
		if !reference.Factorize(embed(m), mat.SVDNone) {
			t.Fatal("no reference")
		}
		for k, want := range reference.Values(nil) { // falling, each twice
			near(t, "singular value", got[k/2], want, 1e-13)
		}
	}
}

// U diag(1, 1e-5, 1e-10, 1e-15) keeps the small ones, whose squares are lost
// beside 1.
func TestSingularValuesKeepSmallOnes(t *testing.T) {
	d := normalDrawer(3)
	for range 200 {
		_, m := eigenHermitian(hermitianPart(d.matrix(), 1))
		want := [4]float64{1, 1e-5, 1e-10, 1e-15}
		for i := range m {
			for j := range m {
				m[i][j] *= complex(want[j], 0)
			}
		}
		for k, got := range singularValues(m) {
			near(t, "singular value over its size", got/want[k], 1, 1e-13)
		}
	}
}

func TestEigenOfNaNEnds(t *testing.T) {
	m := [4][4]complex128{{cmplx.NaN()}}
	if values, _ := eigenHermitian(m); !math.IsNaN(values[0] + values[1] + values[2] + values[3]) {
		t.Errorf("eigenvalues of NaN are %v", values)
	}
	if values := singularValues(m); !math.IsNaN(values[0] + values[1] + values[2] + values[3]) {
		t.Errorf("singular values of NaN are %v", values)
	}
}
