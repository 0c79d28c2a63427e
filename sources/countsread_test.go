package sources

import (
	"errors"
	"io"
	"math"
	"strings"
	"testing"
	"testing/iotest"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
)

func TestReadCounts(t *testing.T) {
	const r = math.Sqrt2 / 2
	h, d, right := Analyser{1, 0}, Analyser{r, r}, Analyser{r, -1i * r}
	for _, row := range []struct {
		name, text string
		want       []Setting
	}{
		{"plain", "alice,bob,counts\nH,D,5\n\nR,H,0\n", []Setting{
			{[2]string{"H", "D"}, h, d, 5, 0, 1, 2},
			{[2]string{"R", "H"}, right, h, 0, 0, 1, 4},
		}},
		{"all columns, in another order", "efficiency,counts,seconds,bob,accidentals,alice\n0.5,7,30,H,1.25,D\n", []Setting{
			{[2]string{"D", "H"}, d, h, 7, 1.25, 15, 2},
		}},
		{"seconds alone", "alice,bob,counts,seconds\r\nH,H,7,0.5\r\n", []Setting{
			{[2]string{"H", "H"}, h, h, 7, 0, 0.5, 2},
		}},
		{"wave plates", "alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts\n-0,0,90,-180,3\n", []Setting{
			{[2]string{"hwp 0 qwp 0", "hwp 90 qwp -180"}, h, Analyser{-1, 0}, 3, 0, 1, 2},
		}},
	} {
		got, err := ReadCounts(strings.NewReader(row.text))
		if err != nil {
			t.Errorf("%s: %v", row.name, err)
			continue
		}
		if diff := cmp.Diff(Counts{row.want}, got, cmp.AllowUnexported(Setting{}), cmpopts.EquateEmpty()); diff != "" {
			t.Errorf("%s: %s", row.name, diff)
		}
	}
}

func TestReadCountsErrors(t *testing.T) {
	const (
		letters = "alice,bob,counts\n"
		all     = "alice,bob,counts,accidentals,seconds,efficiency\n"
		plates  = "alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts\n"
		headers = "a table of tomography counts has the header alice,bob,counts[,accidentals][,seconds][,efficiency] or " +
			"alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts[,accidentals][,seconds][,efficiency], in any order, those in brackets where wanted"
		asCounted = "give the counts as they were counted, accidentals not subtracted"
		notLetter = " is not one of the letters H V D A R L; "
	)
	for _, row := range []struct{ name, text, want string }{
		{"empty", "", "the file is empty; " + headers},
		{"density matrix", "row,col,re,im\n", "line 1, column 1: row is not a known column; " + headers},
		{"both forms", "alice,bob,alice_hwp_deg,counts\n", "line 1, column 11: alice_hwp_deg belongs to another form of header than the columns beside it; " + headers},
		{"missing plate", "alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,counts\n", "line 1: the column bob_qwp_deg is missing; " + headers},
		{"semicolons", "alice;bob;counts\nH;V;1\n", "line 1: columns are separated by semicolons; separate them by commas, and write decimal points"},
		{"header only", letters, "no coincidences were counted in any setting; check the file, or count for longer"},
		{"nothing counted", letters + "H,H,0\nV,V,0\n", "no coincidences were counted in any setting; check the file, or count for longer"},
		{"ragged", letters + "H,H,1\nH,V\n", "line 3: the row has 2 values, and the header has 3; give every value; write 0 where it is zero"},
		{"decimal comma", all + "H,H,1,0,0,5,1\n", "line 2: the row has 7 values, and the header has 6; write decimal points, not commas, and no comma at the end"},
		{"unknown letter", letters + "H,X,1\n", "line 2, column 3: X" + notLetter + "D and A are at +45 and -45 degrees, R and L are circular"},
		{"plus", letters + "+,H,1\n", "line 2, column 1: +" + notLetter + "D and A are at +45 and -45 degrees, R and L are circular"},
		{"small letter", letters + "h,H,1\n", "line 2, column 1: h" + notLetter + "write it as a capital: H"},
		{"both in one column", letters + "HV,,1\n", "line 2, column 1: HV" + notLetter + "give one letter in the column alice and one in the column bob"},
		{"no letter", letters + "H,,1\n", "line 2, column 3: an empty value" + notLetter + "D and A are at +45 and -45 degrees, R and L are circular"},
		{"angle for a letter", letters + "22.5,H,1\n", "line 2, column 1: 22.5" + notLetter + "angles of wave plates stand in the columns alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg"},
		{"negative counts", letters + "H,H,-5\n", "line 2, column 5: -5 is below 0; " + asCounted},
		{"fractional counts", letters + "H,H,5.5\n", "line 2, column 5: 5.5 is not a whole number; give the counts as they were counted: not per second, accidentals not subtracted"},
		{"NaN counts", letters + "H,H,NaN\n", "line 2, column 5: NaN is not a finite number; give the measured value"},
		{"thousands", letters + "H,H,\"34,749\"\n", "line 2, column 5: 34,749 is not a number; write thousands without a comma: 34749"},
		{"too many counts", letters + "H,H,1e16\n", "line 2, column 5: 1e16 is too large; check the exponent"},
		{"negative accidentals", all + "H,H,1,-1,1,1\n", "line 2, column 7: -1 is below 0; give the number of accidentals expected among the counts"},
		{"too many accidentals", all + "H,H,1,1e16,1,1\n", "line 2, column 7: 1e16 is too large; check the exponent"},
		{"no time", all + "H,H,1,0,0,1\n", "line 2, column 9: 0 is not above 0; give the seconds counted at this setting"},
		{"too short", all + "H,H,1,0,1e-10,1\n", "line 2, column 9: 1e-10 is not a time that anybody counts for; give the seconds counted at this setting"},
		{"no efficiency", all + "H,H,1,0,1,0\n", "line 2, column 11: 0 is not above 0; leave the setting out if nothing could be counted there"},
		{"per cent", all + "H,H,1,0,1,85\n", "line 2, column 11: 85 is outside 1e-06 to 1; efficiency is a fraction: 0.85"},
		{"relative efficiency", all + "H,H,1,0,1,1.02\n", "line 2, column 11: 1.02 is outside 1e-06 to 1; only ratios matter: divide all efficiencies by the largest"},
		{"copied row", letters + "H,H,5\nH,V,1\nH,H,5\n", "line 4, column 1: the setting H, H was given already on line 2 (counts 5 there, 5 here); remove one of the two"},
		{"setting twice", "counts,alice,bob\n5,H,H\n1,H,V\n6,H,H\n", "line 4, column 3: the setting H, H was given already on line 2 (counts 5 there, 6 here); add them up in one row: counts, accidentals, and seconds too, 1 each where none are given"},
		{"same counts, another time", "alice,bob,counts,seconds\nH,H,5,1\nH,H,5,2\n", "line 3, column 1: the setting H, H was given already on line 2 (counts 5 there, 5 here); add them up in one row: counts, accidentals, and seconds too, 1 each where none are given"},
		{"plates twice", plates + "0,0,45,0,5\n-0,0,45.0,0,6\n", "line 3, column 1: the setting hwp 0 qwp 0, hwp 45 qwp 0 was given already on line 2 (counts 5 there, 6 here); add them up in one row: counts, accidentals, and seconds too, 1 each where none are given"},
		{"turns", plates + "0,0,450,0,5\n", "line 2, column 5: 450 is outside -360 to 360; angles of fast axes are in degrees from H"},
		{"radians", plates + "0,0,0,0,5\n0,0,0.7854,0,6\n0.3927,0,1.5708,3.1416,6\n", "line 3, column 5: 0.7854 looks like radians: all angles of the file lie within 3.2; give angles in degrees: 45"},
		{"word for an angle", plates + "0,x,45,0,5\n", "line 2, column 3: x is not a number; write it like -0.0123 or 1.2e-3"},
		{"too many rows", letters + strings.Repeat("H,H,1\n", 4097), "line 4098: too many rows: a table of tomography counts has at most 4096 below the header; remove the others"},
	} {
		got, err := ReadCounts(strings.NewReader(row.text))
		var bad *CSVError
		switch {
		case err == nil:
			t.Errorf("%s: no error", row.name)
		case !errors.As(err, &bad):
			t.Errorf("%s: %v does not say where", row.name, err)
		case err.Error() != row.want:
			t.Errorf("%s:\ngot  %s\nwant %s", row.name, err, row.want)
		}
		if got.Settings != nil {
			t.Errorf("%s: some counts are returned", row.name)
		}
	}
}

