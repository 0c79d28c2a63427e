package sources

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"
)

const (
	matrixHeader = "alice_nm,bob_nm,share,row,col,re,im\n"
	tangleHeader = "alice_nm,bob_nm,share,tangle\n"
)

// entries returns a matrix as rows of one bin; the upper triangle alone if so.
func entries(bin string, rho [4][4]complex128, upper bool) string {
	var text strings.Builder
	for i := range rho {
		for j := range rho {
			if !upper || j >= i {
				fmt.Fprintf(&text, "%s,%d,%d,%v,%v\n", bin, i, j, real(rho[i][j]), imag(rho[i][j]))
			}
		}
	}
	return text.String()
}

func TestReadSpectralMap(t *testing.T) {
	state := normalDrawer(4).state(3)
	m := mustReadMap(t, "\ufeff"+strings.ReplaceAll(matrixHeader+
		entries("1550.4,1549.6,0.25", state, false)+
		entries(" 1549.6 , 1550.40 ,0.745", Werner(0.9), true)+
		"1549.6,1549.6,0,0,0,0,0\n\n", "\n", "\r\n"))
	if fmt.Sprint(m.CentreNm, m.EdgeNm) != "[[1549.6 1550.4] [1549.6 1550.4]] [[1549.2 1550 1550.8] [1549.2 1550 1550.8]]" {
		t.Errorf("bins at %v between %v", m.CentreNm, m.EdgeNm)
	}
	for _, x := range []struct {
		bin   SpectralBin
		share float64
		rho   DensityMatrix
	}{{m.Bins[1][0], 0.25 / 0.995, state}, {m.Bins[0][1], 0.745 / 0.995, Werner(0.9)}, {m.Bins[0][0], 0, DensityMatrix{}}, {m.Bins[1][1], 0, DensityMatrix{}}} {
		if math.Abs(x.bin.Share-x.share) > 1e-15 || !sameMatrix(x.bin.Rho, x.rho, 1e-15) {
			t.Errorf("got %+v, want a share of %g of %v", x.bin, x.share, x.rho)
		}
		if want := x.rho.Tangle(); x.share > 0 && math.Abs(x.bin.Tangle-want) > 1e-12 || x.share == 0 && !math.IsNaN(x.bin.Tangle) {
			t.Errorf("tangle %g, want %g", x.bin.Tangle, want)
		}
	}
	if m.Tangles || len(m.Mended) > 0 || len(m.Doubts) > 0 || len(m.Told) != 1 || m.Told[0] != "The shares add up to 0.995; all were divided by it." {
		t.Errorf("said %q, doubted %q, mended %v", m.Told, m.Doubts, m.Mended)
	}
}

func sameMatrix(a, b [4][4]complex128, within float64) bool {
	for i := range a {
		for j := range a[i] {
			if d := a[i][j] - b[i][j]; math.Hypot(real(d), imag(d)) > within {
				return false
			}
		}
	}
	return true
}

func TestReadSpectralMapOfTangles(t *testing.T) {
	m := mustReadMap(t, "tangle,share,bob_nm,alice_nm\n0.81,0.5,810,1550\n0.64,0.5,811,1548\n0,0,811,1550\n")
	if !m.Tangles || len(m.Told) != 1 || !strings.Contains(m.Told[0], "no value at worst") {
		t.Errorf("said %q", m.Told)
	}
	bin := m.Bins[1][0]
	if bin.Tangle != 0.81 || bin.Share != 0.5 || !math.IsNaN(m.Bins[0][0].Tangle) || !math.IsNaN(m.Bins[1][1].Tangle) {
		t.Errorf("bins are %+v", m.Bins)
	}
	if c := bin.Rho.Concurrence(); math.Abs(c-0.9) > 1e-12 {
		t.Errorf("the nominal state has the concurrence %g, want 0.9", c)
	}
	if most := m.MostConcurrence([2]int{}, [2]int{1, 1}); math.Abs(most-0.85) > 1e-15 {
		t.Errorf("concurrence at most %g, want 0.85", most)
	}
	// Werner states of the mean concurrence: e = (1 − C)/3.
	if e := m.Whole().StateError; math.Abs(e[0]-0.05) > 1e-15 || math.Abs(e[1]-0.05) > 1e-15 {
		t.Errorf("errors %v, want 0.05", e)
	}
}

func TestSpectralMapsMended(t *testing.T) {
	off, negative := Werner(0.8), bell(1, 1.02)
	off[0][0] += 0.004
	m := mustReadMap(t, matrixHeader+entries("1549,1550,0.5", off, false)+entries("1550,1550,0.5", negative, false))
	if len(m.Mended) != 2 || m.Mended[0].Bin != [2]int{0, 0} || math.Abs(m.Mended[0].TraceOff-0.004) > 1e-12 || math.Abs(m.Mended[1].LowestEigenvalue+0.01) > 1e-12 {
		t.Errorf("mended %+v", m.Mended)
	}
	const want = "A density matrix was not one of a state in 2 bins, most so in the bin of Alice's 1550 nm and Bob's 1550 nm: " +
		"the density matrix had an eigenvalue of -0.01, which no state has, so the nearest physical state was taken."
	if len(m.Told) != 2 || m.Told[0] != want || m.Told[1] != "Bob has a single bin, and the map does not tell its width." {
		t.Errorf("said %q", m.Told)
	}
}

