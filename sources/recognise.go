package sources

import (
	"bytes"
	"encoding/csv"
	"errors"
	"io"
	"slices"
	"strings"
)

// LaboratoryForm is a form of laboratory file.
type LaboratoryForm int

// The forms, in the order in which they are listed to people.
const (
	MatrixFile     LaboratoryForm = iota // see ReadDensityMatrix
	TomographyFile                       // see ReadCounts
	ScanFile                             // see ReadPowerScan
	DelaysFile                           // see ReadDelayHistogram
	SpectralFile                         // see ReadSpectralMap
)

// laboratoryForms are the headers of each form.
var laboratoryForms = [...][]csvForm{
	MatrixFile:     {matrixForm},
	TomographyFile: countsForms,
	ScanFile:       {scanForm},
	DelaysFile:     {delayForm},
	SpectralFile:   spectralForms,
}

// LaboratoryMaxBytes is the size of the largest laboratory file, a spectral map.
const LaboratoryMaxBytes = spectralMostSize

// Name says what a file of the form holds, with its article.
func (f LaboratoryForm) Name() string { return laboratoryForms[f][0].name }

// Recognise returns which form a laboratory file has, by its header: the one
// that has most of the header's columns, at least half of its own and two. What
// is wrong with such a file beyond that, its reader says. A header of no form is
// a *CSVError that lists all.
func Recognise(text []byte) (LaboratoryForm, error) {
	plain, err := readText(bytes.NewReader(text), csvForm{name: laboratoryForms[SpectralFile][0].name, maxRows: spectralMostRows, maxSize: LaboratoryMaxBytes})
	if err != nil {
		return 0, err
	}
	reader := csv.NewReader(bytes.NewReader(plain))
	reader.FieldsPerRecord = -1
	reader.TrimLeadingSpace = true
	header, err := readRow(reader)
	if errors.Is(err, io.EOF) {
		return 0, &CSVError{Problem: "the file is empty", Hint: allHeaders()}
	}
	if err != nil {
		return 0, err
	}
	form, known := likeliestForm(header)
	switch {
	case known:
		return form, nil
	case isNumber(header[0].text):
		return 0, header[0].fail("stands where the header belongs", allHeaders())
	}
	if err := wrongSeparator(header); err != nil {
		return 0, err
	}
	return 0, &CSVError{Line: header[0].line, Problem: "the header is not that of a laboratory file", Hint: allHeaders()}
}

// likeliestForm returns the form that a header is or is meant to be, and
// whether it is near enough to any.
func likeliestForm(header []csvCell) (likeliest LaboratoryForm, known bool) {
	leastMissing, mostFound := 0, 0
	for form, headers := range laboratoryForms {
		for _, h := range headers {
			found, missing := 0, 0
			for _, column := range h.columns {
				if slices.ContainsFunc(header, func(c csvCell) bool { return strings.EqualFold(c.text, column) }) {
					found++
				} else {
					missing++
				}
			}
			if found < 2 || found < missing {
				continue
			}
			if found > mostFound || found == mostFound && missing < leastMissing {
				likeliest, known, mostFound, leastMissing = LaboratoryForm(form), true, found, missing
			}
		}
	}
	return likeliest, known
}

// allHeaders lists the headers of all forms, without what may be left out.
func allHeaders() string {
	var forms []string
	for _, headers := range laboratoryForms {
		var either []string
		for _, h := range headers {
			either = append(either, strings.Join(h.columns, ","))
		}
		forms = append(forms, headers[0].name+": "+strings.Join(either, " or "))
	}
	return "the first row is that of " + strings.Join(forms, "; of ")
}
