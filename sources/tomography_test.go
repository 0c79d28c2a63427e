package sources

import (
	"errors"
	"fmt"
	"math/cmplx"
	"strings"
	"testing"
)

// james2001 is the worked example of James et al. (2001), Phys. Rev. A 64,
// 052312.
const james2001 = `alice,bob,counts
H,H,34749
H,V,324
V,V,35805
V,H,444
R,H,16324
R,V,17521
D,V,13441
D,H,16901
D,R,17932
D,D,32028
R,D,15132
H,D,17238
V,D,13171
V,L,17170
H,L,16722
R,L,33586
`

func read2001(t testing.TB) Counts {
	counts, err := ReadCounts(strings.NewReader(james2001))
	if err != nil {
		t.Fatal(err)
	}
	return counts
}

// James et al. (2001), Phys. Rev. A 64, 052312: the matrix and the eigenvalues
// that they print for linear inversion; from memory.
func TestPublishedLinearInversion(t *testing.T) {
	rho, err := read2001(t).LinearInversion()
	if err != nil {
		t.Fatal(err)
	}
	for _, row := range []struct {
		i, j int
		want complex128
	}{
		{0, 0, 0.4872},
		{1, 1, 0.0045},
		{2, 2, 0.0062},
		{3, 3, 0.5020},
		{0, 1, -0.0042 + 0.0114i},
		{0, 3, 0.5192 + 0.0380i},
		{1, 2, 0.0271 - 0.0146i},
	} {
		near(t, fmt.Sprintf("entry %d,%d off", row.i, row.j), cmplx.Abs(rho[row.i][row.j]-row.want), 0, 0.00008) // both parts rounded
		if rho[row.j][row.i] != cmplx.Conj(rho[row.i][row.j]) {
			t.Errorf("entry %d,%d is not the conjugate across the diagonal", row.j, row.i)
		}
	}
	values, _ := eigenHermitian(rho)
	for k, want := range []float64{1.02155, 0.0681238, -0.024396, -0.065274} {
		near(t, fmt.Sprintf("eigenvalue %d", k), values[k], want, 6e-6)
	}
	// Their N is the sum of the first four counts, HH + HV + VV + VH.
	near(t, "HH", real(rho[0][0]), 34749.0/(34749+324+35805+444), 1e-12)
}

// Counts without noise give the state back, whatever the times, accidentals and
// number of settings.
func TestLinearInversionOfExactCounts(t *testing.T) {
	d := normalDrawer(83)
	for _, letters := range []string{"HVDR", "HDRL", "HVDARL"} {
		for range 50 {
			rho := d.state(1 + int(4*d.share()))
			got, err := d.varied(combinations(letters), 100).exact(rho, 1e4).LinearInversion()
			if err != nil {
				t.Fatal(err)
			}
			near(t, "distance", distance(got, rho), 0, 1e-12)
		}
	}
}

// With more settings than 16 it is the least weighted square of what is left:
// no step in any of the sixteen directions makes that smaller.
func TestLinearInversionIsLeastSquares(t *testing.T) {
	counts := normalDrawer(84).varied(combinations("HVDARL"), 10).simulated(Werner(0.7), 100, 3)
	design, err := counts.design()
	if err != nil {
		t.Fatal(err)
	}
	best := design.solve(counts)
	square := func(stokes [parameters]float64) (sum float64) {
		x := DensityMatrix(fromStokes(stokes))
		for _, s := range counts.Settings {
			p, mean := s.pair(), complex128(0)
			for i := range p {
				for j := range p {
					mean += cmplx.Conj(p[i]) * x[i][j] * p[j]
				}
			}
			left := s.Counts - s.Accidentals - s.Exposure*real(mean)
			sum += left * left / s.Exposure
		}
		return sum
	}
	for jk := range best {
		for _, by := range []float64{-1e-2, 1e-2} {
			other := best
			other[jk] += by
			if square(other) <= square(best) {
				t.Errorf("%s changed by %g leaves no more", parameterName(jk), by)
			}
		}
	}
}

// A Stokes parameter is what its Pauli matrices measure.
func TestFromStokes(t *testing.T) {
	d := normalDrawer(85)
	var stokes [parameters]float64
	for jk := range stokes {
		stokes[jk] = d()
	}
	m := DensityMatrix(fromStokes(stokes))
	near(t, "trace", real(traceOf(m)), stokes[0], 1e-14)
	for i, row := range m.Correlations() {
		for j, x := range row {
			near(t, parameterName(4*(i+1)+j+1), x, stokes[4*(i+1)+j+1], 1e-14)
		}
	}
	near(t, "sigma3 of Alice", real(m[0][0]+m[1][1]-m[2][2]-m[3][3]), stokes[12], 1e-14)
	near(t, "sigma1 of Bob", 2*real(m[0][1]+m[2][3]), stokes[1], 1e-14)
}