func TestUnevenBinsAreDoubted(t *testing.T) {
	for text, doubted := range map[string]bool{
		tangleHeader + "1549,1550,0.5,1\n1550,1550,0.3,1\n1552,1550,0.2,1\n":   true,
		tangleHeader + "1549,1550,0.5,1\n1550,1550,0.3,1\n1551.4,1550,0.2,1\n": false,
	} {
		if m := mustReadMap(t, text); len(m.Doubts) > 0 != doubted {
			t.Errorf("%q: doubts %q", text, m.Doubts)
		}
	}
}

func TestBadSpectralMaps(t *testing.T) {
	far := Werner(0.8)
	far[1][1] += 0.3
	var many strings.Builder
	for k := range 101 {
		fmt.Fprintf(&many, "%d,1550,0.01,0.8\n", 1500+k)
	}
	for _, x := range []struct{ file, want string }{
		{"", "the file is empty; a spectral map has the header alice_nm,bob_nm,share,row,col,re,im or alice_nm,bob_nm,share,tangle, in any order"},
		{tangleHeader, "the spectral map has no bin; give rows for each pair of bins that has pairs"},
		{"alice_nm,bob_nm,share\n", "line 1: the column tangle is missing; a spectral map has the header alice_nm,bob_nm,share,row,col,re,im or alice_nm,bob_nm,share,tangle, in any order"},
		{"alice_nm,bob_nm,share,row,col,re\n", "line 1: the column im is missing; a spectral map has the header alice_nm,bob_nm,share,row,col,re,im or alice_nm,bob_nm,share,tangle, in any order"},
		{"alice_nm,bob_nm,share,row,col,re,tangle\n", "line 1, column 34: tangle belongs to another form of header than the columns beside it; a spectral map has the header alice_nm,bob_nm,share,row,col,re,im or alice_nm,bob_nm,share,tangle, in any order"},
		{"alice_nm;bob_nm;share;tangle\n", "line 1: columns are separated by semicolons; separate them by commas, and write decimal points"},
		{tangleHeader + "1550,1550,1\n", "line 2: the row has 3 values, and the header has 4; give every value; write 0 where it is zero"},
		{tangleHeader + "1,550,1550,1,0.8\n", "line 2: the row has 5 values, and the header has 4; write decimal points, not commas, and no comma at the end"},
		{tangleHeader + "1.55,1550,1,0.8\n", "line 2, column 1: 1.55 is outside 100 to 10000; wavelengths are in nm"},
		{tangleHeader + "1550,x,1,0.8\n", "line 2, column 6: x is not a number; write it like -0.0123 or 1.2e-3"},
		{tangleHeader + "1550,1550,-0.1,0.8\n", "line 2, column 11: -0.1 is below 0; a share of the pairs is 0 or more"},
		{tangleHeader + "1550,1550,NaN,0.8\n", "line 2, column 11: NaN is not a finite number; give the measured value"},
		{tangleHeader + "1550,1550,1,1.2\n", "line 2, column 13: 1.2 is outside 0 to 1; a tangle is the concurrence squared, 0 to 1"},
		{tangleHeader + "1550,1550,\"0,5\",1\n", "line 2, column 11: 0,5 is not a number; write a decimal point: 0.5"},
		{tangleHeader + "1550,1550,1,0.8\n1550.0,1550,1,0.8\n", "line 3: the bin of Alice's 1550 nm and Bob's 1550 nm was given already on line 2; remove one of the two"},
		{tangleHeader + "1550,1550,0,0.8\n", "all shares are 0; shares are parts of all the pairs that the source's pair rate counts, and add up to 1"},
		{tangleHeader + "1550,1550,60,0.8\n1551,1550,40.5,0.8\n", "the shares add up to 100.5, not to 1; per cent? divide them by 100"},
		{tangleHeader + "1550,1550,0.6,0.8\n1551,1550,0.2,0.8\n", "the shares add up to 0.8, not to 1; shares are parts of all the pairs that the source's pair rate counts, and add up to 1: divide all by 0.8, if the whole map was measured"},
		{tangleHeader + "1550,1550,1e308,0.8\n1551,1550,1e308,0.8\n", "the shares are too large; shares are parts of all the pairs that the source's pair rate counts, and add up to 1"},
		{tangleHeader + many.String(), "101 different wavelengths in alice_nm, and a spectral map has at most 100; take wider bins, and write the same bin the same way in every row"},
		{tangleHeader + "1550,1550,0.5,0.8\n1551,1550,0.3,0.8\n1551.0004,1551,0.2,0.8\n", "line 4, column 1: 1551.0004 lies next to 1551, far nearer than bins lie elsewhere; write the same bin the same way in every row"},
		{matrixHeader + "1550,1550,1,4,0,0.5,0\n", "line 2, column 13: 4 is not a whole number from 0 to 3; rows and columns count from 0 in the order HH, HV, VH, VV"},
		{matrixHeader + "1550,1550,1,0,0,0.5,\n", "line 2, column 21: an empty value is not a number; give every value; write 0 where it is zero"},
		{matrixHeader + "1550,1550,1,0,0,0.5,0\n1550,1550,1,0,0,0.5,0\n", "line 3: row 0, column 0 of the bin of Alice's 1550 nm and Bob's 1550 nm was given already on line 2; remove one of the two"},
		{matrixHeader + "1550,1550,1,0,0,0.5,0\n1550,1550,0.9,0,1,0,0\n", "line 3, column 11: 0.9 is not the share that the bin of Alice's 1550 nm and Bob's 1550 nm has on line 2; repeat the bin's share in each of its rows"},
		{matrixHeader + entries("1550,1550,1", Werner(0.8), true)[len("1550,1550,1,0,0,0.45,0\n"):], "line 2: the bin of Alice's 1550 nm and Bob's 1550 nm: entries are missing (row,col): 0,0; give all sixteen, or the ten of the upper triangle (col not below row)"},
		{matrixHeader + entries("1550,1550,1", far, true), "line 2: the bin of Alice's 1550 nm and Bob's 1550 nm: the trace of the density matrix is 1.3, off 1 by 0.3, and up to 0.01 is put right: check its diagonal, or divide all entries by the trace"},
	} {
		_, err := ReadSpectralMap(strings.NewReader(x.file))
		if err == nil || err.Error() != x.want {
			t.Errorf("%.80q:\n got  %v\n want %s", x.file, err, x.want)
		}
	}
}

