package sources

import (
	"math"
	"math/cmplx"
	"strings"
	"testing"
)

// The nearest state sigma to a Hermitian h is the one for which no state rho has
// Tr (h - sigma)(rho - sigma) > 0, hence the largest eigenvalue of h - sigma is
// Tr (h - sigma) sigma. Random states serve as a second, blunt check.
func TestNearestPhysicalIsNearest(t *testing.T) {
	d := normalDrawer(20)
	for range 2000 {
		h := unphysical(d)
		sigma, lowest := nearestPhysical(h)
		if lowest >= 0 {
			continue
		}
		checkPhysical(t, sigma)
		var rest [4][4]complex128
		for i := range h {
			for j := range h {
				rest[i][j] = h[i][j] - sigma[i][j]
			}
		}
		values, _ := eigenHermitian(rest)
		near(t, "largest eigenvalue of what is left", values[0], real(traceOf(times(rest, sigma))), 1e-13)
		away := distance(h, sigma)
		for range 20 {
			other := mixed(math.Pow(10, -4*d.share()), sigma, d.state(2))
			if distance(h, other) < away-1e-14 {
				t.Fatalf("%v is nearer to %v than %v", other, h, sigma)
			}
		}
		again, _ := nearestPhysical(sigma)
		near(t, "change by a second projection", distance(again, sigma), 0, 1e-14)
	}
}

// unphysical returns a Hermitian matrix of trace 1, most often with one to three
// negative eigenvalues.
func unphysical(d drawer) DensityMatrix {
	h := hermitianPart(d.matrix(), 1)
	shift := (1 - traceOf(h)) / 4
	for i := range h {
		h[i][i] += shift
	}
	return h
}

func checkPhysical(t *testing.T, rho DensityMatrix) {
	t.Helper()
	near(t, "trace", real(traceOf(rho)), 1, 1e-13)
	if rho != dagger(rho) && distance(rho, dagger(rho)) > 1e-15 {
		t.Fatalf("%v is not Hermitian", rho)
	}
	if values, _ := eigenHermitian(rho); values[3] < -eigenRounding {
		t.Fatalf("eigenvalue %g of %v", values[3], rho)
	}
}

// A physical matrix is left as it is, to the bit, and nothing is said.
func TestNewDensityMatrixKeepsPhysical(t *testing.T) {
	for _, rho := range []DensityMatrix{Werner(0.75), AtWorstState(0.5), Dephased(0.25), Dephased(1)} {
		got, mending, err := NewDensityMatrix(rho)
		if err != nil || got != rho || mending.Any() || mending.Sentence() != "" {
			t.Errorf("%v became %v: %+v, %v", rho, got, mending, err)
		}
	}
}

// Eigenvalues that should be 0 come out a little below or above; that is no
// reason to touch the matrix.
func TestRoundedEigenvaluesAreKept(t *testing.T) {
	d := normalDrawer(21)
	for range 200 {
		rho := d.state(2)
		if got, lowest := nearestPhysical(rho); got != rho || lowest < -eigenRounding {
			t.Fatalf("a state of rank 2 with lowest eigenvalue %g is changed by %g", lowest, distance(got, rho))
		}
	}
}

// What is put right is measured as it was put wrong.
func TestNewDensityMatrixMends(t *testing.T) {
	raw := [4][4]complex128(Werner(0.5))
	for i := range raw {
		for j := range raw {
			raw[i][j] *= 1.008
		}
	}
	got, mending, err := NewDensityMatrix(raw)
	if err != nil || distance(got, Werner(0.5)) > 1e-15 {
		t.Errorf("trace 1.008 gives %v, %v", got, err)
	}
	near(t, "trace off", mending.TraceOff, 0.008, 1e-15)
	expect(t, mending.Sentence(), "the trace of the density matrix was off 1 by 0.008, so all entries were divided by it")

	raw = Werner(0.5)
	raw[0][1] = 0.002 + 0.003i // and 0 across
	got, mending, err = NewDensityMatrix(raw)
	if err != nil || got[0][1] != 0.001+0.0015i || got[1][0] != 0.001-0.0015i {
		t.Errorf("entries across the diagonal become %v and %v, %v", got[0][1], got[1][0], err)
	}
	near(t, "off Hermitian", mending.HermitianOff, math.Sqrt(13)*1e-3, 1e-15)
	expect(t, mending.Sentence(), "entries across the diagonal were off complex conjugates by up to 0.0036, so their mean was taken")

	// Bell-diagonal with shares 1.02, 0, 0, -0.02: the nearest has 1, 0, 0, 0.
	got, mending, err = NewDensityMatrix(bellDiagonal([4]float64{1.02, 0, 0, -0.02}))
	if err != nil || distance(got, bell(1, 1)) > 1e-14 {
		t.Errorf("eigenvalue -0.02 gives %v, %v", got, err)
	}
	near(t, "lowest eigenvalue", mending.LowestEigenvalue, -0.02, 1e-14)
	expect(t, mending.Sentence(), "the density matrix had an eigenvalue of -0.02, which no state has, so the nearest physical state was taken")
}

func expect(t *testing.T, got, want string) {
	t.Helper()
	if got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
}

// Values on the edge of what is put right pass, values beyond do not.
func TestNewDensityMatrixTolerances(t *testing.T) {
	with := func(i, j int, add complex128) [4][4]complex128 {
		raw := [4][4]complex128(Werner(0.5))
		raw[i][j] += add
		return raw
	}
	for _, row := range []struct {
		name string
		raw  [4][4]complex128
		want string // part of the message, empty where it passes
	}{
		{"trace 1.01", with(1, 1, 0.01), ""},
		{"trace 0.99", with(1, 1, -0.01), ""},
		{"trace 1.02", with(1, 1, 0.02), "the trace of the density matrix is 1.02, off 1 by 0.02, and up to 0.01 is put right"},
		{"trace 1+0.02i", with(2, 2, 0.02i), "the trace of the density matrix is 1+0.02i, off 1 by 0.02"},
		{"off by 0.01", with(0, 2, 0.01), ""},
		{"off by 0.02", with(0, 2, 0.02i), "row 0, column 2 of the density matrix is 0+0.02i and row 2, column 0 is 0, off complex conjugates by 0.02"},
		{"imaginary diagonal", [4][4]complex128{{0.5 + 0.009i}, {}, {}, {3: 0.5}}, "row 0, column 0 of the density matrix is 0.5+0.009i; an entry on the diagonal has no imaginary part"},
		{"eigenvalue -0.05", bellDiagonal([4]float64{1.05, 0, 0, -0.05}), ""},
		{"eigenvalue -0.06", bellDiagonal([4]float64{1.06, 0, 0, -0.06}), "the density matrix has an eigenvalue of -0.06, which no state has, and down to -0.05 is put right"},
		{"NaN", with(3, 0, cmplx.NaN()), "row 3, column 0 of the density matrix is not a finite number"},
		{"Inf", with(3, 3, cmplx.Inf()), "row 3, column 3 of the density matrix is not a finite number"},
		{"all zero", [4][4]complex128{}, "the trace of the density matrix is 0, off 1 by 1"},
	} {
		rho, _, err := NewDensityMatrix(row.raw)
		switch {
		case row.want == "" && err != nil:
			t.Errorf("%s: %v", row.name, err)
		case row.want == "":
			checkPhysical(t, rho)
		case err == nil:
			t.Errorf("%s: no error", row.name)
		case !strings.Contains(err.Error(), row.want):
			t.Errorf("%s: %v\nwant %s", row.name, err, row.want)
		}
	}
}
