package sources

import (
	"errors"
	"fmt"
	"io"
	"strings"
	"testing"
	"testing/iotest"
)

// written returns rho as a file, all sixteen entries.
func written(rho [4][4]complex128) string {
	text := "row,col,re,im\n"
	for i := range rho {
		for j, x := range rho[i] {
			text += fmt.Sprintf("%d,%d,%g,%g\n", i, j, real(x), imag(x))
		}
	}
	return text
}

func TestReadDensityMatrix(t *testing.T) {
	want := [4][4]complex128(normalDrawer(60).state(4))
	full := written(want)
	for name, text := range map[string]string{
		"all entries":      full,
		"without last end": strings.TrimSuffix(full, "\n"),
		"CRLF":             strings.ReplaceAll(full, "\n", "\r\n"),
		"CR":               strings.ReplaceAll(full, "\n", "\r"),
		"byte-order mark":  "\ufeff" + full,
		"mark and CRLF":    "\ufeff" + strings.ReplaceAll(full, "\n", "\r\n"),
		"blanks":           strings.ReplaceAll(full, ",", " , "),
		"blank lines":      strings.ReplaceAll(full, "\n", "\n\n  \n"),
		"quotation marks":  strings.Replace(full, "row,col", `"row","col"`, 1),
		"columns the other way": func() string {
			text := "im,re,col,row\n"
			for i := range want {
				for j, x := range want[i] {
					text += fmt.Sprintf("%g,%g,%d,%d\n", imag(x), real(x), j, i)
				}
			}
			return text
		}(),
		"upper triangle": func() string {
			text := "row,col,re,im\n"
			for i := range want {
				for j := i; j < 4; j++ {
					text += fmt.Sprintf("%d,%d,%g,%g\n", i, j, real(want[i][j]), imag(want[i][j]))
				}
			}
			return text
		}(),
	} {
		got, err := ReadDensityMatrix(strings.NewReader(text))
		if err != nil {
			t.Errorf("%s: %v", name, err)
		} else if got != want {
			t.Errorf("%s: got %v, want %v", name, got, want)
		}
	}
}

func TestReadDensityMatrixErrors(t *testing.T) {
	good := written(Werner(0.5))
	const header = "a density matrix has the header row,col,re,im, in any order"
	for _, row := range []struct{ name, text, want string }{
		{"empty", "", "the file is empty; " + header},
		{"blank", "\n \n", "the file is empty; " + header},
		{"missing column", "row,col,re\n0,0,1\n", "line 1: the column im is missing; " + header},
		{"other file", "alice,bob,counts\nH,H,34749\n", "line 1, column 1: alice is not a known column; " + header},
		{"unknown column", "row,col,re,imag\n", "line 1, column 12: imag is not a known column; " + header},
		{"one column more", "row,col,re,im,sd\n", "line 1, column 15: sd is not a known column; " + header},
		{"column twice", "row,col,re,re\n", "line 1, column 12: re stands twice in the header; remove one of the two columns"},
		{"no header", "0,0,0.5,0\n", "line 1, column 1: 0 stands where the header belongs; " + header},
		{"semicolons", "row;col;re;im\n0;0;0,5;0\n", "line 1: columns are separated by semicolons; separate them by commas, and write decimal points"},
		{"tabs", "row\tcol\tre\tim\n", "line 1: columns are separated by tabs; separate them by commas, and write decimal points"},
		{"semicolons below", "row,col,re,im\n0;0;0.5;0\n", "line 2: the row has 1 values, and the header has 4; separate them by commas, not semicolons, and write decimal points"},
		{"decimal commas", "row,col,re,im\n0,0,0,5,0\n", "line 2: the row has 5 values, and the header has 4; write decimal points, not commas, and no comma at the end"},
		{"quoted decimal comma", "row,col,re,im\n0,0,\"0,5\",0\n", "line 2, column 5: 0,5 is not a number; write a decimal point: 0.5"},
		{"short row", "row,col,re,im\n0,0,0.5,0\n\n0,1,0\n", "line 4: the row has 3 values, and the header has 4; give every value; write 0 where it is zero"},
		{"empty value", "row,col,re,im\n0,0,0.5,\n", "line 2, column 9: an empty value is not a number; give every value; write 0 where it is zero"},
		{"NaN", "row,col,re,im\n0,0,NaN,0\n", "line 2, column 5: NaN is not a finite number; give the measured value"},
		{"infinite", "row,col,re,im\n0,0,0.5,-inf\n", "line 2, column 9: -inf is not a finite number; give the measured value"},
		{"too large", "row,col,re,im\n0,0,1e999,0\n", "line 2, column 5: 1e999 is too large; check the exponent"},
		{"hexadecimal", "row,col,re,im\n0,0,0x1p-1,0\n", "line 2, column 5: 0x1p-1 is not a number; write it like -0.0123 or 1.2e-3"},
		{"digit separator", "row,col,re,im\n0,0,1_0,0\n", "line 2, column 5: 1_0 is not a number; write it like -0.0123 or 1.2e-3"},
		{"semicolon inside", "row,col,re,im\n0,0,0.5;0,0\n", "line 2, column 5: 0.5;0 is not a number; separate columns by commas, not semicolons"},
		{"quotation mark in the header", "row,col,re,\"im\n", "line 1, column 16: a quotation mark stands where none belongs; write names and numbers without quotation marks"},
		{"typographer's minus", "row,col,re,im\n0,0,\u22120.5,0\n", "line 2, column 5: \u22120.5 is not a number; write the minus sign as -"},
		{"complex number", "row,col,re,im\n0,0,0.5+0.1i,0\n", "line 2, column 5: 0.5+0.1i is not a number; real and imaginary part stand in columns of their own"},
		{"row 4", "row,col,re,im\n4,0,0.5,0\n", "line 2, column 1: 4 is not a whole number from 0 to 3; rows and columns count from 0 in the order HH, HV, VH, VV"},
		{"row by name", "row,col,re,im\n0,HV,0.5,0\n", "line 2, column 3: HV is not a whole number from 0 to 3; rows and columns count from 0 in the order HH, HV, VH, VV"},
		{"negative row", "row,col,re,im\n-1,0,0.5,0\n", "line 2, column 1: -1 is not a whole number from 0 to 3; rows and columns count from 0 in the order HH, HV, VH, VV"},
		{"fractional row", "row,col,re,im\n1.5,0,0.5,0\n", "line 2, column 1: 1.5 is not a whole number from 0 to 3; rows and columns count from 0 in the order HH, HV, VH, VV"},
		{"twice", "row,col,re,im\n0,0,0.5,0\n1,1,0.5,0\n0,0,0.5,0\n", "line 4: row 0, column 0 was given already on line 2; remove one of the two"},
		{"too many rows", good + "0,0,0.5,0\n", "line 18: too many rows: a density matrix has at most 16 below the header; remove the others"},
		{"header only", "row,col,re,im\n", "entries are missing (row,col): 0,0 0,1 0,2 0,3 1,1 1,2 1,3 2,2 2,3 3,3; give all sixteen, or the ten of the upper triangle (col not below row)"},
		{"one missing", strings.Replace(good, "2,1,0,0\n", "", 1), "entries are missing (row,col): 2,1; give all sixteen, or the ten of the upper triangle (col not below row)"},
		{"quotation mark", "row,col,re,im\n0,0,0.5\",0\n", "line 2, column 8: a quotation mark stands where none belongs; write names and numbers without quotation marks"},
		{"open quotation", "row,col,re,im\n0,0,\"0.5,0\n", "line 2, column 12: a quotation mark stands where none belongs; write names and numbers without quotation marks"},
		{"UTF-16", "\xff\xfer\x00o\x00w\x00", "the file is not plain text; save it as CSV in UTF-8"},
		{"null bytes", "row,col\x00", "the file is not plain text; save it as CSV in UTF-8"},
		{"large", strings.Repeat("0", 64<<10+1), "the file is larger than 65536 bytes; a density matrix has at most 16 rows; is this the right file?"},
		{"control characters", "row,col,re,im\n0,0,\x1b[31m,0\n", "line 2, column 5: \ufffd[31m is not a number; write it like -0.0123 or 1.2e-3"},
		{"long value", "row,col,re,im\n0,0," + strings.Repeat("x", 100) + ",0\n", "line 2, column 5: " + strings.Repeat("x", 40) + "... is not a number; write it like -0.0123 or 1.2e-3"},
	} {
		got, err := ReadDensityMatrix(strings.NewReader(row.text))
		var bad *CSVError
		switch {
		case err == nil:
			t.Errorf("%s: no error", row.name)
		case !errors.As(err, &bad):
			t.Errorf("%s: %v does not say where", row.name, err)
		case err.Error() != row.want:
			t.Errorf("%s:\ngot  %s\nwant %s", row.name, err, row.want)
		}
		if got != ([4][4]complex128{}) {
			t.Errorf("%s: half a matrix is returned", row.name)
		}
	}
}