func TestTooLargeSpectralMaps(t *testing.T) {
	rows := strings.Repeat("1550,1550,1,0,0,0.5,0\n", 3)
	long := matrixHeader + strings.Repeat(" ", spectralMostSize)
	if _, err := ReadSpectralMap(strings.NewReader(long)); err == nil || err.Error() != "the file is larger than 16777216 bytes; a spectral map has at most 160000 rows; is this the right file?" {
		t.Errorf("got %v", err)
	}
	form := spectralForms[0]
	form.maxRows = 2
	if _, err := readTable(strings.NewReader(matrixHeader+rows), form, spectralForms[1]); err == nil || !strings.HasPrefix(err.Error(), "line 4: too many rows: a spectral map has at most 2") {
		t.Errorf("got %v", err)
	}
}

// Whatever the file, it is read or refused with a place; what is read has shares
// that add up to 1, physical states, and bands of finite figures.
func FuzzReadSpectralMap(f *testing.F) {
	f.Add([]byte(matrixHeader + entries("1550.4,1549.6,0.25", Werner(0.8), false) + entries("1549.6,1550.4,0.745", Werner(0.9), true)))
	f.Add([]byte(tangleHeader + "1550,1550,0.5,0.8\n1551,1550,0.3,0.8\n1551.4,1551,0.2,0.8\n"))
	f.Add([]byte("alice_nm;bob_nm;share;tangle\n1550;1550;0,5;0\n"))
	f.Add([]byte("tangle,share,bob_nm,alice_nm\n1e-320,1,1e2,1e4\n0,0,1,1\n"))
	f.Add([]byte(tangleHeader + "1550,1550,1e-320,0.8\n1551,1550,1,1e-310\n"))
	f.Fuzz(func(t *testing.T, text []byte) {
		m, err := ReadSpectralMap(strings.NewReader(string(text)))
		if err != nil {
			var bad *CSVError
			if !errors.As(err, &bad) || bad.Problem == "" || bad.Line < 0 || bad.Column < 0 || len(err.Error()) > 1000 {
				t.Fatalf("%#v", err)
			}
			return
		}
		sum := 0.0
		for _, row := range m.Bins {
			for _, bin := range row {
				if sum += bin.Share; bin.Share > 0 {
					checkPhysical(t, bin.Rho)
				}
			}
		}
		if math.Abs(sum-1) > 1e-12 {
			t.Fatalf("the shares add up to %v", sum)
		}
		last := [2]int{len(m.CentreNm[0]) - 1, len(m.CentreNm[1]) - 1}
		for _, b := range []Band{m.Whole(), m.Band([2]int{}, [2]int{}), m.Band(last, last)} {
			e := b.StateError
			if b.Share > 0 && !(e[0] >= 0 && e[0] <= e[1] && e[1] <= 0.5) || b.Share < 0 || !(b.WidthNm(0) >= 0 && b.WidthNm(1) >= 0) {
				t.Fatalf("a band of %+v", b)
			}
		}
	})
}
