package plan

import (
	"context"
	"math"

	"pairspan/sources"
)

const countsEntry = "source.state.counts"

// repeat finds what the counting errors of a tomography leave open of the
// state, where the scenario asks: the states that repetitions of it would be
// fitted with, as far as a key feels them, by their two errors. The first is the
// state as fitted, and the others scatter about it: what the fit is off by on the
// average is taken out. Counts may be too few to be repeated; then unrepeated
// says so, and the state stays as fitted.
//
// Accidentals that are said to be in the counts are left in these states too:
// the scenario takes them out of each.
func (a *asker) repeat(ctx context.Context) error {
	counts := a.s.Source.Counts
	switch {
	case !a.s.TomographyRepeated:
		return nil
	case counts == nil:
		a.unrepeated = "there are no source.state.counts"
		return nil
	}
	fit, err := counts.MaximumLikelihood()
	if err != nil {
		a.unrepeated = err.Error()
		return nil
	}
	states, err := counts.Repetitions(ctx, fit, sources.BootstrapDraws, uint64(a.s.Seed), nil)
	if ctx.Err() != nil {
		return ctx.Err()
	}
	if err != nil {
		a.unrepeated = err.Error()
		return nil
	}
	a.repeats = centred(visibilities(fit.Rho), states)
	return nil
}

// repeatsTomography reports whether the draws are to hold counting errors of a
// tomography.
func (a *asker) repeatsTomography() bool {
	return a.s.TomographyRepeated && a.s.Source.Counts != nil
}

// tomographyNotRepeated: draws that lack what they were asked for.
func tomographyNotRepeated(w *watch) (found []doubt) {
	if w.unrepeated != "" {
		found = append(found, doubt{"uncertainty.tomography", "the draws take the state as it stands: " + w.unrepeated, nil})
	}
	return found
}

// visibilities are those of the two bases of the key, analysers aligned.
func visibilities(rho sources.DensityMatrix) [2]float64 {
	key, check := rho.AlignedErrors()
	return [2]float64{1 - 2*key, 1 - 2*check}
}

// centred returns the state as fitted, then the repetitions moved so that their
// mean is it, within 0 and 1.
func centred(fitted [2]float64, repetitions []sources.DensityMatrix) []sources.State {
	shown := make([][2]float64, len(repetitions))
	off := fitted
	for k, rho := range repetitions {
		shown[k] = visibilities(rho)
		for b, v := range shown[k] {
			off[b] -= v / float64(len(repetitions))
		}
	}
	states := []sources.State{sources.FromVisibilities(fitted[0], fitted[1])}
	for _, v := range shown {
		for b := range v {
			v[b] = max(0, min(1, v[b]+off[b]))
		}
		states = append(states, sources.FromVisibilities(v[0], v[1]))
	}
	return states
}

// inputs are those of the scenario, and the counts of its tomography.
func (a *asker) inputs() []input {
	all := inputs(a.s)
	if n := len(a.repeats); n > 1 {
		all = append(all, input{entry: countsEntry, value: 0, repetitions: n - 1})
	}
	return all
}

// repeatedSD returns the standard deviation of each reading of the first day
// over the repetitions of a tomography.
func (d *firstDay) repeatedSD() (sd sheet) {
	if len(d.repeats) < 2 {
		return sd
	}
	columns := make([][]float64, len(sd))
	s := d.s.Clone()
	for _, state := range d.repeats[1:] {
		s.Source.State = state
		l := s.Link(d.km, sources.Nominal)
		for r, x := range sheetOf(&l, d.setting) {
			columns[r] = append(columns[r], x)
		}
	}
	for r, column := range columns {
		sd[r] = math.Sqrt(variance(column))
	}
	return sd
}

// repeatedVariance is the variance of the usable rate over the repetitions,
// all else as stated.
func (d *draws) repeatedVariance(w *drawer, worst []held) float64 {
	return variance(d.repeatedRates(w, worst)[1:])
}

// ofRepetitions puts the usable rate with a repetition's state, all else as
// stated, in the place of its number: what the draws' rates can follow.
func (d *draws) ofRepetitions(drawn []float64) []float64 {
	rates := d.repeatedRates(d.drawer(), d.hold(d.s.DistanceKm(), judged))
	out := make([]float64, len(drawn))
	for i, k := range drawn {
		out[i] = rates[int(k)]
	}
	return out
}

// repeatedRates are the usable rates with the state as fitted and with that of
// each repetition.
func (d *draws) repeatedRates(w *drawer, worst []held) []float64 {
	rates := make([]float64, len(d.repeats))
	for k := range rates {
		w.repetition = float64(k)
		w.settle()
		rates[k] = w.most(worst)
	}
	w.restore()
	return rates
}

// variance of a sample; 0 of a single value.
func variance(x []float64) (v float64) {
	m := mean(x)
	for _, y := range x {
		v += (y - m) * (y - m) / float64(max(1, len(x)-1))
	}
	return v
}
