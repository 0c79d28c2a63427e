package source

import (
	"bytes"
	"fmt"
	"math"

	"pairspan/sources"
)

// tomography says what the likeliest state of a tomography's counts is.
func (t *task) tomography(text []byte) error {
	counts, err := sources.ReadCounts(bytes.NewReader(text))
	if err != nil {
		return t.wrong(err)
	}
	fit, err := counts.MaximumLikelihood()
	if err != nil {
		return t.wrong(err)
	}
	if err := t.fitted(counts, fit); err != nil {
		return err
	}
	t.stateInScenario("counts")
	if w := fit.Warning(); w != "" {
		t.warn("state-fits-badly", w)
	}
	return t.carryState(fit.Rho, nil)
}

// fitted fills in state and fit, with error bars where they can be had.
func (t *task) fitted(counts sources.Counts, fit sources.Fit) error {
	draws := sources.BootstrapDraws
	deviations, err := counts.Bootstrap(t.ctx, fit, draws, sources.BootstrapSeed, figuresOf, t.told("error bars", draws))
	if t.ctx.Err() != nil {
		return t.ctx.Err()
	}
	if err != nil { // too few counts to repeat them
		t.warn("no-error-bars", "There are no error bars: "+err.Error()+".")
		deviations, draws = nil, 0
	}
	t.State = stateOf(fit.Rho, deviations)
	t.Sentence = t.State.sentence()
	t.Fit = fitOf(counts, fit, draws)
	return nil
}

func fitOf(counts sources.Counts, fit sources.Fit, draws int) *Fit {
	f := &Fit{
		LogLikelihood: fit.LogLikelihood, Chi2: fit.Chi2, DegreesOfFreedom: fit.DegreesOfFreedom,
		Chi2PerDof: number(fit.Chi2PerDof), PValue: number(fit.PValue), Optimality: fit.Optimality, Iterations: fit.Iterations,
		PairsPerExposure: fit.Total, BootstrapDraws: draws, BootstrapSeed: sources.BootstrapSeed,
	}
	for i, s := range counts.Settings {
		mu := fit.Expected[i]
		f.Settings = append(f.Settings, Setting{
			Alice: s.Names[0], Bob: s.Names[1], Counts: s.Counts, Accidentals: s.Accidentals, Exposure: s.Exposure,
			Expected: mu, Residual: number((s.Counts - mu) / math.Sqrt(mu)),
		})
	}
	f.Sentence = f.sentence(counts.Total())
	return f
}

// sentence says how good the fit is.
func (f *Fit) sentence(counts float64) string {
	text := fmt.Sprintf("Likeliest state of %.0f counts in %d settings", counts, len(f.Settings))
	if f.Chi2PerDof == nil {
		text += "; 16 settings give any counts a fit, so nothing tells whether they agree with a state"
	} else {
		text += fmt.Sprintf(": chi-squared %s per degree of freedom, which chance exceeds in %s of cases", three(*f.Chi2PerDof), perCent(*f.PValue))
	}
	text += fmt.Sprintf("; no other state adds more than %.1g to the log-likelihood.", f.Optimality)
	if f.BootstrapDraws > 0 {
		text += fmt.Sprintf(" Error bars: one standard deviation in %d simulated repetitions (seed %d).", f.BootstrapDraws, f.BootstrapSeed)
	}
	return text
}
