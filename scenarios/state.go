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

const matrixEntry = "source.state.density_matrix"

// readMatrix reads the density matrix, where the scenario names one.
func (r *reader) readMatrix() {
	n := r.stated[matrixEntry]
	if n == nil || n.kind != scalar || strings.TrimSpace(n.text) == "" {
		return
	}
	name, problem, hint := inside(n.text)
	if problem != "" {
		r.fail(matrixEntry, n.at, problem, hint)
		return
	}
	data, trouble := r.files.get(name)
	if trouble != nil {
		r.fail(matrixEntry, n.at, show(n.text)+": "+trouble.problem, trouble.hint)
		return
	}
	plain, trouble := plainText(data)
	if trouble != nil {
		r.errs = append(r.errs, Error{r.files.shown(name), trouble.at.line, trouble.at.column, matrixEntry, trouble.problem, trouble.hint})
		return
	}
	r.s.Inputs = append(r.s.Inputs, Input{n.text, string(data)})
	if err := r.matrix(plain); err != nil {
		r.laboratory(name, err)
	}
}

// matrix stores the state of a density matrix, and how it was mended.
func (r *reader) matrix(data []byte) error {
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
		r.s.Repairs = append(r.s.Repairs, Repair{stateMended, matrixEntry, "the density matrix was not one of a state: " + mending.Sentence()})
	}
	return nil
}

// laboratory reports an error in a laboratory file at its place there.
func (r *reader) laboratory(name string, err error) {
	e := Error{File: r.files.shown(name), Line: 1, Column: 1, Entry: matrixEntry}
	e.Problem, e.Hint = cutHint(err)
	var at *sources.CSVError
	if errors.As(err, &at) {
		e.Line, e.Column = max(1, at.Line), max(1, at.Column)
		e.Problem, e.Hint = at.Problem, at.Hint
	}
	r.errs = append(r.errs, e)
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