func TestReadDensityMatrixPassesReadErrors(t *testing.T) {
	broken := errors.New("disk gone")
	_, err := ReadDensityMatrix(io.MultiReader(strings.NewReader("row,col"), iotest.ErrReader(broken)))
	if !errors.Is(err, broken) {
		t.Errorf("got %v", err)
	}
}

func TestCSVErrorFields(t *testing.T) {
	_, err := ReadDensityMatrix(strings.NewReader("row,col,re,im\n0,0,0.5,zero\n"))
	var bad *CSVError
	if !errors.As(err, &bad) || *bad != (CSVError{2, 9, "zero", "zero is not a number", "write it like -0.0123 or 1.2e-3"}) {
		t.Errorf("got %#v", bad)
	}
}

// Whatever the file, it is read or refused with a place; what is read is finite
// and, if it is a state at all, a physical one.
func FuzzReadDensityMatrix(f *testing.F) {
	f.Add([]byte(printed2001))
	f.Add([]byte(written(Werner(0.9))))
	f.Add([]byte("\ufeffrow,col,re,im\r\n0,0,0.5,0\r\n"))
	f.Add([]byte("row;col;re;im\n0;0;0,5;0\n"))
	f.Add([]byte("im,re,col,row\n\"0,5\",1e308,3,3\n"))
	f.Fuzz(func(t *testing.T, text []byte) {
		raw, err := ReadDensityMatrix(strings.NewReader(string(text)))
		if err != nil {
			var bad *CSVError
			if !errors.As(err, &bad) || bad.Problem == "" || bad.Line < 0 || bad.Column < 0 || len(err.Error()) > 1000 {
				t.Fatalf("%#v", err)
			}
			return
		}
		again, err := ReadDensityMatrix(strings.NewReader(written(raw)))
		if err != nil || again != raw {
			t.Fatalf("%v is read back as %v, %v", raw, again, err)
		}
		rho, _, err := NewDensityMatrix(raw)
		if err != nil {
			return
		}
		checkPhysical(t, rho)
		if c := rho.Concurrence(); !(c >= 0 && c <= 1) {
			t.Fatalf("concurrence %g of %v", c, rho)
		}
	})
}
