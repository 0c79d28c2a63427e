package scenarios

import (
	"bytes"
	"errors"
	"strings"

	"pairspan/sources"
)

const stateMended = "state-mended" // the rule of the warning

// takeOutAccidentals tells whether the state could have been measured with
// the accidentals that are said to be in it. The scenario keeps the state as
// given.
func (r *reader) takeOutAccidentals() {
	src := &r.s.Source
	if !Stated(src.MeasuredCAR) {
		return
	}
	if _, mending := src.State.WithoutAccidentals(src.MeasuredCAR); mending.Any() {
		r.s.Repairs = append(r.s.Repairs, Repair{
			stateMended, "source.state.measured_car",
			"the state with its accidentals taken out was not physical: " + mending.Sentence(),
		})
	}
}

// laboratoryFiles are the entries that name a file of the laboratory, with its
// form and what reads it into the scenario.
var laboratoryFiles = []struct {
	entry string
	form  sources.LaboratoryForm
	read  func(r *reader, entry string, data []byte) error
}{
	{"source.state.density_matrix", sources.MatrixFile, (*reader).matrix},
	{"source.state.counts", sources.TomographyFile, (*reader).counts},
	{powerScanEntry + ".file", sources.ScanFile, (*reader).powerScan},
	{delaysEntry + ".file", sources.DelaysFile, (*reader).delays},
	{spectralEntry + ".file", sources.SpectralFile, (*reader).spectralMap},
}

// readLaboratory reads the laboratory files that the scenario names.
func (r *reader) readLaboratory() {
	for _, f := range laboratoryFiles {
		name, data := r.file(f.entry)
		if data == nil {
			continue
		}
		if form, err := sources.Recognise(data); err == nil && form != f.form {
			r.otherForm(f.entry, form)
			continue
		}
		if err := f.read(r, f.entry, data); err != nil {
			r.laboratory(f.entry, name, err)
		}
	}
}

// otherForm reports a file that belongs under another entry.
func (r *reader) otherForm(entry string, form sources.LaboratoryForm) {
	for _, f := range laboratoryFiles {
		if n := r.stated[entry]; f.form == form {
			r.fail(entry, n.at, show(n.text)+" is "+form.Name(), "name it under "+f.entry)
		}
	}
}

// file returns the text of the file that an entry names; nil where there is
// none, or where it could not be read, which is an error.
func (r *reader) file(entry string) (name string, text []byte) {
	n := r.stated[entry]
	if n == nil || n.kind != scalar || strings.TrimSpace(n.text) == "" {
		return "", nil
	}
	name, problem, hint := inside(n.text)
	if problem != "" {
		r.fail(entry, n.at, problem, hint)
		return "", nil
	}
	data, trouble := r.files.get(name)
	if trouble != nil {
		r.fail(entry, n.at, show(n.text)+": "+trouble.problem, trouble.hint)
		return "", nil
	}
	plain, trouble := plainText(data)
	if trouble != nil {
		r.errs = append(r.errs, Error{r.files.shown(name), trouble.at.line, trouble.at.column, entry, trouble.problem, trouble.hint})
		return "", nil
	}
	r.s.Inputs = append(r.s.Inputs, Input{n.text, string(data), entry})
	return name, plain
}

// matrix stores the state of a density matrix, and how it was mended.
func (r *reader) matrix(entry string, data []byte) error {
	raw, err := sources.ReadDensityMatrix(bytes.NewReader(data))
	if err != nil {
		return err
	}
	rho, mending, err := sources.NewDensityMatrix(raw)
	if err != nil {
		return err
	}
	r.s.Source.State = sources.FromDensityMatrix(rho)
	if mending.Any() {
		r.s.Repairs = append(r.s.Repairs, Repair{stateMended, entry, "the density matrix was not one of a state: " + mending.Sentence()})
	}
	return nil
}

const stateFitsBadly = "state-fits-badly" // the rule of the warning

// counts stores the likeliest state of a tomography's counts.
func (r *reader) counts(entry string, data []byte) error {
	c, err := sources.ReadCounts(bytes.NewReader(data))
	if err != nil {
		return err
	}
	fit, err := c.MaximumLikelihood()
	if err != nil {
		return err
	}
	r.s.Source.State = sources.FromDensityMatrix(fit.Rho)
	r.s.Source.Counts = &c
	if warning := fit.Warning(); warning != "" {
		r.s.Repairs = append(r.s.Repairs, Repair{stateFitsBadly, entry, warning})
	}
	return nil
}

// laboratory reports an error in a laboratory file at its place there.
func (r *reader) laboratory(entry, name string, err error) {
	for _, e := range LaboratoryErrors(r.files.shown(name), err) {
		e.Entry = entry
		r.errs = append(r.errs, e)
	}
}

// LaboratoryErrors returns what is wrong with a laboratory file of that name as
// reading a scenario would.
func LaboratoryErrors(name string, err error) Errors {
	e := Error{File: name, Line: 1, Column: 1}
	e.Problem, e.Hint = cutHint(err)
	var at *sources.CSVError
	if errors.As(err, &at) {
		e.Line, e.Column = max(1, at.Line), max(1, at.Column)
		e.Problem, e.Hint = at.Problem, at.Hint
	}
	return Errors{e}
}

// cutHint splits what to do next from an error that ends with it.
func cutHint(err error) (problem, hint string) {
	text := err.Error()
	for _, lead := range []string{": check ", "; check ", "; give "} {
		if i := strings.Index(text, lead); i > 0 {
			return text[:i], text[i+2:]
		}
	}
	return text, ""
}
