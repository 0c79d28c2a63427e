package source

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"pairspan/scenarios"
	"pairspan/scenarios/plan"
	"pairspan/sources"
)

// Request asks what a source is, and what it can carry.
type Request struct {
	File    string // a laboratory file, or a scenario: .yaml or .yml
	On      string // the scenario of the link; "" for no link, or for a scenario's own
	Version string // of the program
	Options Options

	// Progress, unless nil, is told how much of a task is done; it may be called
	// by several at once.
	Progress func(task string, done, total int)
}

// Options is what a laboratory file does not tell about itself.
type Options struct {
	Order              int         // of a power scan: 1 or 2; 0 where it is not stated
	LinearNoiseHzPerMW [2]*float64 // of a power scan, of each arm; nil where it is not known
	DetectorEfficiency [2]*float64 // of the detectors that counted a power scan; nil where it is not known
	WindowShare        float64     // of a power scan: share of the pairs in the window; 0 where it is not known
	WindowPs           float64     // of a delay histogram: full width; 0 for twice the peak's width
}

// task is a request under way.
type task struct {
	Request
	ctx  context.Context
	link *scenarios.Scenario // nil without one
	*Result
}

// Account says what the source of a file is. The error is scenarios.Errors
// where a file is wrong, the context's where that ended first, and else says
// what is wrong with the options.
func Account(ctx context.Context, q Request) (*Result, error) {
	t := &task{Request: q, ctx: ctx, Result: blank(q)}
	if isScenario(q.File) {
		if err := t.scenario(); err != nil {
			return nil, err
		}
		return t.Result, nil
	}
	text, err := scenarios.ReadFile(q.File, sources.LaboratoryMaxBytes)
	if err != nil {
		return nil, err
	}
	form, err := sources.Recognise(text)
	if err != nil {
		return nil, scenarios.LaboratoryErrors(q.File, err)
	}
	if err := q.Options.fit(form); err != nil {
		return nil, err
	}
	if q.On != "" {
		if t.link, err = scenarios.Load(q.On); err != nil {
			return nil, err
		}
	}
	t.add(scenarios.Input{Name: q.File, Text: string(text)})
	if t.link != nil {
		t.add(t.link.Inputs...)
	}
	t.Form = laboratory[form].form
	if err := laboratory[form].say(t, text); err != nil {
		return nil, err
	}
	return t.Result, nil
}

// isScenario reports whether a file is a scenario by its name.
func isScenario(name string) bool {
	return slices.Contains([]string{".yaml", ".yml"}, strings.ToLower(filepath.Ext(name)))
}

// laboratory is how each form of laboratory file is called, and what fills in
// what it says.
var laboratory = [...]struct {
	form Form
	say  func(*task, []byte) error
}{
	sources.MatrixFile:     {FormDensityMatrix, (*task).matrix},
	sources.TomographyFile: {FormTomography, (*task).tomography},
	sources.ScanFile:       {FormPowerScan, (*task).scan},
	sources.DelaysFile:     {FormDelays, (*task).delays},
	sources.SpectralFile:   {FormSpectralMap, (*task).spectralMap},
}

// blank is a result in which nothing is said yet.
func blank(q Request) *Result {
	return &Result{
		SourceFormat: Format,
		Program:      plan.Program{Name: "pairspan", Version: q.Version},
		Title:        filepath.Base(q.File),
		Form:         FormScenario,
		Inputs:       []plan.Input{}, Warnings: []Warning{}, References: references,
		Cautions: plan.Cautions(),
	}
}

// add lists files that were read.
func (r *Result) add(inputs ...scenarios.Input) {
	for _, in := range inputs {
		sum := sha256.Sum256([]byte(in.Text))
		r.Inputs = append(r.Inputs, plan.Input{Name: in.Name, SHA256: hex.EncodeToString(sum[:]), Text: in.Text})
	}
}

func (r *Result) warn(rule string, sentences ...string) {
	for _, s := range sentences {
		r.Warnings = append(r.Warnings, Warning{Rule: rule, Sentence: s})
	}
}

// wrong is an error in the request's own file.
func (t *task) wrong(err error) error { return scenarios.LaboratoryErrors(t.File, err) }

// told passes progress on.
func (t *task) told(what string, total int) func(done int) {
	if t.Progress == nil {
		return nil
	}
	return func(done int) { t.Progress(what, done, total) }
}

// fit refuses options of another form of file, and misses those of this one.
func (o Options) fit(form sources.LaboratoryForm) error {
	for _, x := range []struct {
		flag   string
		given  bool
		belong sources.LaboratoryForm
	}{
		{"--order", o.Order != 0, sources.ScanFile},
		{"--raman-alice", o.LinearNoiseHzPerMW[0] != nil, sources.ScanFile},
		{"--raman-bob", o.LinearNoiseHzPerMW[1] != nil, sources.ScanFile},
		{"--efficiency-alice", o.DetectorEfficiency[0] != nil, sources.ScanFile},
		{"--efficiency-bob", o.DetectorEfficiency[1] != nil, sources.ScanFile},
		{"--window-share", o.WindowShare != 0, sources.ScanFile},
		{"--window-ps", o.WindowPs != 0, sources.DelaysFile},
	} {
		if x.given && x.belong != form {
			return fmt.Errorf("%s goes with %s, and the file is %s", x.flag, x.belong.Name(), form.Name())
		}
	}
	if form == sources.ScanFile && o.Order == 0 {
		return fmt.Errorf("%s needs --order, the power of the pump with which pairs grow: 1 for down-conversion, 2 for four-wave mixing", form.Name())
	}
	return nil
}

// matrix says what the state of a density matrix is.
func (t *task) matrix(text []byte) error {
	raw, err := sources.ReadDensityMatrix(bytes.NewReader(text))
	if err != nil {
		return t.wrong(err)
	}
	rho, mending, err := sources.NewDensityMatrix(raw)
	if err != nil {
		return t.wrong(err)
	}
	if mending.Any() {
		t.warn("state-mended", "The density matrix was not one of a state: "+mending.Sentence()+".")
	}
	t.State = stateOf(rho, nil)
	t.Sentence = t.State.sentence()
	t.stateInScenario("density_matrix")
	return t.carryState(rho, nil)
}
