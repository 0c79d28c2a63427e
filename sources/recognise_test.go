package sources

import (
	"errors"
	"strings"
	"testing"
)

// TestRecognise: by the header alone, columns in any order, and near misses go
// to the reader that can say what is wrong.
func TestRecognise(t *testing.T) {
	for header, want := range map[string]LaboratoryForm{
		"row,col,re,im":              MatrixFile,
		"im,re,col,row":              MatrixFile,
		"\ufeffRow,Col,Re,Im":        MatrixFile,
		"row,col,re":                 MatrixFile,
		"alice,bob,counts":           TomographyFile,
		"alice,bob,n":                TomographyFile,
		"seconds, counts ,bob,alice": TomographyFile,
		"alice_hwp_deg,alice_qwp_deg,bob_hwp_deg,bob_qwp_deg,counts":         TomographyFile,
		"power_mw,singles_alice_hz,singles_bob_hz,coincidences_hz,window_ps": ScanFile,
		"delay_ps,counts":                     DelaysFile,
		"alice_nm,bob_nm,share,row,col,re,im": SpectralFile,
		"alice_nm,bob_nm,share,tangle":        SpectralFile,
		"alice_nm,bob_nm,share,row,col,re":    SpectralFile,
	} {
		got, err := Recognise([]byte(header + "\n1,2,3\n"))
		if err != nil || got != want {
			t.Errorf("%s: %v, %v", header, got, err)
		}
	}
}

// TestRecogniseListsForms: a header of no form is told all five.
func TestRecogniseListsForms(t *testing.T) {
	for text, problem := range map[string]string{
		"":                         "empty",
		"x,y,z\n":                  "not that of a laboratory file",
		"counts\n":                 "not that of a laboratory file",
		"0,0,0.5,0\n":              "stands where the header belongs",
		"title: a\nsource:\n b\n":  "not that of a laboratory file",
		"time_ps,counts,channel\n": "not that of a laboratory file",
	} {
		_, err := Recognise([]byte(text))
		var at *CSVError
		if !errors.As(err, &at) || !strings.Contains(at.Problem, problem) {
			t.Errorf("%q: %v", text, err)
			continue
		}
		for _, form := range laboratoryForms {
			for _, h := range form {
				if !strings.Contains(at.Hint, strings.Join(h.columns, ",")) {
					t.Errorf("%q: the hint lacks %v: %s", text, h.columns, at.Hint)
				}
			}
		}
	}
	for text, problem := range map[string]string{
		"delay_ps;counts\n": "semicolons",
		"\x00\x01":          "not plain text",
		"\"a\" b\n":         "quotation mark",
	} {
		if _, err := Recognise([]byte(text)); err == nil || !strings.Contains(err.Error(), problem) {
			t.Errorf("%q: %v", text, err)
		}
	}
}

// TestRecogniseAgreesWithTheReaders: what is recognised is what a reader reads.
func TestRecogniseAgreesWithTheReaders(t *testing.T) {
	for form, headers := range laboratoryForms {
		for _, h := range headers {
			got, err := Recognise([]byte(strings.Join(h.all(), ",") + "\n"))
			if err != nil || got != LaboratoryForm(form) {
				t.Errorf("%v: %v, %v", h.all(), got, err)
			}
		}
	}
}