// Small angles that are set in degrees are not taken for radians, nor are
// radians among larger angles found out.
func TestAnglesThatAreNotRadians(t *testing.T) {
	for _, angles := range []string{"0,0,0,0", "0,0.5,1,-3", "0,22.5,0.7854,0"} {
		text := "alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts\n" + angles + ",1\n"
		if _, err := ReadCounts(strings.NewReader(text)); err != nil {
			t.Errorf("%s: %v", angles, err)
		}
	}
}

func TestReadCountsPassesReadErrors(t *testing.T) {
	broken := errors.New("disk gone")
	_, err := ReadCounts(io.MultiReader(strings.NewReader("alice,bob"), iotest.ErrReader(broken)))
	if !errors.Is(err, broken) {
		t.Errorf("got %v", err)
	}
}

// Whatever the file, it is read or refused with a place; what is read makes a
// physical state, or an error says why not.
func FuzzReadCounts(f *testing.F) {
	f.Add([]byte(james2001))
	f.Add([]byte(combinations("HVDR").simulated(Werner(0.9), 20, 1).written()))
	f.Add([]byte("\ufeffalice,bob,counts,accidentals,seconds,efficiency\r\nH,H,5,2.5,30,0.9\r\n"))
	f.Add([]byte("alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts\n22.5,0,45,90,1e5\n"))
	f.Add([]byte("alice;bob;counts\nH;V;0,5\n"))
	f.Fuzz(func(t *testing.T, text []byte) {
		counts, err := ReadCounts(strings.NewReader(string(text)))
		if err != nil {
			var bad *CSVError
			if !errors.As(err, &bad) || bad.Problem == "" || bad.Line < 0 || bad.Column < 0 || len(err.Error()) > 1000 {
				t.Fatalf("%#v", err)
			}
			return
		}
		for _, s := range counts.Settings {
			if !(s.Counts >= 0 && s.Accidentals >= 0 && s.Exposure > 0) || math.Abs(s.Alice.stokes()[0]*s.Bob.stokes()[0]-1) > 1e-12 {
				t.Fatalf("%+v", s)
			}
		}
		fit, err := counts.MaximumLikelihood()
		if err != nil {
			return
		}
		checkPhysical(t, fit.Rho)
		if !(fit.Optimality >= 0) || math.IsNaN(fit.LogLikelihood) || !(fit.Total > 0) || !(fit.Chi2 >= 0) {
			t.Fatalf("%+v", fit)
		}
	})
}