func TestIncompleteSettings(t *testing.T) {
	const legend = " (sigma1 is D/A, sigma2 R/L, sigma3 H/V); at least 16 independent settings are needed: "
	without := func(letters, a, b string) (c Counts) {
		for _, s := range combinations(letters).Settings {
			if s.Names != [2]string{a, b} {
				c.Settings = append(c.Settings, s)
			}
		}
		return c
	}
	bobs := combinations("HVDR")
	bobs.Settings = append(bobs.Settings[:0:0], bobs.Settings[0:4]...) // Alice at H only
	for _, row := range []struct {
		name   string
		counts Counts
		want   string
	}{
		{
			"no circular analyser", combinations("HVDA"),
			"the 16 settings do not determine sigma2 of Bob, sigma1 x sigma2, sigma2 of Alice, sigma2 x sigma1, sigma2 x sigma2, sigma2 x sigma3, sigma3 x sigma2" +
				legend + "add some with Alice at R or L, Bob at R or L",
		},
		{
			// 35 of 36 are enough, as is any 4 x 4; of 4 x 4 every one is needed.
			"one missing", without("HVDR", "R", "R"),
			"the 15 settings do not determine sigma2 x sigma2" + legend + "add for example Alice at R with Bob at R",
		},
		{
			"one missing, in several parameters", without("HVDR", "D", "V"),
			"the 15 settings do not determine sigma1 of Alice, sigma1 x sigma1, sigma1 x sigma2, sigma1 x sigma3" + legend + "add for example Alice at D with Bob at H",
		},
		{
			"one analyser never moved", bobs,
			"the 4 settings do not determine the number of pairs, sigma1 of Bob, sigma2 of Bob, sigma3 of Bob, sigma1 of Alice, sigma1 x sigma1, sigma1 x sigma2, sigma1 x sigma3, " +
				"sigma2 of Alice, sigma2 x sigma1, sigma2 x sigma2, sigma2 x sigma3, sigma3 of Alice, sigma3 x sigma1, sigma3 x sigma2, sigma3 x sigma3" +
				legend + "add some with Alice at D or A, Alice at R or L",
		},
		{"no settings", Counts{}, "there are no settings; give at least 16 independent ones"},
	} {
		counts := row.counts.exact(Werner(0.9), 1000)
		_, linear := counts.LinearInversion()
		_, likely := counts.MaximumLikelihood()
		for _, err := range []error{linear, likely} {
			var bad *CSVError
			if !errors.As(err, &bad) {
				t.Errorf("%s: got %v", row.name, err)
			} else if err.Error() != row.want {
				t.Errorf("%s:\ngot  %s\nwant %s", row.name, err, row.want)
			}
		}
	}
	if _, err := without("HVDARL", "R", "R").exact(Werner(0.9), 1000).LinearInversion(); err != nil {
		t.Errorf("35 settings: %v", err)
	}
}

// Sixteen settings of wave plates that repeat one in other words are not enough.
func TestRepeatedPlatesAreDependent(t *testing.T) {
	text := "alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts\n"
	for _, a := range []string{"0,0", "45,0", "22.5,45", "22.5,0"} {
		for _, b := range []string{"0,0", "45,0", "22.5,45", "90,0"} { // the last is H again
			text += a + "," + b + ",100\n"
		}
	}
	counts, err := ReadCounts(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	_, err = counts.LinearInversion()
	expect(t, fmt.Sprint(err), "the 16 settings do not determine sigma2 of Bob, sigma1 x sigma2, sigma2 x sigma2, sigma3 x sigma2 "+
		"(sigma1 is D/A, sigma2 R/L, sigma3 H/V); at least 16 independent settings are needed: add some with Bob at R or L")
}

// Accidentals that explain everything leave nothing to make a state of.
func TestNoPairsLeft(t *testing.T) {
	counts := combinations("HVDR").exact(Werner(0.9), 100)
	for i := range counts.Settings {
		counts.Settings[i].Accidentals = counts.Settings[i].Counts + 1
	}
	_, linear := counts.LinearInversion()
	_, likely := counts.MaximumLikelihood()
	for _, err := range []error{linear, likely} {
		expect(t, fmt.Sprint(err), "the accidentals explain all counts: no pairs are left; check the column accidentals: it holds a number for each setting's whole time, not a rate")
	}
}
